"""A difference of two versions as the contents of a print: every row, what is the same, and what it does to numbers."""

from collections.abc import Iterator

from clinicalc.coefficients.fingerprint import group_fingerprint
from clinicalc.library.difference import Change, Difference
from clinicalc.library.effect import Effect, ExampleEffect, Whose
from clinicalc.library.effect_words import say_grid
from clinicalc.operations.effect_on_ruler import moves_of
from clinicalc.operations.vetting_furniture import NO_AUTHORITY, furnish
from clinicalc.operations.vetting_prints import NamedVersion
from clinicalc.report.contents import EffectPart, Fact, FactList, Prose, Section
from clinicalc.report.effect_figure import Moves, pair_words
from clinicalc.report.phrases import count_words
from clinicalc.report.vetting_sheet import DifferenceRow, ExampleRow, VettingSheet
from clinicalc.report.vetting_tables import lay_difference, lay_examples

_ROWS_IN_A_FIGURE = 16
"""Of more worked examples further figures are drawn, so that each goes on one page."""
_UNWEIGHED = (
    "The standard patients lie on a grid; it shows where the versions part, not how often such patients are met."
)
_NUMBERS = "Figures in per cent. Stated is what the file says; old and new are what each version computes here."


def compose_difference(
    old: NamedVersion, new: NamedVersion, difference: Difference, effect: Effect, practice: str
) -> VettingSheet:
    """Everything in which two versions differ."""
    title = f"{new.title}, {old.version} and {new.version}"
    is_same = old.fingerprint == new.fingerprint
    count = len(difference.changes)
    differing = f"{count_words(count, 'statement')} {'differs' if count == 1 else 'differ'} between the two."
    said = "The two are the same file." if is_same else differing if count else "Every statement is the same."
    return VettingSheet(
        kind="Difference of two versions",
        title=title,
        about=f"Difference of {title}",
        lines=(),
        says=said,
        sections=(
            Section("The two versions", (FactList((_fact("Old", old), _fact("New", new))),)),
            *(() if is_same else _sections(old, new, difference, effect)),
        ),
        furniture=furnish(
            f"{new.id} {old.version} and {new.version}",
            practice,
            model=f"{new.id} {old.version} and {new.version}",
            identity=f"old {group_fingerprint(old.fingerprint, 2)} new {group_fingerprint(new.fingerprint, 2)}",
            caution=NO_AUTHORITY,
        ),
    )


def _fact(name: str, version: NamedVersion) -> Fact:
    digits = group_fingerprint(version.fingerprint)
    named = f"{version.title}, {version.id} {version.version}"
    standing = (version.standing,) if version.standing else ()
    return Fact(name, (named, *standing, f"Fingerprint {digits[:39]}", digits[40:]), strong=True)


def _sections(old: NamedVersion, new: NamedVersion, difference: Difference, effect: Effect) -> Iterator[Section]:
    rows = tuple(map(_row, difference.changes))
    if rows:
        yield Section(f"What changed ({len(rows)})", (lay_difference(rows, old.version, new.version),))
    yield Section("What is the same", (Prose((difference.say_same(),)),), whole=True)
    yield from _effects(effect)
    yield from _examples(effect, *_short_names(old, new))


def _row(change: Change) -> DifferenceRow:
    return DifferenceRow(
        aspect=change.aspect.value.capitalize(),
        what=change.what,
        old=change.old,
        new=change.new,
        place=change.new_path or f"{change.old_path} (old only)",
    )


def _effects(effect: Effect) -> Iterator[Section]:
    for grid in effect.grids:
        heading, *said = (line.strip() for line in say_grid(grid))
        yield Section(heading, (Prose((*said, _UNWEIGHED)),))
    if effect.not_compared:
        yield Section("What only one of the two has", (Prose(effect.not_compared),))


def _short_names(old: NamedVersion, new: NamedVersion) -> tuple[str, str]:
    """Their versions, or where these are the same "old" and "new"."""
    return ("old", "new") if old.version == new.version else (old.version, new.version)


def _examples(effect: Effect, old: str, new: str) -> Iterator[Section]:
    if not effect.examples:
        return
    drawn = moves_of(effect, old, new)
    figures = tuple(
        EffectPart(Moves(drawn.link, drawn.moves[at : at + _ROWS_IN_A_FIGURE], old, new, drawn.caption))
        for at in range(0, len(drawn.moves), _ROWS_IN_A_FIGURE)
    )
    by_patient: dict[str, list[ExampleEffect]] = {}
    for example in effect.examples:
        by_patient.setdefault(example.values, []).append(example)
    table = lay_examples(map(_example, by_patient.values()))
    yield Section("Worked examples of both, by each", (*figures, Prose((_NUMBERS,)), table))


def _example(stated: list[ExampleEffect]) -> ExampleRow:
    """One patient, of whom the versions may state different numbers; what they compute is the same in each."""
    example = stated[0]
    old, new = pair_words(example.old, example.new)
    because = tuple(
        f"No number from the {whose} version: {why}"
        for whose, number, why in (("old", example.old, example.old_because), ("new", example.new, example.new_because))
        if number is None
    )
    says = tuple(f"{100.0 * one.stated:.9g} ({_by(one)})" for one in stated)
    return ExampleRow(example.values, says, old, new, because)


def _by(example: ExampleEffect) -> str:
    return "both" if example.stated_by is Whose.BOTH else example.stated_by.value
