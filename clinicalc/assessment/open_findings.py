"""What is said at a value that was not measured, beside the number or in its place."""

from collections.abc import Iterator

from clinicalc.assessment.case import Case
from clinicalc.assessment.fields import Field, NumberField, QuestionField
from clinicalc.assessment.findings import Finding, FindingCode, Grade
from clinicalc.assessment.limits import words_for
from clinicalc.assessment.not_measured import OpenResult
from clinicalc.assessment.numerals import NARROW_SPACE, join_words, percent, percent_range
from clinicalc.assessment.open_fields import extremes, usual_limits


def say_averaged(open: tuple[Field, ...], result: OpenResult) -> Iterator[Finding]:
    """A caution at each open value: that the number is an average, between what, and how the band widens for it.

    What holds for all of them together stands at the first.
    """
    said = False
    for place, field in enumerate(open):
        sentences = [f"{field.label}: not measured. The number is an average over what is known of such people."]
        if isinstance(field, QuestionField):
            sentences.append(_say_answers(field, result))
        elif not said:
            sentences.append(_say_range(open, result))
            said = True
        if place == 0:
            sentences += [*_say_widened(result), f"Source: {result.not_measured.source.rstrip('. ')}."]
        yield Finding(Grade.CAUTION, FindingCode.NOT_MEASURED, field.id, " ".join(sentences))


def say_undescribed(case: Case, open: tuple[Field, ...]) -> Iterator[Finding]:
    """A stop at each open value that nobody described: the range of the number over its usual values."""
    people = case.equation.people
    described = frozenset[str]() if people is None else people.described
    named = [field for field in open if field.id not in described] or list(open)
    over = join_words([_say_over(field) for field in open])
    ends = extremes(case, open)
    if ends is None:
        range_ = "Measure it first."
    else:
        low, high = (percent(*end) for end in ends)
        range_ = f"Over {over} it would lie between {low} and {high}."
    for field in named:
        message = (
            f"{field.label}: not measured, and the file does not describe what to expect of it in such people, so there"
            f" is no single number. {range_}"
        )
        yield Finding(Grade.STOP, FindingCode.NOT_MEASURED, field.id, message)


def _say_over(field: Field) -> str:
    if isinstance(field, NumberField):
        return f"the usual limits of {field.label}, {words_for(field, usual_limits(field), field.unit)},"
    return f"all answers to {field.label.rstrip('?')}"


def _say_answers(field: QuestionField, result: OpenResult) -> str:
    """The number with each answer, and how many of such people give it."""
    said: list[str] = []
    for code, option in enumerate(field.options):
        those = [answered for answered in result.answered if answered.answers[field.id] == code]
        share = sum(answered.share for answered in those)
        if share > 0.0:
            number = sum(answered.share * answered.probability for answered in those) / share
            rest = sum(answered.share * answered.complement for answered in those) / share
            of = " of such people" if not said else ""
            said.append(f"{percent(number, rest)} for {option.label} ({percent(share)}{of})")
    return f"If it were known, the number would be {join_words(said, 'or')}."


def _say_range(open: tuple[Field, ...], result: OpenResult) -> str:
    """The range over all open values together."""
    whole = result.not_measured
    known = "it were measured" if len(open) == 1 else "both were measured"
    level = f"{100 * whole.level:g}{NARROW_SPACE}%"
    low, high = percent(whole.lower), percent(whole.upper)
    if low == high:
        return f"If {known}, the number would be {low} for at least {level} of such people."
    return f"If {known}, the number would lie between {low} and {high} for {level} of such people."


def _say_widened(result: OpenResult) -> Iterator[str]:
    whole = result.not_measured
    if result.lower is None or result.upper is None or whole.known_lower is None or whole.known_upper is None:
        return
    known = percent_range(whole.known_lower, whole.known_upper)
    wider = result.lower <= whole.known_lower and whole.known_upper <= result.upper
    yield f"The band {'widens' if wider else 'moves'} from {known} to {percent_range(result.lower, result.upper)}."
