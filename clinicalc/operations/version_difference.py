"""Two versions of a model side by side: what differs, and what that does to the numbers."""

from dataclasses import dataclass, field

from clinicalc.assessment.model import Model
from clinicalc.library.difference import Difference, find_difference
from clinicalc.library.effect import Effect, find_effect
from clinicalc.operations.course import Course
from clinicalc.operations.library_view import ModelRow


@dataclass(frozen=True, slots=True)
class VersionDifference:
    """An old version of the library and another one, which need not be in it yet; both proved."""

    old: ModelRow
    new_version: str
    new_fingerprint: str
    difference: Difference
    effect: Effect
    old_model: Model = field(repr=False, compare=False)
    new_model: Model = field(repr=False, compare=False)


def set_side_by_side(row: ModelRow, old: Model, new: Model, course: Course) -> VersionDifference:
    """The difference, then the effect, which takes a second or two with many horizons."""
    course.say("Comparing every statement of the two files", 1, 3)
    difference = find_difference(old.content, new.content)
    course.say("Computing both versions for standard patients", 2, 3)
    effect = find_effect(old, new)
    return VersionDifference(row, new.content.version, new.fingerprint, difference, effect, old, new)
