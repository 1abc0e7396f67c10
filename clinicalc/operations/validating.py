"""Does a model hold in these people, and can it be mended: the verbs that window and command share.

    open_validation -> check_people -> validate -> write tables and report
                                    -> update -> package -> operations.study.write_study

Nothing is written before the last of each. Long work tells `course` how far it is.
"""

from dataclasses import dataclass
from dataclasses import replace as replace_fields
from pathlib import Path

from clinicalc.assessment.model import Model
from clinicalc.cohort.checked import CheckedCohort
from clinicalc.cohort.checking import check_cohort
from clinicalc.cohort.table import read_table
from clinicalc.development.package import Package
from clinicalc.errors import UsageError
from clinicalc.library.keys import SigningKey
from clinicalc.operations.approved import ApprovedModel
from clinicalc.operations.bedside import open_model
from clinicalc.operations.course import Course
from clinicalc.operations.updating import NewVersion, package_update
from clinicalc.validation.people import find_people, find_stated_problems
from clinicalc.validation.plan import ValidationPlan
from clinicalc.validation.predicted import FlagPoint
from clinicalc.validation.updated import Update, UpdateMethod, UpdateWish
from clinicalc.validation.updating import update_model
from clinicalc.validation.validated import Validation
from clinicalc.validation.validating import validate_model
from clinicalc.validation.validation_file import (
    SettledValidation,
    make_plan,
    read_validation_file,
    settle_validation,
)


@dataclass(frozen=True, slots=True, eq=False)
class CheckedPeople:
    """The people of a validation, read and checked; with stops among `cohort.problems` nothing is made of them."""

    settled: SettledValidation
    cohort: CheckedCohort
    plan: ValidationPlan

    @property
    def model(self) -> Model:
        """The model that is held against them."""
        return self.settled.model

    @property
    def file(self) -> str:
        """The name of the file they stand in."""
        return self.settled.cohort_file.name


def open_validation(path: Path, model: Path | ApprovedModel | None = None) -> SettledValidation:
    """The validation file at `path` with its model, or with another: a coefficient file, or an approved model.

    An approved model is looked at as it is used: with the recalibration of its approval, and with its decision points
    where the validation file names none. Raises ValidationRefused with every problem of the file,
    CoefficientFileRefused with those of the model, and UsageError where nobody names a model.
    """
    file = read_validation_file(path)
    if isinstance(model, ApprovedModel):
        return _as_approved(settle_validation(file, model.model), model)
    place = file.model_file if model is None else model
    if place is None:
        file.refuse()
        raise UsageError(
            "the file names no model.", where=file.name, do='Say model = "FILE.json" in it, or --model FILE.json.'
        )
    return settle_validation(file, open_model(place))


def check_people(settled: SettledValidation, course: Course) -> CheckedPeople:
    """The people of the validation, read and checked.

    Raises an error of the cohort room where their file cannot be read at all, ValidationRefused where a group or an
    exclusion is none, and Stopped.
    """
    table = read_table(settled.cohort_file, course)
    cohort = check_cohort(table, settled.dictionary, settled.predictors, course)
    # what only a fit cannot do with, such as a column that is the same for everybody, is no fault here
    stated = replace_fields(cohort, problems=find_stated_problems(cohort))
    return CheckedPeople(settled, stated, make_plan(settled, table, stated))


def validate(people: CheckedPeople, course: Course) -> Validation:
    """How the model does in these people.

    Raises ValidationRefused for stops of the data and where nobody can be used, UsageError for a horizon beyond the
    follow-up, and Stopped.
    """
    return validate_model(people.model, people.cohort, people.plan, course)


def choose_wish(settled: SettledValidation, method: UpdateMethod | None = None) -> UpdateWish:
    """How the model is to be updated: as the file says, by another `method` where one is named.

    The new version keeps the horizons that the file names, all where it names none. Raises UsageError where nobody says
    how.
    """
    said = None if settled.update is None else settled.update.wish
    if method is None and said is None:
        raise UsageError(
            "nobody says how the model is to be updated.",
            where=settled.name,
            do='Say method = "closed_test" in [update], or --method closed_test.',
        )
    if said is None:
        assert method is not None
        said = UpdateWish(method)
    return replace_fields(said, method=method or said.method, spans=settled.spans)


def name_version(settled: SettledValidation, version: str = "") -> NewVersion:
    """What the new version is to be called and whom it is from: as the file says, or another `version`.

    Raises UsageError where nobody names a version, or says who the people are.
    """
    said = settled.update
    named = version or ("" if said is None else said.version)
    if not named:
        raise UsageError(
            "nobody says what the new version is called.",
            where=settled.name,
            do=f'Say version = "…" in [update], or --version; the model is {settled.model.content.version}.',
        )
    if not settled.cohort:
        raise UsageError(
            "nobody says who these people are, and a new version has to say it.",
            where=settled.name,
            do='Say words = "…" in [cohort] of a validation file.',
        )
    new = NewVersion(named, settled.cohort, begins=settled.from_, ends=settled.to)
    if said is None:
        return new
    answers = tuple((answer.item, answer.text) for answer in said.documentation)
    return replace_fields(new, id=said.id, population=said.population, documentation=answers)


def update(people: CheckedPeople, wish: UpdateWish, course: Course) -> Update:
    """The model updated to these people, as figures; whoever the model is not for, or gives no number, is left out.

    Raises ValidationRefused for stops of the data and where nobody can be used, FitRefused for what these people do
    not let be estimated, and Stopped.
    """
    used = find_people(people.model, people.cohort, people.plan, course)
    return update_model(people.model, used.columns, used.outcome, wish, course)


def package_new_version(
    people: CheckedPeople,
    updated: Update,
    new: NewVersion,
    course: Course,
    validation: Validation | None = None,
    key: SigningKey | None = None,
) -> Package:
    """The coefficient file of the new version, complete and proved; nothing is written.

    Raises DescriptionRefused with every problem, and Stopped.
    """
    return package_update(people.model, updated, new, course, validation=validation, key=key)


def validate_new_version(people: CheckedPeople, package: Package, course: Course) -> Validation:
    """How the new version does in the very people it was updated to, which is no validation of it.

    Raises as `validate` does.
    """
    spans = package.model.spans
    wanted = people.plan.spans
    kept = None if wanted is None else tuple(span for span in wanted if span in spans)
    # the recalibrations of the parent are not the new version's
    plan = replace_fields(people.plan, recalibration="", spans=kept)
    return validate_model(package.model, people.cohort, plan, course)


def _as_approved(settled: SettledValidation, approved: ApprovedModel) -> SettledValidation:
    recalibration = approved.settle_recalibration(settled.recalibration or None)
    points = settled.points
    if points is None and approved.decision_points:
        points = tuple(FlagPoint(point.probability, point.label) for point in approved.decision_points)
    return replace_fields(settled, recalibration=recalibration or "", points=points)
