"""From the text typed for a question to one of its answers."""

from dataclasses import dataclass
from difflib import get_close_matches

from clinicalc.assessment.entry import Typed
from clinicalc.assessment.fields import AnswerOption, QuestionField
from clinicalc.assessment.findings import Finding, FindingCode, Grade
from clinicalc.assessment.numerals import join_words
from clinicalc.coefficients.answers import find_answer
from clinicalc.units.quoting import quote


@dataclass(frozen=True, slots=True)
class TakenAnswer:
    """An answer that can be used, with the code that stands for it in a design column."""

    field: QuestionField
    option: AnswerOption
    code: float


def take_answer(field: QuestionField, typed: Typed) -> tuple[TakenAnswer | None, tuple[Finding, ...]]:
    """The answer to use (None where there is none) and the findings about it."""
    place = find_answer(typed.text, ((option.id, option.label) for option in field.options))
    if place is None:
        return None, (_unknown_answer(field, typed.text),)
    option = field.options[place]
    return TakenAnswer(field, option, float(place)), _remarks(field, option)


def _remarks(field: QuestionField, option: AnswerOption) -> tuple[Finding, ...]:
    if field.excludes and option.id == "yes":
        message = f"Answered yes: this model does not answer for this patient. {field.excludes}"
        return (Finding(Grade.STOP, FindingCode.EXCLUDED, field.id, message),)
    if option.caution:
        message = f"{field.label}, {option.label}: {option.caution}"
        return (Finding(Grade.CAUTION, FindingCode.GROUP, field.id, message),)
    return ()


def _unknown_answer(field: QuestionField, text: str) -> Finding:
    ids = [option.id for option in field.options]
    close = get_close_matches(text.strip().casefold()[:100], ids, n=1)
    hint = f" Did you mean {close[0]}?" if close else ""
    mark = "" if field.label.endswith("?") else ":"
    message = f"{field.label}{mark} {quote(text.strip())} is not one of the answers, which are {join_words(ids)}.{hint}"
    return Finding(Grade.STOP, FindingCode.UNKNOWN_ANSWER, field.id, message)
