"""The page for the patient: people in whole numbers and plain words, no decimals, no ruler, no decision point."""

from collections.abc import Iterator

from clinicalc.assessment.fields import NumberField
from clinicalc.assessment.findings import Finding, FindingCode, Grade
from clinicalc.assessment.numerals import of_people
from clinicalc.assessment.result import Assessment, Estimate
from clinicalc.report.contents import Count, PatientSheet, Prose, Section
from clinicalc.report.phrases import handles_by_censoring

_ROUGHLY = " That room is itself only roughly known."
_UNKNOWN_PRECISION = "The source does not say how precisely this is known."
_MEASURED_AGAIN = "Measured again, the number would differ somewhat."
_AGREED = "What we agreed"
_OTHERS_CENSORED = (
    "The people are counted as if nobody died of anything else first. Where that is likely, fewer people will have it."
)
_PLAIN = {
    FindingCode.UNUSUAL: "{label} is an unusual value. Ask whether it was measured and typed in rightly.",
    FindingCode.CROSS_CHECK: "{label} does not go well with another value. Ask whether both are right.",
    FindingCode.TYPED_AND_COMPUTED: "{label} was given in two ways that differ. Ask which one is right.",
    FindingCode.NEAR_CUT: "{label} lies close to a limit: a slightly different value would give another number.",
    FindingCode.OUT_OF_DATE: "{label} was measured some time ago; measured today it may give another number.",
    FindingCode.GROUP: "For {label} the number was made for others and may not fit you well.",
    FindingCode.NOT_MEASURED: "{label} is not known. What is usual for people like you stands in its place.",
    FindingCode.UNCONFIRMED: "Some figures behind the number have not been checked against where they come from.",
}
"""A caution in plain words, by what it is about. What the file itself cautions is said in its own plain words."""
_OTHER_CAUTION = "There is something more to know about this number. Ask about it."
_SILENT = frozenset(
    {
        FindingCode.MODEL,
        FindingCode.OUTSIDE_DERIVATION,
        FindingCode.COMPETING_EVENTS,
        FindingCode.DECISION_POINT,
    }
)
"""Said in other words: by the file, by the direction in which the value lies, by the sentence about other deaths; or
nothing for this page, as a decision point."""


def compose_patient(assessment: Assessment) -> PatientSheet | None:
    """The patient's page; None where there is no number."""
    estimate, span = assessment.estimate, assessment.span
    if estimate is None or span is None:
        return None
    outcome, detail = _parted(assessment.model.content.use.plain.outcome)
    probability, label = estimate.probability, assessment.label.strip()
    count, whole = of_people(probability)
    having, not_having = _count_words(count, whole, probability)
    return PatientSheet(
        title=f"Your chance of {outcome}",
        lines=(*((f"That is: {detail}",) if detail else ()), _when(span.words, label)),
        probability=probability,
        opening=_opening(estimate, whole, counted=count is not None),
        counts=(Count(having, f"will have {outcome}"), Count(not_having, f"will not, within {span.words}")),
        note=_note(count, whole, probability),
        sections=(
            Section("How sure is this?", (Prose((_how_sure(estimate, whole),)),), whole=True),
            Section("What it does not say", (Prose(tuple(_not_said(assessment, having, count))),), whole=True),
        ),
        agreed=_AGREED,
        vetted=assessment.vetting is not None,
    )


def _opening(estimate: Estimate, whole: int, *, counted: bool) -> str:
    """Whom the dots stand for: with a value not measured, people who have in common only what is known."""
    values = "these values" if estimate.not_measured is None else "the values that are known"
    return f"Of {whole} people with {values}{', about' if counted else ''}:"


def _parted(outcome: str) -> tuple[str, str]:
    """The outcome and what it lists in brackets at its end, where that would make a heading too long."""
    head, bracket, rest = outcome.partition(" (")
    return (head, rest[:-1]) if bracket and outcome.endswith(")") and ")" not in rest[:-1] else (outcome, "")


def _when(span: str, label: str) -> str:
    return f"within the next {span}{f', for {label}' if label else ''}"


def _count_words(count: int | None, whole: int, probability: float) -> tuple[str, str]:
    """How many have it and how many do not, never nobody and never all."""
    if count is not None:
        return str(count), str(whole - count)
    few, many = "fewer than 1", f"more than {whole - 1}"
    return (few, many) if probability < 0.5 else (many, few)


def _note(count: int | None, whole: int, probability: float) -> str:
    nobody = f"Nobody can say which of the {whole} dots is you."
    if count == 1:
        return f"The filled dot is the 1. {nobody}"
    if count is not None:
        return f"Filled dots are the {count}. {nobody}"
    where, few = ("first", "have") if probability < 0.5 else ("last", "do not have")
    return f"The ring in the {where} place stands for fewer than 1 who will {few} it. {nobody}"


def _how_sure(estimate: Estimate, whole: int) -> str:
    band, spread = estimate.band, estimate.spread
    if band is None:
        moves = spread is not None and spread.link_sd > 0.0
        return f"{_UNKNOWN_PRECISION} {_MEASURED_AGAIN}" if moves else _UNKNOWN_PRECISION
    low, high = (_bound(limit, whole) for limit in (band.lower, band.upper))
    room = low if low == high else f"{low} to {high}"
    return (
        "The number comes from what happened to other people in the past. How well that is known leaves room for"
        f" {room} of {whole}.{_ROUGHLY if band.basis == 'reconstructed' else ''} Measuring again would move it too."
    )


def _bound(probability: float, whole: int) -> str:
    """A limit of the band in whole people of as many as the page shows, never nobody and never all."""
    count = round(whole * probability)
    if count == 0:
        return "fewer than 1"
    return f"more than {whole - 1}" if count == whole else str(count)


def _not_said(assessment: Assessment, having: str, count: int | None) -> Iterator[str]:
    which = "" if count is None else f" one of the {having}"
    you = f"whether you will be{which}" if which else "whether it will happen to you"
    yield f"It does not say {you}. It knows only the values typed in today, not everything about you."
    yield from assessment.model.content.use.plain.cautions
    if handles_by_censoring(assessment):
        yield _OTHERS_CENSORED
    yield from dict.fromkeys(_cautions(assessment))  # the same sentence stands once


def _cautions(assessment: Assessment) -> Iterator[str]:
    """The cautions about this patient's values in plain words."""
    labels = {field.id: field.label for field in assessment.model.fields}
    for finding in assessment.findings:
        if finding.code is FindingCode.OUTSIDE_DERIVATION:
            side = _side(assessment, finding)
            yield f"{labels[finding.field]} {side} the people the number was made from, so take it with care."
        elif finding.grade is Grade.CAUTION and finding.code not in _SILENT:
            sentence = _PLAIN.get(finding.code, _OTHER_CAUTION)
            yield sentence.format(label=labels.get(finding.field, "it"))


def _side(assessment: Assessment, finding: Finding) -> str:
    field = assessment.model.by_id[finding.field]
    number = next(line.number for line in assessment.values if line.id == finding.field)
    if not isinstance(field, NumberField) or number is None:
        return "is other than in"
    low, high = field.derivation
    if low is not None and number < low:
        return "is lower than in"
    return "is higher than in" if high is not None and number > high else "is at the limit of"
