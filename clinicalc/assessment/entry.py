"""What was typed about one patient: immutable, and nothing but text."""

from collections.abc import Mapping
from dataclasses import dataclass, field, replace
from datetime import date
from types import MappingProxyType

from clinicalc.units.averaged import Averaged


@dataclass(frozen=True, slots=True)
class Typed:
    """One entry: the text, the unit chosen beside it (a UCUM code; None: the file's unit), and what was stated apart.

    `dated` is its day and `averaged` what it is the mean of; where the text states them too, the text counts.
    """

    text: str
    unit: str | None = None
    dated: date | None = None
    averaged: Averaged | None = None


@dataclass(frozen=True, slots=True)
class PatientEntry:
    """Everything typed about one patient, by field id; a field that is not there is unanswered.

    `label` is for the print only and never enters a record. `changes` are the values of a comparison: the same patient
    with these in place of the patient's own.
    """

    typed: Mapping[str, Typed] = field(default_factory=lambda: MappingProxyType({}))
    label: str = ""
    changes: Mapping[str, Typed] = field(default_factory=lambda: MappingProxyType({}))

    def with_typed(self, id: str, typed: Typed | None) -> "PatientEntry":
        """The same entry with one field changed, or emptied (None)."""
        rest = {key: value for key, value in self.typed.items() if key != id}
        return replace(self, typed=MappingProxyType(rest if typed is None else rest | {id: typed}))

    def with_change(self, id: str, typed: Typed | None) -> "PatientEntry":
        """The same entry with one field of the comparison changed, or taken out of it (None)."""
        rest = {key: value for key, value in self.changes.items() if key != id}
        return replace(self, changes=MappingProxyType(rest if typed is None else rest | {id: typed}))


def entry_from_texts(texts: Mapping[str, str], label: str = "") -> PatientEntry:
    """An entry from plain texts by field id, as a command line or a worked example gives them."""
    return PatientEntry(MappingProxyType({id: Typed(text) for id, text in texts.items()}), label)
