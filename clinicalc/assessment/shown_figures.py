"""The number and its band as they are written wherever they are shown."""

from clinicalc.assessment.numerals import percent_beside, percent_range
from clinicalc.assessment.result import Assessment


def shown_probability(assessment: Assessment) -> str:
    """The number, with more than one decimal where it would else stand on the wrong side of a decision point.

    "" where there is no number.
    """
    estimate = assessment.estimate
    if estimate is None:
        return ""
    places = [(placed.point.probability, placed.above) for placed in estimate.decision_points]
    return percent_beside(estimate.probability, estimate.complement, places)


def shown_band(assessment: Assessment) -> str:
    """The band, its ends written with the same care; "" where there is none."""
    estimate = assessment.estimate
    if estimate is None or estimate.band is None:
        return ""
    points = [placed.point.probability for placed in estimate.decision_points]
    return percent_range(estimate.band.lower, estimate.band.upper, points)
