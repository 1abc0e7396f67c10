"""What stands on a print of the library: its sections and the rows of its tables, as nouns that know no library."""

from dataclasses import dataclass

from clinicalc.report.contents import Furniture, Section


@dataclass(frozen=True, slots=True)
class VettingSheet:
    """A whole print. `kind` stands at the head of every page, `lines` soft under the title, `says` in bold below them.

    `about` is what the file says of itself in the list of a folder: "Approval of … 1.0.0".
    """

    kind: str
    title: str
    about: str
    lines: tuple[str, ...]
    says: str
    sections: tuple[Section, ...]
    furniture: Furniture


@dataclass(frozen=True, slots=True)
class DifferenceRow:
    """A statement of which two versions say different things; "" where a version says nothing. `place`: in the file."""

    aspect: str
    what: str
    old: str
    new: str
    place: str


@dataclass(frozen=True, slots=True)
class ExampleRow:
    """A patient with both numbers as written; `notes` say why there is none."""

    values: str
    stated: tuple[str, ...]
    old: str
    new: str
    notes: tuple[str, ...] = ()


@dataclass(frozen=True, slots=True)
class RecordRow:
    """A record of a history: when (day, time), by whom, what and why, beginnings of key and digest, what is wrong."""

    day: str
    time: str
    who: str
    what: str
    why: str
    key: str
    digest: str
    faults: tuple[str, ...]


@dataclass(frozen=True, slots=True)
class OpenFigureRow:
    """A figure that its file calls unconfirmed: what, where, its digits, why, the source, and who compared it."""

    what: str
    place: str
    figure: str
    why: str
    source: str
    by: str


@dataclass(frozen=True, slots=True)
class DigestRow:
    """A record that a print rests on, with its whole digest."""

    what: str
    who: str
    digest: str


@dataclass(frozen=True, slots=True)
class DayRow:
    """A model at the end of a day: whether it gave a number, why or by whose approval, and what else is to be known."""

    name: str
    id: str
    fingerprint: str
    answered: str
    because: str
    notes: tuple[str, ...]
