"""The sentences of a print that do not come from the coefficient file."""

from datetime import datetime

from clinicalc.assessment.findings import Finding
from clinicalc.assessment.numerals import NARROW_SPACE, of_people
from clinicalc.assessment.result import Assessment, Band, Estimate
from clinicalc.assessment.vetting import Vetting
from clinicalc.coefficients.schema import ModelContent, ReconstructedBand
from clinicalc.units.days import day_words

NOT_VETTED = "Not vetted: for trying out, not for a patient"

NO_LABEL = "no patient label"

BAND_MEANING = (
    "Band: how precisely the model’s coefficients are known for people with these values. It is not this patient’s"
    " range and covers no other population. Errors of measurement are not in it."
)

NO_NUMBER = (
    "This sheet records that the model gave no number for these values. The findings say why. Nothing on it is an"
    " estimate."
)

OPEN_VALUES_IN_BAND = "What was not measured is in it."

STANDING_CAUTIONS = (
    "For qualified clinicians only. The number supports their judgement and never takes its place. It is not for"
    " emergencies.",
    "Local rules, current guidance and licensed practice come first. The program advises nothing, makes no diagnosis"
    " and claims no approval by any authority.",
    "The practice answers for the file it chose and the values it typed. Check them against the patient’s notes first.",
)

FIRST_PAGE_CAUTION = (
    "For qualified clinicians: supports judgement, does not replace it. The practice answers for the file it chose."
)

_BASES = {
    "covariance": "From the model’s own covariance of its coefficients.",
    "robust": "From a robust covariance of the model’s coefficients.",
    "reconstructed": "Approximate, rebuilt from printed intervals: clinicalc inspect lists what was assumed.",
    "draws": "From the model’s bootstrap draws.",
}
_REBUILT = "Approximate, rebuilt from printed intervals."
"""Where a list of what was assumed stands beside it."""


def vetting_words(vetting: Vetting | None) -> str:
    """How the file stands, without a full stop: who approved it and until when, or that it is not vetted."""
    if vetting is None:
        return NOT_VETTED
    also = ", who also made or brought the file," if vetting.by_author else ""
    return f"Approved by {vetting.approved_by} ({vetting.role}){also} until {day_words(vetting.review_until)}"


def band_meaning(estimate: Estimate | None) -> str:
    """What the band says and does not say; with values not measured, that it holds those too."""
    open_values = estimate is not None and estimate.not_measured is not None
    return f"{BAND_MEANING} {OPEN_VALUES_IN_BAND}" if open_values else BAND_MEANING


def level_words(level: float) -> str:
    """A confidence level as a percentage: "95 %"."""
    return f"{100 * level:g}{NARROW_SPACE}%"


def basis_words(band: Band) -> str:
    """What the band was made from."""
    return _BASES[band.basis]


def rebuilt_words(model: ModelContent) -> str:
    """What is said beside the bands of a model of which any is rebuilt and so approximate; "" where none is."""
    rebuilt = any(isinstance(equation.uncertainty, ReconstructedBand) for equation in model.equations)
    return _REBUILT if rebuilt else ""


def outcome_words(outcome: str) -> tuple[str, str]:
    """The outcome as a headline, and what it is in full: the part before a colon and the part after it."""
    short, _, detail = outcome.partition(": ")
    return short, detail


def handles_by_censoring(assessment: Assessment) -> bool:
    """Whether the fit of the equation that answered left people out of account who died of something else first."""
    equations = assessment.model.content.equations
    return any(e.id == assessment.equation and e.competing_events.handled == "censored" for e in equations)


def people_sentence(probability: float, span: str, *, others_censored: bool, some_unknown: bool = False) -> str:
    """The probability in people; says so where the fit left other causes of death out of account.

    With `some_unknown` a value was not measured, and the people have in common only what is known.
    """
    count, whole = of_people(probability)
    condition = ", if no other cause of death came first" if others_censored else ""
    within = f"within {span}"
    opening = f"Of {whole} people with {'the values that are known' if some_unknown else 'these values'},"
    if count is not None:
        has = "has" if count == 1 else "have"
        rest = whole - count
        return (
            f"{opening} about {count} {has} the event {within} and about {rest} {'does' if rest == 1 else 'do'} not"
            f"{condition}."
        )
    if probability < 0.5:
        return f"{opening} fewer than 1 has the event {within}{condition}."
    return f"{opening} all but fewer than 1 have the event {within}{condition}."


def say_people(assessment: Assessment) -> str:
    """The number of an assessment in people, as `people_sentence` words it; "" where there is no number."""
    estimate, span = assessment.estimate, assessment.span
    if estimate is None or span is None:
        return ""
    return people_sentence(
        estimate.probability,
        span.words,
        others_censored=handles_by_censoring(assessment),
        some_unknown=estimate.not_measured is not None,
    )


def say_finding(finding: Finding) -> str:
    """A finding after its grade: "Caution: …"."""
    return f"{finding.grade.value.capitalize()}: {finding.message}"


def moment_words(moment: datetime) -> str:
    """A day and a time: "1 December 2026, 14:20"."""
    return f"{day_words(moment)}, {moment:%H:%M}"


def zone_words(moment: datetime) -> str:
    """How the clock of a moment differs from universal time: "UTC+01:00"; "" where it is not known."""
    text = f"{moment:%z}"
    return f"UTC{text[:3]}:{text[3:5]}".replace("-", "−") if text else ""


def count_words(count: int, one: str, many: str = "") -> str:
    """A count with its noun: "1 finding", "2 findings", "2 entries"."""
    return f"{count} {one if count == 1 else many or f'{one}s'}"
