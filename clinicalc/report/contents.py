"""What stands on a print, before anything is measured: frozen nouns of text, and the figures that are drawn from."""

from dataclasses import dataclass
from enum import Enum, auto

from clinicalc.report.calibration_figure import ShownCalibration
from clinicalc.report.comparison_figure import Compared
from clinicalc.report.effect_figure import Moves
from clinicalc.report.flow_figure import Flow
from clinicalc.report.group_figure import ShownGroups
from clinicalc.report.key_figures import KeyFigures
from clinicalc.report.measured import Measured
from clinicalc.report.net_benefit_words import ShownNetBenefit
from clinicalc.report.range_line import RangeOfValues
from clinicalc.report.shares_figure import Walk
from clinicalc.report.spread_figure import ShownSpread


@dataclass(frozen=True, slots=True)
class Result:
    """The top of the sheet: the number (or the words in its place), what it is about, and what it means."""

    figure: str
    """The percentage, or the words in the place of a number."""
    probability: float | None
    """None where there is no number."""
    headline: str
    detail: str
    """What the outcome is in full, "" where the headline says it."""
    sentences: tuple[str, ...]
    vetted: bool


@dataclass(frozen=True, slots=True)
class RulerPart:
    """The ruler with the words under it; `caption` names what its axis counts."""

    measured: Measured
    caption: str
    notes: tuple[str, ...]


@dataclass(frozen=True, slots=True)
class Fact:
    """A named statement. The paragraphs stand below each other; the first is `strong` where it is a key figure."""

    name: str
    paragraphs: tuple[str, ...]
    strong: bool = False


@dataclass(frozen=True, slots=True)
class FactList:
    """Statements below each other, names at the left; `key` facts stand in line with the result."""

    facts: tuple[Fact, ...]
    key: bool = False


@dataclass(frozen=True, slots=True)
class Mark:
    """The number of a finding; `weight` is 0 for a stop, 1 for a caution, 2 for a note: the amount of ink."""

    number: str
    weight: int


@dataclass(frozen=True, slots=True)
class Remark:
    """A finding with its mark."""

    mark: Mark
    grade: str
    message: str


@dataclass(frozen=True, slots=True)
class RemarkList:
    """Findings below each other."""

    remarks: tuple[Remark, ...]


@dataclass(frozen=True, slots=True)
class TypedCell:
    """A value as it was typed: the value itself, and what stands after it (unit, day, remark), softer."""

    value: str
    after: str = ""


@dataclass(frozen=True, slots=True)
class MarksCell:
    """The marks of the findings about a value."""

    marks: tuple[Mark, ...]


@dataclass(frozen=True, slots=True)
class RangeCell:
    """The derivation range and where the value lies in it, both in one unit; no value where none was used."""

    span: RangeOfValues
    value: float | None
    inside: bool


@dataclass(frozen=True, slots=True)
class NotedCell:
    """A text, and softer under it what is to be known of it."""

    text: str
    notes: tuple[str, ...]


NOTHING = "–"
"""In the place of a value as used, where what was typed could not be used."""

Cell = str | TypedCell | NotedCell | MarksCell | RangeCell


class RowKind(Enum):
    """What a row of values holds: a whole question about an exclusion, a measured value, or one of a few answers."""

    QUESTION = auto()
    NUMBER = auto()
    ANSWER = auto()


@dataclass(frozen=True, slots=True)
class Row:
    """One line of a table; as many cells as the table has columns."""

    cells: tuple[Cell, ...]
    kind: RowKind = RowKind.NUMBER
    keep: bool = False
    """Whether it is held to the row after it."""
    marked: bool = False
    """Whether it stands on wash, in semibold."""


@dataclass(frozen=True, slots=True)
class Column:
    """A column of a table: its heading, left edge and width in points; `at_end` sets heading and words right."""

    heading: str
    left: float
    width: float
    at_end: bool = False


@dataclass(frozen=True, slots=True)
class Table:
    """Rows under headings; the headings are repeated where the table goes on over a page."""

    columns: tuple[Column, ...]
    rows: tuple[Row, ...]
    kinds_apart: bool = False
    """Whether, as long as it is short, measured values and answers stand side by side under the questions."""
    small: bool = False
    """Whether it is set in small type."""


