"""`library install`, `list` and `show`: what the library holds, and where each model stands."""

from collections.abc import Iterator
from pathlib import Path
from typing import TYPE_CHECKING

import click

from clinicalc.cli.library_people import describe_authority
from clinicalc.cli.library_print import choose_print, print_options
from clinicalc.cli.library_session import (
    describe_state,
    describe_written,
    library_options,
    look_at_approver,
    open_for_reading,
    open_for_writing,
    state_after,
    take_approver_key,
    tell,
)
from clinicalc.cli.outcome import ExitStatus
from clinicalc.cli.passphrase import passphrase_option
from clinicalc.coefficients.fingerprint import group_fingerprint
from clinicalc.errors import CoefficientFileRefused, LibraryError, UsageError

if TYPE_CHECKING:
    from clinicalc.library.installing import Candidate
    from clinicalc.library.opening import OpenedLibrary
    from clinicalc.library.standing import ModelState


@click.command(short_help="Put a coefficient file into the library, to be approved.")
@click.argument("file", metavar="FILE")
@click.option("--key", "key_file", metavar="KEYFILE", help="The file of your private key.")
@passphrase_option
@click.option("--came-from", metavar="TEXT", help="Where the file came from; its name, if left out.")
@click.option("--look", "only_look", is_flag=True, help="Only show what would be installed; needs no key.")
@library_options
def install(
    file: str,
    key_file: str | None,
    passphrase_file: str | None,
    came_from: str | None,
    only_look: bool,
    place: str | None,
    as_json: bool,
) -> int:
    """Show a coefficient file with everything that was checked, and put it into the library.

    What is shown is what is installed: the file is read once. It gives no number before it is approved.
    """
    from clinicalc.library.installing import find_installed, look_at, other_versions, settle_installation
    from clinicalc.library.installing import install as put_in
    from clinicalc.library.standing import Standing
    from clinicalc.library.trust_store import read_trust
    from clinicalc.operations.candidate_words import describe_candidate
    from clinicalc.operations.library_words import say_standing

    if key_file is None and not only_look:
        raise UsageError("--key is missing.", do="Give the file of your private key, or only look with --look.")
    candidate = look_at(Path(file), read_trust())
    desk = open_for_writing(place)
    already, others = find_installed(desk, candidate), other_versions(desk, candidate)
    shown = (*describe_candidate(candidate), *_point_to_others(others, candidate.model.fingerprint))
    if already is not None:
        _tell_unwritten(as_json, candidate, shown, already, others)
        return ExitStatus.ASSESSED
    if key_file is None:
        _tell_unwritten(as_json, candidate, shown, None, others)
        return ExitStatus.ASSESSED
    if not as_json:
        tell(False, {}, (*shown, ""))
    origin = came_from or Path(file).name
    settle_installation(desk, candidate, look_at_approver(desk, key_file), origin)
    sealed = put_in(desk, candidate, take_approver_key(desk, key_file, passphrase_file), origin)
    state = state_after(place, candidate.model.fingerprint)
    record = {**describe_written(sealed, state), "already": False, **_describe_candidate(candidate, others)}
    lines = [f"Installed by {sealed.record.name} ({sealed.record.role}). {say_standing(state)}"]
    if state.standing is Standing.WAITING:
        command = f"clinicalc library approve {state.fingerprint[:12]} --key KEYFILE --reason TEXT --review-until DATE"
        lines += ["It gives no number before it is approved:", f"  {command}"]
    tell(as_json, record, lines)
    return ExitStatus.ASSESSED


@click.command("list", short_help="List the models and where each stands.")
@library_options
def list_models(place: str | None, as_json: bool) -> int:
    """List the models of the library: in use, waiting for approval, and out of use with the reason."""
    opened = open_for_reading(place)
    record = {
        "place": str(opened.place),
        "reachable": opened.reachable,
        **describe_authority(opened.authority),
        "models": [describe_state(state) for state in opened.models],
        "faults": [_describe_fault(fault.sentence, fault.stops) for fault in opened.faults],
    }
    tell(as_json, record, _list(opened))
    return ExitStatus.ASSESSED


