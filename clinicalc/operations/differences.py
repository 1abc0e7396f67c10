"""Where two records are not the same, in words: what, the one side, the other side."""

from collections.abc import Iterator
from dataclasses import dataclass

from clinicalc.assessment.numerals import MINUS
from clinicalc.units.quoting import visible

TOLERANCE = 1e-12
"""How far two numbers may lie apart and count as the same, times the larger one where that exceeds 1."""

NOTHING = "nothing"


@dataclass(frozen=True, slots=True)
class Difference:
    """One thing that is not as it was: what, as the print has it, as the model gives it now; one side may be ""."""

    what: str
    old: str
    new: str

    @property
    def sentence(self) -> str:
        """The difference in one line."""
        return f"{self.what}: {' → '.join(side for side in (self.old, self.new) if side)}"


def unless_same(what: str, old: object, new: object, tolerance: float = TOLERANCE) -> Iterator[Difference]:
    """One difference, or none where both sides are the same."""
    if not is_same(old, new, tolerance):
        yield Difference(what, words_for(old), words_for(new))


def is_same(old: object, new: object, tolerance: float = TOLERANCE) -> bool:
    """Whether two things are equal, numbers within the tolerance."""
    if isinstance(old, float) and isinstance(new, float):
        return abs(old - new) <= tolerance * max(1.0, abs(old), abs(new))
    return old == new


def words_for(thing: object) -> str:
    """A number with every digit, so that what differs is seen to differ; a text with nothing hidden in it."""
    if isinstance(thing, bool):
        return "yes" if thing else "no"
    if isinstance(thing, float):
        return repr(thing).removesuffix(".0").replace("-", MINUS)
    return NOTHING if thing is None or thing == "" else visible(str(thing))
