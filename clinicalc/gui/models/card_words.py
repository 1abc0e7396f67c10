"""The sentences of a card: the words of its strip, where the model stands, its faults by grade, its approval."""

from collections import Counter
from collections.abc import Iterator, Sequence

from clinicalc.assessment.findings import Grade
from clinicalc.assessment.numerals import join_words, percent_in_full
from clinicalc.gui.models.named_lines import NamedLine
from clinicalc.gui.window_words import replace_commands
from clinicalc.library.places import short_model
from clinicalc.library.standing import Approval, Fault, FaultKind, Standing
from clinicalc.operations.library_history import KNOWN_BY
from clinicalc.operations.library_view import ModelRow
from clinicalc.operations.model_card import Deed, ModelCard
from clinicalc.report.phrases import NOT_VETTED, count_words
from clinicalc.units.days import day_words

NOT_INSTALLED = "Not in the library: this file was only looked at, and nothing of it is kept until it is installed."
_DECISIONS = frozenset({Deed.APPROVE, Deed.INSTALL})
_STRIPS = {
    Standing.WAITING: NOT_VETTED,
    Standing.REVIEW_OVERDUE: "Review overdue: it gives no number until it is reviewed",
    Standing.WITHDRAWN: "Withdrawn: not for a patient",
    Standing.HELD: "Held on this machine: it gives no number here",
    Standing.REFUSED: "Refused: it gives no number",
}
_APPROVALS = {
    Standing.IN_USE: "Approval in force",
    Standing.REVIEW_OVERDUE: "Approval, past its review date",
    Standing.HELD: "Approval, held on this machine",
}
_SHORT = {
    Standing.WAITING: "waiting for approval",
    Standing.IN_USE: "in use",
    Standing.REVIEW_OVERDUE: "review overdue",
    Standing.WITHDRAWN: "withdrawn",
    Standing.HELD: "held on this machine",
    Standing.REFUSED: "refused",
}


def strip_words(card: ModelCard) -> str:
    """What the hatched strip says; "" for a model in use, which has none."""
    return _STRIPS.get(card.row.standing, "") if card.row else NOT_VETTED


def standing_sentence(card: ModelCard) -> str:
    """Where the model stands and who said so; "" where one of its faults says it already."""
    if card.row is None:
        return NOT_INSTALLED
    reason = replace_commands(card.row.reason)
    return "" if any(_core(sentence) in reason for _, sentence in graded_faults(card)) else reason


def standing_words(card: ModelCard) -> str:
    """The same, and which version is in use: nobody should have to look for it in the list."""
    said = standing_sentence(card)
    if card.row is not None and card.row.standing is Standing.IN_USE:
        return f"In use. {said}".rstrip()
    used = _in_use(card)
    return said if used is None else f"{said} Version {used.version} is in use.".lstrip()


def is_to_be_decided(card: ModelCard) -> bool:
    """Whether the file waits to be installed or approved beside a version that is in use."""
    waits = card.row is None or card.row.standing is Standing.WAITING
    return waits and _in_use(card) is not None and bool(card.may & _DECISIONS)


def _in_use(card: ModelCard) -> ModelRow | None:
    """The other version that is in use, which comes first of all others."""
    first = card.others[0] if card.others else None
    return first if first is not None and first.standing is Standing.IN_USE else None


def outcome_words(card: ModelCard) -> str:
    """The outcome with its horizons; "" where the file cannot be read."""
    outcome, horizons = card.outcome.strip().rstrip("."), card.horizons
    if not outcome or not horizons or f"within {horizons}" in outcome:
        return outcome
    several = "," in horizons
    return f"{outcome}; horizons {horizons}" if several else f"{outcome}; within {horizons}"


def graded_faults(card: ModelCard) -> tuple[tuple[Grade, str], ...]:
    """What is wrong with file and records, each once: what stops first, and the reason given before what follows."""
    state = card.state
    stated = {} if state is None else {fault.sentence: fault for fault in state.faults}
    found = [stated.get(sentence, Fault(FaultKind.CHANGED_FILE, "", sentence)) for sentence in card.faults]
    reason = "" if state is None else state.reason
    found.sort(key=lambda fault: fault.sentence != reason)
    file = short_model(card.fingerprint)
    kept = list(_without_consequences(found, file))
    stops = [fault.sentence for fault in kept if fault.stops]
    if card.file_fault and not any(_core(one) in card.file_fault or one.startswith(file) for one in stops):
        stops.insert(0, card.file_fault)
    others = [fault.sentence for fault in kept if not fault.stops]
    graded = [(Grade.STOP, sentence) for sentence in stops] + [(Grade.CAUTION, sentence) for sentence in others]
    return tuple((grade, replace_commands(sentence)) for grade, sentence in graded)


def _without_consequences(faults: Sequence[Fault], file: str) -> Iterator[Fault]:
    """Each record that is missing once, whatever follows it, and not at all where it is said what became of it.

    Of the model's own file, too, only the first is said: that it is no file, and not besides that it was not read.
    """
    said = False
    told = {fault.record for fault in faults if fault.kind is not FaultKind.MISSING_RECORD}
    for fault in faults:
        if fault.sentence.startswith(file):
            if not said:
                yield fault
            said = True
        elif fault.kind is not FaultKind.MISSING_RECORD or not fault.record:
            yield fault
        elif fault.record not in told:
            told.add(fault.record)
            yield fault


def approval_heading(card: ModelCard) -> str:
    """What the approval is called that the card shows."""
    return _APPROVALS.get(card.row.standing, "Approval") if card.row else "Approval"


def approval_lines(card: ModelCard, approval: Approval) -> Iterator[NamedLine]:
    """Who approved it, why, until when, with which choices, and who compared what."""
    also = ", who also made or brought the file" if approval.by_author else ""
    yield NamedLine("By", f"{approval.name} ({approval.role}){also}", approval.by_author)
    yield NamedLine("On", day_words(approval.written.astimezone().date()))
    yield NamedLine("Reason", approval.reason)
    if approval.known_by is not None:
        yield NamedLine("File known by", KNOWN_BY[approval.known_by])
    yield NamedLine("Review by", day_words(approval.review_until))
    labels = dict(card.recalibrations)
    if approval.recalibration is not None or labels:
        id = approval.recalibration
        yield NamedLine("Recalibration", "none" if id is None else f"{labels.get(id, id)} ({id})")
    points = [f"{percent_in_full(p.probability)} {p.label} ({p.source})" for p in approval.decision_points]
    yield NamedLine("Decision points", "; ".join(points) or "none of the practice’s own")
    if approval.compared:
        counted = Counter(one.by for one in approval.compared)
        said = [f"{name} ({count_words(count, 'figure')})" for name, count in counted.items()]
        yield NamedLine("Compared by", join_words(said))


def recalibration_line(card: ModelCard) -> NamedLine | None:
    """What the file offers to choose, None where it offers nothing."""
    if not card.recalibrations:
        return None
    offered = ", ".join(f"{label} ({id})" for id, label in card.recalibrations)
    must = "; it gives no number without one" if card.recalibration_required else ""
    return NamedLine("Recalibrations", f"{offered}{must}")


def version_words(row: ModelRow, others: tuple[ModelRow, ...] = ()) -> str:
    """A version with where it stands: "1.2.0, in use"; where another has the same number, its first three groups."""
    again = sum(other.version == row.version for other in others) > 1
    digits = row.fingerprint
    groups = f" ({digits[:4]} {digits[4:8]} {digits[8:12]})" if again else ""
    return f"{row.version}{groups}, {_SHORT[row.standing]}"


def _core(sentence: str) -> str:
    return sentence.rstrip(". ")
