"""What stands on a print, before anything is measured: frozen nouns of text, and the figures that are drawn from."""

from dataclasses import dataclass

from clinicalc.report.measured import Measured
from clinicalc.report.range_line import RangeOfValues


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


Cell = str | TypedCell | MarksCell | RangeCell


@dataclass(frozen=True, slots=True)
class Row:
    """One line of a table; as many cells as the table has columns."""

    cells: tuple[Cell, ...]


@dataclass(frozen=True, slots=True)
class Column:
    """A column of a table: its heading, its left edge and its width in points; `at_end` sets the heading right."""

    heading: str
    left: float
    width: float
    at_end: bool = False


@dataclass(frozen=True, slots=True)
class Table:
    """Rows under headings; the headings are repeated where the table goes on over a page."""

    columns: tuple[Column, ...]
    rows: tuple[Row, ...]


@dataclass(frozen=True, slots=True)
class Prose:
    """Plain paragraphs."""

    paragraphs: tuple[str, ...]


@dataclass(frozen=True, slots=True)
class SignatureLine:
    """Places to write on, each with its caption."""

    captions: tuple[str, ...]


Block = FactList | RemarkList | Table | Prose | SignatureLine


@dataclass(frozen=True, slots=True)
class Section:
    """A heading and what stands under it."""

    heading: str
    blocks: tuple[Block, ...]
    whole: bool = False
    """Whether it is held together, unless it is too long for that."""
    off_first: bool = False
    """Whether it never stands on the first page."""


@dataclass(frozen=True, slots=True)
class Furniture:
    """What stands at the head and at the foot of every page."""

    practice: str
    label: str
    strip: str
    """The words of the strip over the sheet, "" for none."""
    notes: tuple[str, ...]
    """What stands over the foot of the first page."""
    model: str
    fingerprint: str
    program: str
    printed: str


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
    """A whole print; the patient's page is the last one, where there is one."""

    title: str
    furniture: Furniture
    label: str
    person: str
    assessed: str
    result: Result
    ruler: RulerPart | None
    facts: FactList
    sections: tuple[Section, ...]
    patient: PatientSheet | None = None
