"""A study, from its file to the packaged model: the verbs that window and command share.

    open_study -> check_data -> fit_study -> package_study -> write_study

Nothing is written before the last, which puts a whole file in place or none. Long work tells `course` how far it is.
"""

from dataclasses import replace as replace_fields
from pathlib import Path

from clinicalc.coefficients.reader import read_bytes
from clinicalc.coefficients.writer import write_bytes
from clinicalc.cohort.checked import CheckedCohort
from clinicalc.cohort.checking import check_cohort
from clinicalc.cohort.table import read_table
from clinicalc.development.estimating import FittedStudy, estimate_study
from clinicalc.development.package import Package, check_place, write_package
from clinicalc.development.study import Study, read_study
from clinicalc.development.study_package import package_fitted
from clinicalc.errors import UsageError
from clinicalc.library.file_signatures import sign_file
from clinicalc.library.keys import SigningKey
from clinicalc.operations.course import Course


def open_study(path: Path) -> Study:
    """The study file read. Raises DescriptionRefused with every problem, each at its place in the file."""
    return read_study(path)


def check_data(study: Study, course: Course) -> CheckedCohort:
    """The people of the study, read and checked; what is wrong with them is in `problems`, stops among them.

    Raises an error of the cohort room where the file cannot be read at all, and Stopped.
    """
    table = read_table(study.cohort_file, course)
    return check_cohort(table, study.dictionary, study.content.predictors, course)


def fit_study(study: Study, cohort: CheckedCohort, course: Course) -> FittedStudy:
    """Every equation of the study fitted to its people.

    Raises DescriptionRefused with everything that forbids a fit: stops of the data, no events, separation, a horizon
    beyond the follow-up. Raises Stopped.
    """
    return estimate_study(study, cohort, course)


def package_study(fitted: FittedStudy, course: Course, key: SigningKey | None = None) -> Package:
    """The coefficient file of a fitted study, complete and proved by its worked examples; nothing is written.

    With a `key` it is signed. Raises DescriptionRefused with every problem, and Stopped.
    """
    package = package_fitted(fitted, course)
    if key is None:
        return package
    signed = sign_file(read_bytes(package.data, package.model.name), key)
    return replace_fields(package, content=signed, data=write_bytes(signed))


def require_place(path: Path, *, replace: bool = False) -> None:
    """Nothing, where a file may be put at `path`: asked before long work is done for it. Raises UsageError."""
    if not path.parent.is_dir():
        raise UsageError(
            f"there is no folder {path.parent}, so nothing can be written there.", do="Make it, or name another."
        )
    check_place(path, replace=replace)


def write_study(package: Package, path: Path, *, replace: bool = False) -> None:
    """Put the coefficient file at `path`, whole or not at all.

    Raises UsageError where something stands there and `replace` is not said, and FileNotWritten.
    """
    write_package(package, path, replace=replace)
