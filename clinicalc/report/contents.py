"""What stands on a print, before anything is measured: frozen nouns with nothing but text in them."""

from dataclasses import dataclass


@dataclass(frozen=True, slots=True)
class Result:
    """The top of the sheet: the number (or the words in its place), what it is about, and what it means."""

    figure: str
    sign: str
    """What follows the figure in smaller type; "" where words stand in the place of a number."""
    outcome: str
    sentences: tuple[str, ...]


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
class Remark:
    """A finding with its number; `weight` is 0 for a stop, 1 for a caution, 2 for a note: the amount of ink."""

    number: str
    grade: str
    weight: int
    message: str


@dataclass(frozen=True, slots=True)
class RemarkList:
    """Findings below each other."""

    remarks: tuple[Remark, ...]


@dataclass(frozen=True, slots=True)
class Row:
    """One line of a table; as many cells as the table has columns."""

    cells: tuple[str, ...]


@dataclass(frozen=True, slots=True)
class Column:
    """A column of a table: its heading, its left edge and its width in points."""

    heading: str
    left: float
    width: float
    strong: bool = False


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


@dataclass(frozen=True, slots=True)
class Furniture:
    """What stands at the head and at the foot of every page."""

    practice: str
    label: str
    reader: str
    strip: str
    """The words of the strip over the sheet."""
    model: str
    fingerprint: str
    program: str
    printed: str


@dataclass(frozen=True, slots=True)
class Sheet:
    """A whole print."""

    title: str
    furniture: Furniture
    label: str
    person: str
    assessed: str
    result: Result
    facts: FactList
    sections: tuple[Section, ...]