@click.command(short_help="Show one model: choices, signatures, history.")
@click.argument("model", metavar="ID-or-FINGERPRINT")
@click.option("--full", is_flag=True, help="Everything the file says as well, as `clinicalc inspect` prints it.")
@print_options
@library_options
def show(
    model: str,
    full: bool,
    pdf_file: str | None,
    paper: str,
    replace: bool,
    place: str | None,
    as_json: bool,
) -> int:
    """Show one model of the library: where it stands, its signatures, what was chosen, and its history."""
    from clinicalc.library.finding import find_state
    from clinicalc.library.standing import Standing
    from clinicalc.operations.candidate_words import describe_candidate
    from clinicalc.operations.inspection import inspect_model, write_sections
    from clinicalc.operations.library_history import tell_history
    from clinicalc.operations.library_words import say_standing
    from clinicalc.operations.vetting_prints import write_approval_pdf

    opened = open_for_reading(place)
    state = find_state(opened.models, model, (Standing.IN_USE,))
    candidate, fault = _read(opened, state)
    named = f"{state.title} {state.version}  ({group_fingerprint(state.fingerprint, 3)})".strip()
    shown = (named, fault) if candidate is None else describe_candidate(candidate)
    lines = [*shown, "", say_standing(state), "", "History", *tell_history(state)]
    if pdf_file is not None:
        write_approval_pdf(Path(pdf_file), opened, state, candidate, fault, choose_print(paper), replace=replace)
        lines += ["", f"Its approval record was printed to {pdf_file}."]
    described = {} if candidate is None else _describe_candidate(candidate, ())
    tell(as_json, {**describe_state(state), "file_fault": fault or None, **described}, lines)
    if full and candidate is not None and not as_json:
        click.echo(f"\n{write_sections(inspect_model(candidate.model))}", nl=False)
    return ExitStatus.ASSESSED


def _read(opened: "OpenedLibrary", state: "ModelState") -> "tuple[Candidate | None, str]":
    """The file of a model, or why it cannot be used: its history is shown all the same."""
    from clinicalc.library.installing import read_installed, weigh
    from clinicalc.library.trust_store import read_trust

    try:
        return weigh(read_installed(opened.source, state), read_trust()), ""
    except (LibraryError, CoefficientFileRefused) as fault:
        return None, str(fault)


def _list(opened: "OpenedLibrary") -> Iterator[str]:
    from clinicalc.operations.library_words import Shelf, say_standing, shelf_of

    authority = opened.authority
    yield f"Library of {authority.practice} in {opened.place}"
    yield f"Practice key {group_fingerprint(authority.practice_key)}"
    yield f"Approvers: {', '.join(f'{a.name} ({a.role})' for a in authority.approvers) or 'nobody'}."
    yield from (fault.sentence for fault in opened.faults)
    for shelf in Shelf:
        states = sorted((s for s in opened.models if shelf_of(s) is shelf), key=lambda s: (s.title, s.version))
        if states:
            yield ""
            yield shelf.value
        for state in states:
            named = f"{state.title} {state.version}" if state.title else "A file without a record of its installation"
            yield f"  {named}  ({group_fingerprint(state.fingerprint, 3)})"
            yield f"    {say_standing(state)}"
    if not opened.models:
        yield "It holds no model yet: clinicalc library install FILE --key KEYFILE."


def _point_to_others(others: "tuple[ModelState, ...]", fingerprint: str) -> Iterator[str]:
    for other in others:
        yield (
            f"Version {other.version} of this model is in the library"
            f" ({other.standing.value.replace('_', ' ')}). What is different:"
            f" clinicalc library diff {other.fingerprint[:12]} {fingerprint[:12]}"
        )


def _tell_unwritten(
    as_json: bool,
    candidate: "Candidate",
    shown: tuple[str, ...],
    already: "ModelState | None",
    others: "tuple[ModelState, ...]",
) -> None:
    """What was only looked at, or is there already."""
    from clinicalc.operations.library_words import say_standing

    record = {
        "record": None,
        "model": None if already is None else describe_state(already),
        "already": already is not None,
        **_describe_candidate(candidate, others),
    }
    last = (
        "Nothing was installed: this was only a look."
        if already is None
        else f"This very file is in the library already, and nothing was written. {say_standing(already)}"
    )
    tell(as_json, record, (*shown, "", last))


def _describe_candidate(candidate: "Candidate", others: "tuple[ModelState, ...]") -> dict[str, object]:
    content = candidate.model.content
    return {
        "fingerprint": candidate.model.fingerprint,
        "signatures": [
            {"key": s.key or None, "name": s.name or None, "worth": s.worth.value, "why": s.why or None}
            for s in candidate.signatures
        ],
        "unconfirmed": [{"at": u.at, "why": u.why, "check_against": u.check_against} for u in content.unconfirmed],
        "other_versions": [{"version": o.version, "fingerprint": o.fingerprint} for o in others],
    }


def _describe_fault(sentence: str, stops: bool) -> dict[str, object]:
    return {"says": sentence, "stops": stops}
