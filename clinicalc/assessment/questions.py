"""From the text typed for a question to one of its answers."""

from dataclasses import dataclass
from difflib import get_close_matches

from clinicalc.assessment.entry import Typed
from clinicalc.assessment.fields import AnswerOption, QuestionField
from clinicalc.assessment.findings import Finding, FindingCode, Grade
from clinicalc.assessment.numerals import join_words


@dataclass(frozen=True, slots=True)
class TakenAnswer:
    """An answer that can be used, with the code that stands for it in a design column."""

    field: QuestionField
    option: AnswerOption
    code: float


def take_answer(field: QuestionField, typed: Typed) -> tuple[TakenAnswer | None, tuple[Finding, ...]]:
    """The answer to use (None where there is none) and the findings about it."""
    said = typed.text.strip().casefold()
    for place, option in enumerate(field.options):
        if said in (option.id.casefold(), option.label.casefold()):
            taken = TakenAnswer(field, option, float(place))
            if field.excludes and option.id == "yes":
                return taken, (
                    Finding(
                        Grade.STOP,
                        FindingCode.EXCLUDED,
                        field.id,
                        f"Answered yes: this model does not answer for this patient. {field.excludes}",
                    ),
                )
            return taken, _cautions(field, option)
    ids = [option.id for option in field.options]
    close = get_close_matches(said, ids, n=1)
    hint = f" Did you mean {close[0]}?" if close else ""
    return None, (
        Finding(
            Grade.STOP,
            FindingCode.UNKNOWN_ANSWER,
            field.id,
            f"{field.label}: {quote(typed.text)} is not one of the answers, which are {join_words(ids)}.{hint}",
        ),
    )


def quote(text: str, longest: int = 40) -> str:
    """Typed text as it may stand in a sentence: in quotation marks, cut short, control characters made visible."""
    shown = "".join(c if c.isprintable() else f"\\u{ord(c):04x}" for c in text.strip())
    return f"“{shown[:longest]}…”" if len(shown) > longest else f"“{shown}”"


def _cautions(field: QuestionField, option: AnswerOption) -> tuple[Finding, ...]:
    if not option.caution:
        return ()
    return (Finding(Grade.CAUTION, FindingCode.GROUP, field.id, f"{field.label}, {option.label}: {option.caution}"),)
