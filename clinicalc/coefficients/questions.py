"""What a coefficient file asks: predictors, values worked out from them, exclusions."""

from typing import Annotated, Literal

from msgspec import UNSET, Meta, UnsetType

from clinicalc.coefficients.file_types import FileStruct, Id, Label, Limits, Positive, Text


class ValidFor(FileStruct, frozen=True):
    """How long a measured value may be used."""

    days: Annotated[int, Meta(ge=1, le=36525)]


Fraction = Annotated[float, Meta(gt=0, lt=1)]


class WithinPerson(FileStruct, frozen=True):
    """How much repeated values of one person vary: `sd` in the predictor's unit, or `cv` as a fraction.

    `within_visit_sd` or `within_visit_cv`, of the same kind, is the part of it that differs among readings of one
    visit; without it, several readings of one visit count as one.
    """

    source: Text
    cv: Fraction | UnsetType = UNSET
    sd: Positive | UnsetType = UNSET
    within_visit_cv: Fraction | UnsetType = UNSET
    within_visit_sd: Positive | UnsetType = UNSET


class Choice(FileStruct, frozen=True):
    """One answer of a choice; `caution` is shown with any result for people who give this answer."""

    id: Id
    label: Label
    caution: Text | UnsetType = UNSET


class NumberPredictor(FileStruct, frozen=True, tag_field="kind", tag="number"):
    """A measured value. Ranges are in `unit`; `possible` and `usual` may only narrow the quantity's own."""

    id: Id
    label: Label
    quantity: Id
    unit: Label
    group: Label
    factor: Positive | UnsetType = UNSET
    derivation: Limits | UnsetType = UNSET
    outside_derivation: Literal["stop", "caution"] | UnsetType = UNSET
    possible: Limits | UnsetType = UNSET
    usual: Limits | UnsetType = UNSET
    modifiable: bool | UnsetType = UNSET
    treatment: bool | UnsetType = UNSET
    may_be_missing: bool | UnsetType = UNSET
    valid_for: ValidFor | UnsetType = UNSET
    within_person: WithinPerson | UnsetType = UNSET
    loinc: tuple[Label, ...] | UnsetType = UNSET
    meaning: Text | UnsetType = UNSET


class ChoicePredictor(FileStruct, frozen=True, tag_field="kind", tag="choice"):
    """One of several named answers; unanswered until chosen."""

    id: Id
    label: Label
    group: Label
    choices: Annotated[tuple[Choice, ...], Meta(min_length=2, max_length=200)]
    modifiable: bool | UnsetType = UNSET
    treatment: bool | UnsetType = UNSET
    may_be_missing: bool | UnsetType = UNSET
    loinc: tuple[Label, ...] | UnsetType = UNSET
    meaning: Text | UnsetType = UNSET


class YesNoPredictor(FileStruct, frozen=True, tag_field="kind", tag="yes_no"):
    """A question; unanswered until answered. In a term it counts 1 for yes and 0 for no."""

    id: Id
    label: Label
    group: Label
    modifiable: bool | UnsetType = UNSET
    treatment: bool | UnsetType = UNSET
    may_be_missing: bool | UnsetType = UNSET
    loinc: tuple[Label, ...] | UnsetType = UNSET
    meaning: Text | UnsetType = UNSET


Predictor = NumberPredictor | ChoicePredictor | YesNoPredictor

DerivedEquation = Literal[
    "body_mass_index", "non_hdl_cholesterol", "ckd_epi_2021", "friedewald_ldl", "difference", "ratio"
]


class Derived(FileStruct, frozen=True):
    """A value worked out from predictors by a named equation; `inputs` maps the equation's roles to predictor ids."""

    id: Id
    label: Label
    quantity: Id
    unit: Label
    equation: DerivedEquation
    inputs: dict[str, Id]
    may_be_typed: bool | UnsetType = UNSET
    group: Label | UnsetType = UNSET
    factor: Positive | UnsetType = UNSET
    derivation: Limits | UnsetType = UNSET
    outside_derivation: Literal["stop", "caution"] | UnsetType = UNSET
    possible: Limits | UnsetType = UNSET
    usual: Limits | UnsetType = UNSET
    loinc: tuple[Label, ...] | UnsetType = UNSET
    meaning: Text | UnsetType = UNSET


class Exclusion(FileStruct, frozen=True):
    """A question that stops the model when it is answered yes."""

    id: Id
    ask: Text
    because: Text
