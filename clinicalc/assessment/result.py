"""The one object from which window, print, copied text and record are made."""

from dataclasses import dataclass
from datetime import date, datetime

from clinicalc.assessment.findings import Finding, FindingCode, Grade
from clinicalc.assessment.model import Model
from clinicalc.coefficients.spans import Span


@dataclass(frozen=True, slots=True)
class Band:
    """How precisely the model's coefficients are known for people with these values."""

    level: float
    lower: float
    upper: float
    basis: str


@dataclass(frozen=True, slots=True)
class Estimate:
    """The number: eta is the (recalibrated) linear predictor, g(eta) = probability; band is None for a reason."""

    eta: float
    probability: float
    complement: float
    band: Band | None
    band_absent_because: str


@dataclass(frozen=True, slots=True)
class ValueLine:
    """One value as it was typed and as it was used. `number` is None for an answer or where nothing could be used."""

    id: str
    label: str
    typed: str
    """The text with the unit it was taken in as a UCUM code, so that it can be typed again; "" when unanswered."""
    shown: str
    """The same for people, with the unit in its trade spelling."""
    used: str
    """As used by the model, in the file's unit; "" where nothing was used."""
    number: float | None
    answer: str | None
    unit: str | None
    dated: date | None
    derived: bool = False
    exclusion: bool = False
    worked_out: bool = False


@dataclass(frozen=True, slots=True)
class Assessment:
    """One patient's values against one model at one moment."""

    model: Model
    at: datetime
    label: str
    span: Span | None
    level: float
    recalibration: str | None
    equation: str | None
    values: tuple[ValueLine, ...]
    findings: tuple[Finding, ...]
    estimate: Estimate | None

    @property
    def stops(self) -> tuple[Finding, ...]:
        """Findings that leave no number, without the entries that are simply not there yet."""
        return tuple(f for f in self.findings if f.grade is Grade.STOP and f.code is not FindingCode.MISSING)

    @property
    def missing(self) -> tuple[Finding, ...]:
        """The entries that are not there yet."""
        return tuple(f for f in self.findings if f.code is FindingCode.MISSING)
