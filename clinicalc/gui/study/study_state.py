"""What a study has come to on its page: the file that is open, its people, its fit, its package, and what was refused.

What was fitted stays when something later is refused; `is_stale` says where it belongs to earlier data or another
study file, which is so only where the bytes of one of the two are others now.
"""

from __future__ import annotations

from dataclasses import dataclass, field, replace
from pathlib import Path
from typing import TYPE_CHECKING

from clinicalc.errors import ClinicalcError
from clinicalc.gui.study.validation_state import OpenedValidation, ValidationState

if TYPE_CHECKING:
    from clinicalc.cohort.checked import CheckedCohort
    from clinicalc.development.estimating import FittedStudy
    from clinicalc.development.package import Package
    from clinicalc.development.study import Study
    from clinicalc.development.study_calibration import FitCalibration
    from clinicalc.operations.study_draft import StudyDraft


@dataclass(frozen=True, slots=True, eq=False)
class OpenedStudy:
    """A study file that was read, and its people as far as they could be. `digest` is of both files' bytes.

    `cohort` is None where the people could not be read, and `fault` then says why.
    """

    path: Path
    study: Study
    digest: str
    cohort: CheckedCohort | None
    fault: ClinicalcError | None = None


@dataclass(frozen=True, slots=True, eq=False)
class MadeFit:
    """A fit, and what it was made from: the digest at that time, and the name of the study file.

    `calibrations` are those in its own people, one a fit and horizon.
    """

    fitted: FittedStudy
    digest: str
    name: str
    calibrations: tuple[FitCalibration, ...] = ()


@dataclass(frozen=True, slots=True, eq=False)
class Refusal:
    """Something that was asked for and not done: its name, and why."""

    name: str
    error: ClinicalcError


@dataclass(frozen=True, slots=True, eq=False)
class StudyState:
    """Everything the page shows; a new one takes its place with every change."""

    opened: OpenedStudy | None = None
    not_opened: Refusal | None = None
    fit: MadeFit | None = None
    not_fitted: ClinicalcError | None = None
    package: Package | None = None
    not_packaged: ClinicalcError | None = None
    written: Path | None = None
    draft: StudyDraft | None = None
    """The study file that is being written here; Data and Model then show it, and not what is open."""
    validating: ValidationState = field(default_factory=ValidationState)

    @property
    def is_stale(self) -> bool:
        """Whether the fit that is shown belongs to other data, or to another file, than those that are open."""
        if self.fit is None or self.opened is None:
            return self.fit is not None and self.people_only is not None
        return self.fit.digest != self.opened.digest

    @property
    def people_only(self) -> OpenedValidation | None:
        """The validation file that is open, None where a study file is, or nothing."""
        return self.validating.opened if self.opened is None else None

    @property
    def path(self) -> Path | None:
        """The file that is open, of either kind."""
        opened = self.opened or self.people_only
        return None if opened is None else opened.path

    @property
    def may_fit(self) -> bool:
        """Whether there are people without a stop."""
        cohort = None if self.opened is None else self.opened.cohort
        return cohort is not None and not cohort.stops

    @property
    def is_fitted(self) -> bool:
        """Whether there is a fit of what is open."""
        return self.fit is not None and not self.is_stale

    def with_opened(self, opened: OpenedStudy) -> StudyState:
        """The study was opened, or read again; the fit stays, and where the bytes are the same its package does too."""
        before = self.validating.opened
        kept = before if before is not None and before.path == opened.path else None
        validating = self.validating.with_opened(kept)
        now = replace(self, opened=opened, not_opened=None, not_fitted=None, not_packaged=None, draft=None)
        now = replace(now, validating=validating)
        return replace(now, package=None, written=None) if now.is_stale else now

    def with_people_only(self, opened: OpenedValidation) -> StudyState:
        """A validation file was opened, or read again; a fit that was made before stays."""
        now = replace(self, opened=None, not_opened=None, not_fitted=None, not_packaged=None, draft=None)
        validating = self.validating.with_opened(opened)
        return replace(now, package=None, written=None, validating=validating)

    def with_fit(self, fit: MadeFit) -> StudyState:
        """It was fitted anew; what was packaged before is of the fit before."""
        return replace(self, fit=fit, not_fitted=None, package=None, not_packaged=None, written=None)
