"""What the page has done in errands about validating and updating: each verb in a thread of its own."""

from __future__ import annotations

import tomllib
from collections.abc import Sequence
from dataclasses import replace
from pathlib import Path
from typing import TYPE_CHECKING

from clinicalc.errors import ClinicalcError, Stopped, UsageError
from clinicalc.gui.study.file_digest import digest_files
from clinicalc.gui.study.validation_state import MadeUpdate, MadeValidation, OpenedValidation
from clinicalc.operations.course import Course

if TYPE_CHECKING:
    from clinicalc.development.package import Package
    from clinicalc.library.keys import SigningKey
    from clinicalc.operations.updating import NewVersion
    from clinicalc.operations.validating import CheckedPeople
    from clinicalc.settings import PracticePoint
    from clinicalc.validation.updated import UpdateWish
    from clinicalc.validation.validated import Validation
    from clinicalc.validation.validation_file import SettledValidation

_OF_STUDIES = frozenset({"predictors", "equations", "estimate", "derived"})
_HEAD = frozenset({"id", "source", "use"})
"""What every study says of itself first, and no validation file does."""
_OF_VALIDATIONS = frozenset({"model", "groups", "update", "recalibration", "decision_points"})


def is_validation_file(path: Path) -> bool:
    """Whether a file says which model is held against people, and not what is fitted to them.

    One that cannot be read, or says neither, is taken for a study file: what is wrong with it is then said as of one.
    """
    try:
        tree = tomllib.loads(path.read_text(encoding="utf-8"))
    except (OSError, ValueError, RecursionError):
        return False
    named = tree.keys()
    if _OF_STUDIES & named:
        return False
    return bool(_OF_VALIDATIONS & named) or ("cohort" in named and not _HEAD & named)


def open_people(
    path: Path, model_file: Path | None, practice_points: Sequence[PracticePoint], course: Course
) -> OpenedValidation:
    """The file read with its model, or with the one that is named, and its people checked.

    Raises ValidationRefused for the file, CoefficientFileRefused for the model, UsageError where none is named, and
    Stopped. People that cannot be read are no reason to refuse it: `fault` says why.
    """
    from clinicalc.operations.validating import check_people, open_validation

    course.say("Reading the model")
    settled = _with_points(open_validation(path, model_file), practice_points)
    course.say("Reading the people")
    people: CheckedPeople | None = None
    fault: ClinicalcError | None = None
    try:
        people = check_people(settled, course)
    except Stopped:
        raise
    except ClinicalcError as error:
        fault = error
    digest = f"{digest_files((path, settled.cohort_file), course)} {settled.model.fingerprint}"
    return OpenedValidation(path, model_file, settled, digest, people, fault, tuple(practice_points))


def validate_opened(opened: OpenedValidation, course: Course) -> MadeValidation:
    """How the model does in the people that were checked. Raises ValidationRefused, UsageError and Stopped."""
    from clinicalc.operations.validating import validate

    course.say("Comparing what is predicted with what happened")
    return MadeValidation(validate(_people(opened), course), opened)


def update_opened(
    opened: OpenedValidation, wish: UpdateWish, new: NewVersion, before: Validation | None, course: Course
) -> MadeUpdate:
    """The model updated, the coefficient file of the new version proved and looked at; nothing is written.

    `before` is the model in these people, made here where it is None. Where the tests keep the model there is no new
    version. Raises FitRefused, ValidationRefused, DescriptionRefused, UsageError and Stopped.
    """
    from clinicalc.operations.validating import package_new_version, update, validate, validate_new_version

    people = _people(opened)
    if before is None:
        course.say("Comparing what is predicted with what happened")
        before = validate(people, course)
    course.say("Updating")
    made = update(people, wish, course)
    if made.keeps:
        return MadeUpdate(made, opened, new, None, before)
    package = package_new_version(people, made, new, course, before)
    course.say("Looking at the new version")
    return MadeUpdate(made, opened, new, package, before, validate_new_version(people, package, course))


def sign_update(made: MadeUpdate, key: SigningKey, course: Course) -> Package:
    """The coefficient file of an update once more, signed. Raises as `update_opened` does."""
    from clinicalc.operations.validating import package_new_version

    return package_new_version(_people(made.ground), made.update, made.new, course, made.before, key)


def _people(opened: OpenedValidation) -> CheckedPeople:
    if opened.people is None:
        raise UsageError("there are no people to look at.", do="See to the data first.")
    return opened.people


def _with_points(settled: SettledValidation, practice_points: Sequence[PracticePoint]) -> SettledValidation:
    """Where the file names no decision points, those of the practice stand beside the model's own."""
    from clinicalc.assessment.decision import points_for
    from clinicalc.validation.predicted import FlagPoint

    if settled.points is not None:
        return settled
    spans = settled.model.spans if settled.spans is None else settled.spans
    named = (point for span in spans for point in points_for(settled.model, span, practice_points))
    found = {point.probability: point.label for point in named}
    points = tuple(FlagPoint(value, label) for value, label in sorted(found.items()))
    return replace(settled, points=points) if points else settled
