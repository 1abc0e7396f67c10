"""Where the figures of a coefficient file come from, and for whom they are meant."""

from typing import Literal

from msgspec import UNSET, UnsetType, field

from clinicalc.coefficients.file_types import Count, FileStruct, Fingerprint, Label, ModelId, Text, Version


class Derivation(FileStruct, frozen=True):
    """The people the model was made from."""

    people: Count
    events: Count | UnsetType = UNSET
    from_: Text | UnsetType = field(default=UNSET, name="from")
    to: Text | UnsetType = UNSET


class Source(FileStruct, frozen=True):
    """Who published or fitted the model."""

    kind: Literal["published", "local"]
    citation: Text
    doi: Label | UnsetType = UNSET
    derivation: Derivation | UnsetType = UNSET
    notes: tuple[Text, ...] | UnsetType = UNSET


class Unconfirmed(FileStruct, frozen=True):
    """Figures not checked against the source: `at` is a JSON Pointer into the model and covers all below it."""

    at: str
    why: Text
    check_against: Text


class Plain(FileStruct, frozen=True):
    """Words for the patient's page."""

    outcome: Text
    cautions: tuple[Text, ...]


class Use(FileStruct, frozen=True):
    """For whom the model is meant, and for whom it is not."""

    population: Text
    setting: Text
    not_for: tuple[Text, ...]
    not_used: tuple[Text, ...]
    cautions: tuple[Text, ...]
    plain: Plain


class AncestryCohort(FileStruct, frozen=True):
    """The people to whom an earlier version was updated: who they were in words, and how many."""

    words: Text
    people: Count
    events: Count | UnsetType = UNSET
    from_: Text | UnsetType = field(default=UNSET, name="from")
    to: Text | UnsetType = UNSET


class Ancestry(FileStruct, frozen=True):
    """The version that this one was updated from, by its fingerprint, and how; `figures` are sentences.

    Whatever the parent itself came from stands in the parent.
    """

    fingerprint: Fingerprint
    id: ModelId
    version: Version
    title: Label
    cohort: AncestryCohort
    method: Literal["intercept", "intercept_slope", "refit", "two_scale"]
    figures: tuple[Text, ...]
