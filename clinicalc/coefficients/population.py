"""The people a model or one of its equations was made from, described well enough to draw from.

For values that are not measured, for reference populations and for rare combinations. A number is described on its own
scale or as its natural logarithm, where stated; a yes/no question by its log odds given what stands before it.
"""

from typing import Literal

from msgspec import UNSET, UnsetType

from clinicalc.coefficients.file_types import FileStruct, Id, Matrix, Positive, Probability, Text


class PopulationNumber(FileStruct, frozen=True):
    """Mean and standard deviation of a number predictor in its unit, or of its natural logarithm."""

    id: Id
    mean: float
    sd: Positive
    log: Literal["natural"] | UnsetType = UNSET


class PopulationAnswer(FileStruct, frozen=True):
    """The log odds of yes given the numbers (on the scale stated for them) and the yes/no answers before it."""

    id: Id
    intercept: float
    coefficients: dict[Id, float]


class PopulationChoice(FileStruct, frozen=True):
    """The shares of the answers of a choice; they add up to one."""

    id: Id
    shares: dict[Id, Probability]


class Population(FileStruct, frozen=True):
    """The people the model was made from, described well enough to draw from: `correlations` follow `numbers`."""

    source: Text
    numbers: tuple[PopulationNumber, ...]
    correlations: Matrix
    yes_no: tuple[PopulationAnswer, ...]
    choices: tuple[PopulationChoice, ...] | UnsetType = UNSET
