"""`library diff`, `compare-entries`, `export`, `import`: files and libraries set side by side, and carried."""

from pathlib import Path
from typing import TYPE_CHECKING

import click

from clinicalc.cli.library_print import print_difference, print_options
from clinicalc.cli.library_session import library_options, now, open_for_reading, tell
from clinicalc.cli.outcome import ExitStatus
from clinicalc.coefficients.fingerprint import group_fingerprint
from clinicalc.errors import LibraryError, UsageError

if TYPE_CHECKING:
    from clinicalc.assessment.model import Model


@click.command(short_help="What changed between two versions, and what that does to the numbers.")
@click.argument("old", metavar="OLD")
@click.argument("new", metavar="NEW")
@print_options
@library_options
def diff(
    old: str,
    new: str,
    pdf_file: str | None,
    paper: str,
    replace: bool,
    place: str | None,
    as_json: bool,
) -> int:
    """Say what changed between two versions of a model, and what that does to the numbers of standard patients.

    OLD and NEW are coefficient files, or models of the library by id or by the first digits of a fingerprint.
    """
    from clinicalc.library.difference import find_difference
    from clinicalc.library.difference_words import record_difference, say_difference
    from clinicalc.library.effect import find_effect
    from clinicalc.library.effect_words import record_effect, say_effect

    before, after = _open(old, place), _open(new, place)
    found = find_difference(before.content, after.content)
    effect = find_effect(before, after)
    record = {
        "old": _describe(before),
        "new": _describe(after),
        **record_difference(found),
        "effect": record_effect(effect),
    }
    identical = before.fingerprint == after.fingerprint
    lines = [f"old  {_name(before)}", f"new  {_name(after)}", ""]
    lines += ["The two are the same file."] if identical else [*say_difference(found), "", *say_effect(effect)]
    if pdf_file is not None:
        opened = None if _is_file(old) and _is_file(new) else open_for_reading(place)
        print_difference(Path(pdf_file), (before, after), (found, effect), opened, paper, replace=replace)
        lines += ["", f"Printed to {pdf_file}."]
    tell(as_json, record, lines)
    return ExitStatus.ASSESSED


@click.command("compare-entries", short_help="Compare two independent entries of one paper.")
@click.argument("a", metavar="A")
@click.argument("b", metavar="B")
@click.option("--figures-only", is_flag=True, help="Let texts differ: only a figure that differs counts.")
@library_options
def compare_entries(a: str, b: str, figures_only: bool, place: str | None, as_json: bool) -> int:
    """Compare two entries of one paper that two persons typed without seeing each other's.

    Numbers are compared to the last digit, texts but for their spaces. Exit status 3 where anything differs.
    """
    from clinicalc.library import entries
    from clinicalc.library.difference_words import record_entries, say_entries

    mine, yours = _open(a, place), _open(b, place)
    found = entries.compare_entries(mine.content, yours.content)
    record = {"a": _describe(mine), "b": _describe(yours), **record_entries(found)}
    tell(as_json, record, [f"A  {_name(mine)}", f"B  {_name(yours)}", "", *say_entries(found)])
    differs = bool(found.figures) if figures_only else not found.agrees
    return ExitStatus.STOPPED if differs else ExitStatus.ASSESSED


@click.command("export", short_help="Write the whole library into one file.")
@click.option("--out", required=True, metavar="FILE.json", help="The bundle to write.")
@click.option("--replace", is_flag=True, help="Replace a file that is there already.")
@library_options
def export(out: str, replace: bool, place: str | None, as_json: bool) -> int:
    """Write all models and records of the library into one file (64 MB at most), for a machine without the share."""
    from clinicalc.operations.library_carrying import export_opened

    opened = open_for_reading(place)
    bundle = export_opened(opened, Path(out), now(), replace=replace)
    models, records = len(bundle.models), len(bundle.records)
    practice = opened.authority.practice
    tell(
        as_json,
        {"file": out, "library": bundle.library, "practice": practice, "models": models, "records": records},
        (
            f"{_count(models, 'model')} and {_count(records, 'record')} of the library of {practice} written to {out}.",
            "On the other machine: clinicalc library import FILE --library PLACE, and then join it.",
        ),
    )
    return ExitStatus.ASSESSED


@click.command("import", short_help="Put an exported library into a new place, or bring one up to date.")
@click.argument("file", metavar="FILE")
@library_options
def import_(file: str, place: str | None, as_json: bool) -> int:
    """Put everything of a bundle into the library's folder, which is made where there is none.

    Refused, with nothing changed: another library's place, a bundle in which a record is missing or does not count, and
    one that is older than what this machine has seen.
    """
    from clinicalc.operations.library_carrying import bring_in
    from clinicalc.settings import library_place, read_settings

    target = library_place(read_settings().settings.library, place)
    if target is None:
        raise UsageError("it is not said where the library is to be.", do="Name a folder with --library.")
    brought = bring_in(Path(file), target, now(), may_make=place is not None)
    done = brought.carried
    lines = [
        f"{'A new library was made' if done.created else 'The library was brought up to date'} in {target}.",
        f"New: {_count(done.new_models, 'model')} and {_count(done.new_records, 'record')}. "
        f"It now holds {_count(done.models, 'model')} and {_count(done.records, 'record')}.",
    ]
    if not brought.known:
        lines.append(
            f"This machine does not know it yet: clinicalc library join, by the practice key of {done.practice}."
        )
    tell(
        as_json,
        {
            "place": str(target),
            "library": done.library,
            "practice": done.practice,
            "created": done.created,
            "new_models": done.new_models,
            "new_records": done.new_records,
            "models": done.models,
            "records": done.records,
        },
        lines,
    )
    return ExitStatus.ASSESSED


def _open(words: str, place: str | None) -> "Model":
    """The proved model of a file, or of a model of the library where no file has that name."""
    from clinicalc.assessment.proof import load_model, prove_model
    from clinicalc.library.finding import find_state
    from clinicalc.library.installing import read_canonical
    from clinicalc.library.standing import Standing

    if _is_file(words):
        return load_model(Path(words))
    opened = open_for_reading(place)
    state = find_state(opened.models, words, prefer=(Standing.IN_USE,))
    content = opened.source.model(state.fingerprint)
    if not isinstance(content, bytes):
        raise LibraryError("its file cannot be used.", where=f"{state.id} {state.version}", why=content.sentence)
    return prove_model(read_canonical(content, state))


def _is_file(words: str) -> bool:
    path = Path(words)
    return path.exists() or path.suffix == ".json" or len(path.parts) > 1


def _count(number: int, word: str) -> str:
    return f"{number} {word}{'' if number == 1 else 's'}"


def _name(model: "Model") -> str:
    content = model.content
    return f"{content.title}, {content.id} {content.version} ({group_fingerprint(model.fingerprint, 3)}…)"


def _describe(model: "Model") -> dict[str, object]:
    content = model.content
    return {
        "id": content.id,
        "version": content.version,
        "title": content.title,
        "fingerprint": model.fingerprint,
        "file": model.name,
    }
