"""Numbers that are each within range and rarely occur together in the people the model was made from."""

from collections.abc import Mapping, Sequence
from math import erfc, exp, pi, sqrt

from clinicalc.assessment.findings import Finding, FindingCode, Grade
from clinicalc.assessment.numbers import TakenNumber
from clinicalc.assessment.numerals import NARROW_SPACE, join_words
from clinicalc.prediction.people import People

RARE = 0.01
"""Combinations at least so far out are met in fewer than this share of the people described."""

_RANGE_CODES = frozenset({FindingCode.UNUSUAL, FindingCode.OUTSIDE_DERIVATION})
FEWEST = 2
WORTH_NAMING = 0.1
"""The share of the distance that the second value must carry to be named beside the first."""


def find_rare(people: People, numbers: Mapping[str, TakenNumber], findings: Sequence[Finding]) -> Finding | None:
    """A note where the known numbers together lie beyond the 99th centile of their Mahalanobis distance.

    The squared distance z'R^-1 z, on the scale described, is chi-square with as many degrees of freedom as there are
    numbers (Mardia, Kent & Bibby, Multivariate Analysis, 1979, theorem 2.5.2). None where one of the values alone is
    out of its range: that says more.
    """
    known = people.scaled({id: taken.value for id, taken in numbers.items()})
    if len(known) < FEWEST or any(f.code in _RANGE_CODES and f.field in known for f in findings):
        return None
    carried = people.carried_distance(known)
    whole = sum(carried)
    if chi_square_beyond(whole, len(known)) >= RARE:
        return None
    first, second, *_ = sorted(range(len(carried)), key=lambda place: -carried[place])
    most = (first, second) if carried[second] >= WORTH_NAMING * whole else (first,)
    ids = list(known)
    named = [numbers[ids[place]] for place in sorted(most)]
    values = join_words([f"{taken.field.label} {taken.shown}" for taken in named])
    message = (
        f"Each value is within its range, but together they are rare in the people this model was made from: fewer than"
        f" 1{NARROW_SPACE}% of them lie so far out. Most of the distance comes from {values}. Check that they were"
        " typed correctly."
    )
    return Finding(Grade.NOTE, FindingCode.RARE_COMBINATION, named[0].field.id, message)


def chi_square_beyond(x: float, degrees: int) -> float:
    """P(chi-square > x) for whole degrees of freedom: the upper incomplete gamma function as a finite sum.

    Abramowitz & Stegun 1964, 26.4.4 and 26.4.5.
    """
    half = x / 2.0
    odd = degrees % 2 == 1
    total = erfc(sqrt(half)) if odd else 0.0
    term = exp(-half) * (2.0 * sqrt(half / pi) if odd else 1.0)
    for k in range(degrees // 2):
        total += term
        # one after the other: a power of the whole distance could overflow
        term *= half / (k + (1.5 if odd else 1.0))
    return total
