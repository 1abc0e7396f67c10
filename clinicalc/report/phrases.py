"""The sentences of a print that do not come from the coefficient file."""

from datetime import datetime

from clinicalc.assessment.numerals import NARROW_SPACE, of_people
from clinicalc.assessment.result import Assessment, Band

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

STANDING_CAUTIONS = (
    "For qualified clinicians only. The number supports their judgement and never takes its place. It is not for"
    " emergencies.",
    "Local rules, current guidance and licensed practice come first. The program advises nothing, makes no diagnosis"
    " and claims no approval by any authority.",
    "The practice answers for the coefficient file it chose and for the values it typed. Check the values above"
    " against the patient’s notes before relying on the number.",
)

FIRST_PAGE_CAUTION = (
    "For qualified clinicians: supports judgement, does not replace it. The practice answers for the file it chose."
)

_BASES = {
    "covariance": "From the model’s own covariance of its coefficients.",
    "robust": "From a robust covariance of the model’s coefficients.",
    "reconstructed": "Approximate: the covariance was rebuilt from printed intervals.",
    "draws": "From the model’s bootstrap draws.",
}

# not from the locale: a print reads the same everywhere
_MONTHS = (
    "January",
    "February",
    "March",
    "April",
    "May",
    "June",
    "July",
    "August",
    "September",
    "October",
    "November",
    "December",
)


def level_words(level: float) -> str:
    """A confidence level as a percentage: "95 %"."""
    return f"{100 * level:g}{NARROW_SPACE}%"


def basis_words(band: Band) -> str:
    """What the band was made from."""
    return _BASES[band.basis]


def outcome_words(outcome: str) -> tuple[str, str]:
    """The outcome as a headline, and what it is in full: the part before a colon and the part after it."""
    short, _, detail = outcome.partition(": ")
    return short, detail


def handles_by_censoring(assessment: Assessment) -> bool:
    """Whether the fit of the equation that answered left people out of account who died of something else first."""
    equations = assessment.model.content.equations
    return any(e.id == assessment.equation and e.competing_events.handled == "censored" for e in equations)


def people_sentence(probability: float, span: str, *, others_censored: bool) -> str:
    """The probability in people; says so where the fit left other causes of death out of account."""
    count, whole = of_people(probability)
    condition = ", if no other cause of death came first" if others_censored else ""
    within = f"within {span}"
    opening = f"Of {whole} people with these values,"
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


def day_words(moment: datetime) -> str:
    """A day in words: "1 December 2026"."""
    return f"{moment.day} {_MONTHS[moment.month - 1]} {moment.year}"


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
