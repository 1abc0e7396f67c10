"""The one object from which window, print, copied text and record are made."""

from dataclasses import dataclass
from datetime import date, datetime

from clinicalc.assessment.comparison import Comparison
from clinicalc.assessment.decision import PlacedPoint
from clinicalc.assessment.findings import Finding, FindingCode, Grade
from clinicalc.assessment.matching_age import MatchingAge
from clinicalc.assessment.model import Model
from clinicalc.assessment.not_measured import NotMeasured
from clinicalc.assessment.shares import Shares
from clinicalc.assessment.spread import Spread
from clinicalc.assessment.vetting import Vetting
from clinicalc.coefficients.spans import Span
from clinicalc.units.averaged import Averaged


@dataclass(frozen=True, slots=True)
class Band:
    """How precisely the model's coefficients are known for people with these values."""

    level: float
    lower: float
    upper: float
    basis: str


@dataclass(frozen=True, slots=True)
class Estimate:
    """The number: eta is the (recalibrated) linear predictor, g(eta) = probability; band is None for a reason.

    Where values were not measured the probability is an average over them, and eta is the link of that average: no
    linear predictor of any one set of values.
    """

    eta: float
    probability: float
    complement: float
    band: Band | None
    band_absent_because: str
    not_measured: NotMeasured | None = None
    comparison: Comparison | None = None
    decision_points: tuple[PlacedPoint, ...] = ()
    spread: Spread | None = None
    """None where the file states no within-person variation of a value that counts here."""
    shares: Shares | None = None
    shares_absent_because: str = ""
    reference_person: str = ""
    """Whom shares and matching age compare with, in short; "" where the file names nobody."""
    matching_age: MatchingAge | None = None
    """None where nobody asked for it."""


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
    averaged: Averaged | None = None
    """What the value is the mean of; None for one reading of one visit."""
    not_measured: bool = False
    """Whether it was said that the value was not measured; `shown` and `used` then say so."""


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
    vetting: Vetting | None = None
    """The approval under which the model was used; None for a file that was opened by its name."""

    @property
    def stops(self) -> tuple[Finding, ...]:
        """Findings that leave no number, without the entries that are simply not there yet."""
        return tuple(f for f in self.findings if f.grade is Grade.STOP and f.code is not FindingCode.MISSING)

    @property
    def missing(self) -> tuple[Finding, ...]:
        """The entries that are not there yet."""
        return tuple(f for f in self.findings if f.code is FindingCode.MISSING)