@dataclass(frozen=True, slots=True)
class Prose:
    """Plain paragraphs; `keep` holds them to what follows, the table they explain."""

    paragraphs: tuple[str, ...]
    keep: bool = False


@dataclass(frozen=True, slots=True)
class SignatureLine:
    """Places to write on, each with its caption."""

    captions: tuple[str, ...]


@dataclass(frozen=True, slots=True)
class SharesPart:
    """Shares as a walk."""

    walk: Walk


@dataclass(frozen=True, slots=True)
class ComparisonPart:
    """A comparison with numbers."""

    compared: Compared


@dataclass(frozen=True, slots=True)
class EffectPart:
    """Patients with the numbers of two versions."""

    moves: Moves


@dataclass(frozen=True, slots=True)
class FlowPart:
    """The way of people into a fit."""

    flow: Flow


@dataclass(frozen=True, slots=True, eq=False)
class CalibrationPart:
    """Predicted risks against what happened."""

    shown: ShownCalibration


@dataclass(frozen=True, slots=True, eq=False)
class SpreadPart:
    """How predictions lie."""

    shown: ShownSpread


@dataclass(frozen=True, slots=True)
class KeyFiguresPart:
    """A few figures in a row."""

    shown: KeyFigures


@dataclass(frozen=True, slots=True, eq=False)
class NetBenefitPart:
    """What acting by a model is worth over decision points."""

    shown: ShownNetBenefit


@dataclass(frozen=True, slots=True)
class GroupsPart:
    """Groups of people side by side."""

    shown: ShownGroups


StudyPart = FlowPart | CalibrationPart | SpreadPart | KeyFiguresPart | NetBenefitPart | GroupsPart
"""Figures of people, which stand for themselves."""
FigurePart = SharesPart | ComparisonPart | EffectPart | StudyPart
Block = FactList | RemarkList | Table | Prose | SignatureLine | FigurePart


@dataclass(frozen=True, slots=True)
class Section:
    """A heading and what stands under it."""

    heading: str
    blocks: tuple[Block, ...]
    whole: bool = False
    """Whether it is held together, unless it is too long for that."""


@dataclass(frozen=True, slots=True)
class Pair:
    """Two sections in small type side by side; below each other where that would be too high."""

    left: Section
    right: Section


@dataclass(frozen=True, slots=True)
class Furniture:
    """What stands at the head and at the foot of every page."""

    practice: str
    label: str
    strip: str
    """The words of the strip over the sheet, "" for none."""
    fingerprint_note: str
    """Over the foot of the first page: the whole fingerprint."""
    caution: str
    """There as well, where what is said before the signature stands on a later page."""
    model: str
    fingerprint: str
    program: str
    printed: str
    approval: str = ""
    """Who approved the file and until when, "" for nobody."""
    letterhead: tuple[str, ...] = ()
    """The lines over the print in place of the practice's bare name; none where there is no letterhead."""


@dataclass(frozen=True, slots=True)
class Count:
    """How many people, and what of them: "12", "will have a first heart attack or stroke"."""

    figure: str
    words: str


@dataclass(frozen=True, slots=True)
class PatientSheet:
    """The page for the patient: whole numbers and plain words."""

    title: str
    lines: tuple[str, ...]
    """Under the title: what counts as the outcome, until when, for whom."""
    probability: float
    opening: str
    counts: tuple[Count, Count]
    note: str
    sections: tuple[Section, ...]
    agreed: str
    """The heading of the lines to write on."""
    vetted: bool


@dataclass(frozen=True, slots=True)
class Sheet:
    """A whole print; the patient's page is the last one, where there is one.

    `further` stands before the last of the sections where one page holds everything, else on pages after them.
    """

    title: str
    furniture: Furniture
    label: str
    person: str
    assessed: str
    result: Result
    ruler: RulerPart | None
    facts: FactList
    sections: tuple[Section | Pair, ...]
    further: tuple[Section, ...] = ()
    patient: PatientSheet | None = None
