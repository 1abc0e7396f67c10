"""The sentences of the result sheet that no print needs: what is still to be entered, and what stops the number."""

from collections.abc import Sequence
from enum import Enum

from clinicalc.assessment.decision import DecisionPoint, PlacedPoint
from clinicalc.assessment.fields import QuestionField
from clinicalc.assessment.findings import Finding, FindingCode, Grade
from clinicalc.assessment.model import Model
from clinicalc.assessment.numerals import join_words, percent_in_full
from clinicalc.assessment.result import Assessment
from clinicalc.coefficients.spans import Span
from clinicalc.report.phrases import count_words, people_sentence
from clinicalc.report.phrases_decision import confidence_sentence, point_sentence
from clinicalc.units.reading import Unreadable, UnreadableReason, read_value

_CHOICES = {FindingCode.HORIZON: "horizon", FindingCode.RECALIBRATION: "recalibration"}
GRADE_WORDS = {Grade.STOP: "Stop", Grade.CAUTION: "Caution", Grade.NOTE: "Note"}
_NAMED = 2
"""How many stopped values are named: more would need more room than the sheet keeps free."""
_NO_BREAK_SPACE = "\u00a0"
_NOT_FOR_THIS_PATIENT = "This model does not answer for this patient. "
_NOT_MADE_FOR = (FindingCode.EXCLUDED, FindingCode.OUTSIDE_DERIVATION)


def is_open_choice(finding: Finding) -> bool:
    """Whether a stop only says that a choice about the model is still to be made."""
    return finding.grade is Grade.STOP and finding.code in _CHOICES


def shown_findings(assessment: Assessment) -> tuple[Finding, ...]:
    """The findings that are listed: all but the entries and choices still to be made, which the headline counts."""
    return tuple(f for f in assessment.findings if f.code is not FindingCode.MISSING and not is_open_choice(f))


def numbered_findings(assessment: Assessment) -> tuple[tuple[int, Finding], ...]:
    """The listed findings with the numbers they have in the list and at the values."""
    return tuple(enumerate(shown_findings(assessment), 1))


def findings_heading(findings: Sequence[object]) -> str:
    """How many findings there are: "2 findings", "1 finding", "No findings so far"."""
    return count_words(len(findings), "finding") if findings else "No findings so far"


def grades_in_words(findings: Sequence[Finding]) -> str:
    """How many findings of each grade: "1 caution, 2 notes"; "no findings"."""
    counts = [(grade, sum(finding.grade is grade for finding in findings)) for grade in Grade]
    return ", ".join(count_words(count, grade.value) for grade, count in counts if count) or "no findings"


def not_used_sentence(model: Model) -> str:
    """What the model takes no account of, "" where the file says nothing about it."""
    left_out = model.content.use.not_used
    return f"Not used by this model: {', '.join(left_out)}." if left_out else ""


def event_heading(model: Model, span: Span | None) -> str:
    """The outcome in its first words, with the horizon, whose number and unit stay on one line."""
    outcome = model.content.outcome.partition(":")[0].strip().rstrip(".")
    if span is None:
        return outcome
    heading = outcome if f"within {span.words}" in outcome else f"{outcome} within {span.words}"
    return heading.replace(span.words, span.words.replace(" ", _NO_BREAK_SPACE))


def longest_sentence(model: Model, span: Span) -> str:
    """A sentence about people as long as this model's sentences get, for the room that is kept free."""
    censored = any(e.content.competing_events.handled == "censored" for e in model.equations)
    averaged = any(equation.people is not None for equation in model.equations)
    return people_sentence(0.0044, span.words, others_censored=censored, some_unknown=averaged)


def longest_decision_words(model: Model, points: Sequence[DecisionPoint]) -> str:
    """Words about decision points as long as they get for this model, for the room that is kept free."""
    has_band = any(line.band is not None for equation in model.equations for line in equation.lines)
    placed = [PlacedPoint(point, above=False, crossed=False, confidence=0.5 if has_band else None) for point in points]
    sides = [f"{point_sentence(place, percent_in_full(place.point.probability))}." for place in placed]
    return "\n".join(filter(None, (*sides, confidence_sentence(placed))))


