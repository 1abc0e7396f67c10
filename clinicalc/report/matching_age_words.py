"""The matching age in words, for those who asked for it."""

from clinicalc.assessment.matching_age import AgePlace, MatchingAge

MATCHING_AGE_MEANING = (
    "Matching age: the age at which the reference person would have this number. It compares with somebody else, and"
    " comparisons persuade; it is no biological age."
)


def short_age(found: MatchingAge) -> str:
    """For the last row of the shares: "matching age 75", "matching age below 30"; "" where there is none."""
    words = _age(found, decimals=0)
    return f"matching age {words}" if words else ""


def say_matching_age(found: MatchingAge) -> str:
    """One sentence: the age with its standard error, the side on which it lies, or why there is none."""
    match found.place:
        case AgePlace.WITHIN:
            error = found.standard_error
            precision = "" if error is None else f" (standard error {error:.1f})"
            return f"The reference person would have this number at {_age(found, decimals=1)} years{precision}."
        case AgePlace.BELOW:
            return (
                f"The matching age is below {found.lowest:g} years, the lowest age for which the model gives a number."
            )
        case AgePlace.ABOVE:
            return (
                f"The matching age is above {found.highest:g} years, the highest age for which the model gives a"
                " number."
            )
        case None:
            return f"No matching age. {found.because}"


def _age(found: MatchingAge, *, decimals: int) -> str:
    match found.place:
        case AgePlace.WITHIN:
            return f"{found.age:.{decimals}f}"
        case AgePlace.BELOW:
            return f"below {found.lowest:g}"
        case AgePlace.ABOVE:
            return f"above {found.highest:g}"
        case None:
            return ""
