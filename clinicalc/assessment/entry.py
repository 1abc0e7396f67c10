"""What was typed about one patient: immutable, and nothing but text."""

from collections.abc import Mapping
from dataclasses import dataclass, field, replace
from datetime import date
from types import MappingProxyType


@dataclass(frozen=True, slots=True)
class Typed:
    """One entry: the text, the unit chosen beside it (a UCUM code; None: the file's unit) and the date, if given."""

    text: str
    unit: str | None = None
    dated: date | None = None


@dataclass(frozen=True, slots=True)
class PatientEntry:
    """Everything typed about one patient, by field id; a field that is not there is unanswered.

    `label` is for the print only and never enters a record.
    """

    typed: Mapping[str, Typed] = field(default_factory=lambda: MappingProxyType({}))
    label: str = ""

    def with_typed(self, id: str, typed: Typed | None) -> "PatientEntry":
        """The same entry with one field changed, or emptied (None)."""
        rest = {key: value for key, value in self.typed.items() if key != id}
        return replace(self, typed=MappingProxyType(rest if typed is None else rest | {id: typed}))


def entry_from_texts(texts: Mapping[str, str], label: str = "") -> PatientEntry:
    """An entry from plain texts by field id, as a command line or a worked example gives them."""
    return PatientEntry(MappingProxyType({id: Typed(text) for id, text in texts.items()}), label)