def event_in_full(model: Model) -> str:
    """What counts as the event: the outcome after its first words; "" where those are all."""
    return model.content.outcome.rstrip(". ").partition(":")[2].strip()


def explain_no_number(assessment: Assessment) -> tuple[str, str]:
    """Headline and sentence for a sheet without a number."""
    stops = [finding for finding in assessment.stops if not is_open_choice(finding)]
    if stops:
        return "No number", _say_stops(assessment, stops)
    to_go = [*assessment.missing, *(f for f in assessment.stops if is_open_choice(f))]
    if not to_go:
        return "No number", "The findings below say why."
    entries = count_words(len(to_go), "entry", "entries")
    return "No number yet", f"{entries} to go. Next: {_name_in_sentence(assessment.model, to_go[0])}."


def longest_reasons(model: Model) -> tuple[str, ...]:
    """Sentences as long as those about entries on screen get for this model, for the room that is kept free."""
    numbers = (field.label for field in model.fields if not isinstance(field, QuestionField))
    labels = sorted(numbers, key=len, reverse=True) or ["A finding below"]
    remedies = (_say_remedy({slip}, several=len(labels) > 1) for slip in _Slip)
    return (_NOT_FOR_THIS_PATIENT + "The stops below say why.", *(_name_stops(labels, remedy) for remedy in remedies))


def _say_stops(assessment: Assessment, stops: list[Finding]) -> str:
    not_made_for = [finding for finding in stops if finding.code in _NOT_MADE_FOR]
    if not_made_for:
        why = "The stop below says why." if len(stops) == 1 else "The stops below say why."
        return _NOT_FOR_THIS_PATIENT + why
    labels = {field.id: field.label for field in assessment.model.fields}
    names = list(dict.fromkeys(labels.get(finding.field, "A finding below") for finding in stops))
    slips = {_slip(assessment, finding) for finding in stops}
    return _name_stops(names, _say_remedy(slips, several=len(names) > 1))


def _name_stops(names: list[str], remedy: str) -> str:
    verb, rest = "stop" if len(names) > 1 else "stops", len(names) - _NAMED
    if rest > 0:
        names = [*names[:_NAMED], count_words(rest, "other value")]
    return f"{join_words(names)} {verb} it. {remedy} and the number comes back."


class _Slip(Enum):
    """What about an entry is wrong."""

    DATE = "date"
    UNIT = "unit"
    VALUE = "value"


def _slip(assessment: Assessment, finding: Finding) -> _Slip:
    if finding.code is FindingCode.FUTURE_DATE:
        return _Slip.DATE
    if finding.code is FindingCode.UNREADABLE:
        typed = next((line.typed for line in assessment.values if line.id == finding.field), "")
        reading = read_value(typed)
        bad_date = isinstance(reading, Unreadable) and reading.reason is UnreadableReason.BAD_DATE
        return _Slip.DATE if bad_date else _Slip.VALUE
    return _Slip.UNIT if finding.offer or finding.code is FindingCode.WRONG_UNIT else _Slip.VALUE


def _say_remedy(slips: set[_Slip], *, several: bool) -> str:
    """What brings the number back, where one value stops it or several do."""
    if slips == {_Slip.DATE}:
        return "Correct their dates" if several else "Correct its date"
    if _Slip.DATE in slips:
        return "Correct these entries" if several else "Correct its value and its date"
    if _Slip.UNIT in slips:
        return "Change their units or values" if several else "Change its unit or its value"
    return "Change these values" if several else "Change its value"


def _name_in_sentence(model: Model, finding: Finding) -> str:
    if finding.code in _CHOICES:
        return f"the {_CHOICES[finding.code]}, above"
    field = model.by_id[finding.field]
    if isinstance(field, QuestionField) and field.excludes:
        return "the question at the top" if len(model.exclusions) == 1 else "the questions at the top"
    label = field.label
    return label if label[1:2].isupper() else label[:1].lower() + label[1:]
