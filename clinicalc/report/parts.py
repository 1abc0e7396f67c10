"""Which parts a print has beside the number, its findings and its values."""

from dataclasses import dataclass

from clinicalc.assessment.band_assumptions import band_assumptions
from clinicalc.assessment.result import Assessment


@dataclass(frozen=True, slots=True)
class PrintParts:
    """What is printed where there is something to print of it.

    `patient_page` and `comparison` are there unless they are left out; `shares` and `matching_age` only for those who
    ask, because a comparison with somebody else persuades. `assumptions` are those of a rebuilt band.
    """

    patient_page: bool = True
    comparison: bool = True
    shares: bool = False
    matching_age: bool = False
    assumptions: bool = True


USUAL_PARTS = PrintParts()


def offered_parts(assessment: Assessment) -> PrintParts:
    """The parts of which an assessment has something to print.

    A comparison without numbers or in which nothing differs is none; why it has none stands on the screen.
    """
    estimate = assessment.estimate
    if estimate is None:
        return PrintParts(False, False, False, False, False)
    comparison = estimate.comparison
    return PrintParts(
        patient_page=True,
        comparison=comparison is not None and comparison.own is not None and bool(comparison.changes),
        shares=estimate.shares is not None,
        matching_age=estimate.matching_age is not None,
        assumptions=bool(band_assumptions(assessment)),
    )
