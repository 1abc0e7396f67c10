"""What validating and updating a model came to on the Study page: the people, the figures, the new version.

What was made stays when something later is refused; it is stale where it is of other people or of another model than
those that are open.
"""

from __future__ import annotations

from dataclasses import dataclass, replace
from pathlib import Path
from typing import TYPE_CHECKING

from clinicalc.errors import ClinicalcError

if TYPE_CHECKING:
    from clinicalc.assessment.model import Model
    from clinicalc.development.package import Package
    from clinicalc.operations.updating import NewVersion
    from clinicalc.operations.validating import CheckedPeople
    from clinicalc.settings import PracticePoint
    from clinicalc.validation.updated import Update
    from clinicalc.validation.validated import Validation
    from clinicalc.validation.validation_file import SettledValidation


@dataclass(frozen=True, slots=True, eq=False)
class OpenedValidation:
    """A model and people that it is held against. `path` is the validation file, or the study file with the people.

    `model_file` is the coefficient file that was chosen here, None for the one the file names. `digest` is of the bytes
    of the file, of its people and of the model. `people` is None where they could not be read, and `fault` says why.
    """

    path: Path
    model_file: Path | None
    settled: SettledValidation
    digest: str
    people: CheckedPeople | None
    fault: ClinicalcError | None = None
    practice_points: tuple[PracticePoint, ...] = ()

    @property
    def model(self) -> Model:
        """The model."""
        return self.settled.model

    @property
    def may_validate(self) -> bool:
        """Whether there are people without a stop."""
        return self.people is not None and not self.people.cohort.stops


@dataclass(frozen=True, slots=True, eq=False)
class MadeValidation:
    """The figures, and what they were made of."""

    validation: Validation
    ground: OpenedValidation


@dataclass(frozen=True, slots=True, eq=False)
class MadeUpdate:
    """An update with its coefficient file; no `package` where the tests keep the model.

    `new` says how the version is called; `before` and `after` are the model and the new version in these people.
    """

    update: Update
    ground: OpenedValidation
    new: NewVersion
    package: Package | None
    before: Validation
    after: Validation | None = None


@dataclass(frozen=True, slots=True, eq=False)
class ValidationState:
    """A new one takes its place with every change."""

    opened: OpenedValidation | None = None
    not_opened: ClinicalcError | None = None
    """Why the model that was chosen for a study's people was not taken."""
    made: MadeValidation | None = None
    not_made: ClinicalcError | None = None
    update: MadeUpdate | None = None
    written: Path | None = None
    horizon: int = -1
    """The place of the horizon that is shown; the last one, the longest, where nobody chose."""

    @property
    def is_stale(self) -> bool:
        """Whether the figures that are shown are of other people or of another model than those that are open."""
        return self.made is not None and not self._is_of_opened(self.made.ground)

    @property
    def is_validated(self) -> bool:
        """Whether there are figures of what is open."""
        return self.made is not None and not self.is_stale

    @property
    def is_update_stale(self) -> bool:
        """The same of the update."""
        return self.update is not None and not self._is_of_opened(self.update.ground)

    def with_opened(self, opened: OpenedValidation | None) -> ValidationState:
        """Another model or other people are open, or the same ones read again; what was made stays."""
        return replace(self, opened=opened, not_opened=None, not_made=None)

    def with_made(self, made: MadeValidation) -> ValidationState:
        """It was validated anew."""
        shown = self.horizon if self.horizon < len(made.validation.horizons) else -1
        return replace(self, made=made, not_made=None, horizon=shown)

    def with_update(self, update: MadeUpdate) -> ValidationState:
        """It was updated anew; nothing of it is written."""
        return replace(self, update=update, written=None)

    def _is_of_opened(self, ground: OpenedValidation) -> bool:
        return self.opened is not None and ground.digest == self.opened.digest
