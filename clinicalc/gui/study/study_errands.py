"""What the page has done in errands: each verb in a thread of its own, pandas and statsmodels loaded there at most."""

from __future__ import annotations

import hashlib
from pathlib import Path
from typing import TYPE_CHECKING

from clinicalc.errors import ClinicalcError, Stopped, UsageError
from clinicalc.gui.study.study_state import MadeFit, OpenedStudy
from clinicalc.operations.course import Course

if TYPE_CHECKING:
    from clinicalc.development.package import Package
    from clinicalc.operations.study_draft import StudyDraft

_BLOCK = 1 << 20


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
    return OpenedStudy(path, study, _digest(path, study.cohort_file, course), cohort, fault)


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


def _digest(study: Path, cohort: Path, course: Course) -> str:
    """A digest of the bytes of both files; one that cannot be read counts as empty."""
    digest = hashlib.sha256()
    for path in (study, cohort):
        try:
            with path.open("rb") as stream:
                while block := stream.read(_BLOCK):
                    course.go_on()
                    digest.update(block)
        except OSError:
            pass
        digest.update(b"|")
    return digest.hexdigest()
