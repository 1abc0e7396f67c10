"""What the page has done in errands: each verb in a thread of its own, pandas and statsmodels loaded there at most."""

from __future__ import annotations

from collections.abc import Sequence
from pathlib import Path
from typing import TYPE_CHECKING

from clinicalc.errors import ClinicalcError, Stopped, UsageError
from clinicalc.gui.study.file_digest import digest_files
from clinicalc.gui.study.study_state import MadeFit, OpenedStudy
from clinicalc.operations.course import Course

if TYPE_CHECKING:
    from clinicalc.development.estimating import FittedStudy
    from clinicalc.development.package import Package
    from clinicalc.gui.study.validation_state import OpenedValidation
    from clinicalc.library.keys import SigningKey
    from clinicalc.operations.study_draft import StudyDraft
    from clinicalc.settings import PracticePoint


def open_file(
    path: Path, model_file: Path | None, points: Sequence[PracticePoint], course: Course
) -> OpenedStudy | OpenedValidation:
    """A study file or a validation file, whichever it is, with its people. Raises what either does when it is opened.

    A validation file takes `model_file` in the place of its own model where one is named, and `points` are the
    practice's decision points.
    """
    from clinicalc.gui.study.validation_errands import is_validation_file, open_people

    return open_people(path, model_file, points, course) if is_validation_file(path) else open_and_check(path, course)


def open_and_check(path: Path, course: Course) -> OpenedStudy:
    """The study file read and its people checked. Raises DescriptionRefused for the study file, and Stopped.

    People that cannot be read are no reason to refuse the study: `fault` says why.
    """
    from clinicalc.operations.study import check_data, open_study

    course.say("Reading the study file")
    study = open_study(path)
    course.say("Reading the people")
    try:
        cohort, fault = check_data(study, course), None
    except Stopped:
        raise
    except ClinicalcError as error:
        cohort, fault = None, error
    return OpenedStudy(path, study, digest_files((path, study.cohort_file), course), cohort, fault)


def fit_opened(opened: OpenedStudy, course: Course) -> MadeFit:
    """The study fitted to the people that were checked. Raises DescriptionRefused, UsageError and Stopped."""
    from clinicalc.development.study_calibration import calibrate_fit
    from clinicalc.operations.study import fit_study

    if opened.cohort is None:
        raise UsageError("there are no people to fit to.", do="See to the data first.")
    course.say("Fitting")
    fitted = fit_study(opened.study, opened.cohort, course)
    course.say("Comparing what is predicted with what happened")
    return MadeFit(fitted, opened.digest, opened.path.name, calibrate_fit(fitted))


def package_fit(fit: MadeFit, course: Course) -> Package:
    """The coefficient file of a fit, proved; nothing is written. Raises DescriptionRefused and Stopped."""
    from clinicalc.operations.study import package_study

    course.say("Working the examples")
    return package_study(fit.fitted, course)


def sign_study(fitted: FittedStudy, key: SigningKey, course: Course) -> Package:
    """The coefficient file of a fit once more, signed. Raises as `package_fit` does."""
    from clinicalc.operations.study import package_study

    return package_study(fitted, course, key)


def begin_from_people(path: Path, course: Course) -> StudyDraft:
    """A study file proposed for a file of people. Raises TableRefused and Stopped."""
    from clinicalc.operations.study_draft import begin_draft

    return begin_draft(path, course)


def change_opened(opened: OpenedStudy, course: Course) -> StudyDraft:
    """The study file that is open, to be changed. Raises DescriptionRefused and Stopped.

    Where the people cannot be read, the columns are those that the study file names.
    """
    from clinicalc.cohort.table import read_table
    from clinicalc.errors import TableRefused
    from clinicalc.operations.study_draft import draft_study

    course.say("Reading the people")
    try:
        columns = read_table(opened.study.cohort_file, course).names
    except TableRefused:
        columns = tuple(entry.column for entry in opened.study.dictionary.columns)
    return draft_study(opened.path, columns)
