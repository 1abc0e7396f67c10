"""The library at the end of a day that is past, as the contents of a print."""

from collections.abc import Iterator

from clinicalc.coefficients.fingerprint import group_fingerprint
from clinicalc.library.as_of import DATES_ARE_THE_WRITERS_OWN, AsOf, ThatDay
from clinicalc.library.opening import OpenedLibrary
from clinicalc.library.standing import Standing
from clinicalc.operations.vetting_furniture import furnish, say_reading
from clinicalc.report.contents import Block, Prose, Section
from clinicalc.report.phrases import count_words
from clinicalc.report.vetting_sheet import DayRow, VettingSheet
from clinicalc.report.vetting_tables import lay_days
from clinicalc.units.days import day_words

_WHY = {
    Standing.WAITING: "It waited for an approval",
    Standing.REVIEW_OVERDUE: "Its review was overdue",
    Standing.WITHDRAWN: "It was withdrawn",
    Standing.HELD: "It was held",
    Standing.REFUSED: "It was refused",
}


def compose_as_of(opened: OpenedLibrary, found: AsOf) -> VettingSheet:
    """Which models gave a number at the end of the day, by whose approval, and why the others gave none."""
    day = day_words(found.day)
    practice = opened.authority.practice
    return VettingSheet(
        kind="Models in use on a day",
        title=f"At the end of {day}",
        about=f"Models in use at the end of {day}",
        lines=(*say_reading(opened), DATES_ARE_THE_WRITERS_OWN),
        says=_counted(found),
        sections=(Section("Models", (_models(found),)),),
        furniture=furnish(
            f"Models in use at the end of {day}",
            practice,
            model=f"Library of {practice}",
            identity=f"library {group_fingerprint(opened.library, 3)}",
        ),
    )


def _counted(found: AsOf) -> str:
    if not found.founded:
        return "There was no library yet."
    answered = sum(one.answered for one in found.models)
    return f"{answered} of {count_words(len(found.models), 'model')} gave a number."


def _models(found: AsOf) -> Block:
    if not found.models:
        return Prose(("No model had been installed.",))
    return lay_days(_row(one) for one in found.models)


def _row(one: ThatDay) -> DayRow:
    state = one.state
    return DayRow(
        name=f"{state.title} {state.version}".strip() or "unnamed model",
        id=state.id,
        fingerprint=group_fingerprint(state.fingerprint, 3),
        answered="yes" if one.answered else "no",
        because=_because(one),
        notes=tuple(_notes(one)),
    )


def _because(one: ThatDay) -> str:
    state, approval = one.state, one.state.approval
    by = ""
    if approval is not None:
        by = f"approved by {approval.name} ({approval.role}) until {day_words(approval.review_until)}"
    if one.answered and by:
        return f"It was {by}."
    said = _WHY.get(state.standing, "It gave no number")
    because = f": {state.reason}" if state.reason else f"; it was {by}" if by else ""
    sentence = state.reason if state.standing is Standing.WITHDRAWN and state.reason else f"{said}{because}"
    return sentence if sentence.endswith((".", "?", "!")) else f"{sentence}."


def _notes(one: ThatDay) -> Iterator[str]:
    approval = one.state.approval
    if approval is not None and approval.recalibration is not None:
        yield f"Recalibration {approval.recalibration}"
    yield from (f"On that day, {at:%H:%M}: {words}" for at, words in one.during)
    yield from (f"Found since: {fault.sentence}" for fault in one.since)
