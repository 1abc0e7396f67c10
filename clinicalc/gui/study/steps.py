"""The steps of a study, in their order, and what is said of each in one line."""

from dataclasses import dataclass
from enum import Enum, IntEnum


class Step(IntEnum):
    """A step is gone to in any order; what it lacks it says itself."""

    DATA = 0
    MODEL = 1
    FIT = 2
    VALIDATION = 3
    UPDATE = 4
    PACKAGE = 5

    @property
    def title(self) -> str:
        """What the step is called."""
        return self.name.capitalize()


@dataclass(frozen=True, slots=True)
class StepLine:
    """What is said of a step, and whether it is done: its number then stands in ink."""

    says: str = "not started"
    is_done: bool = False


class Ask(Enum):
    """What can be asked for on the sheet of a step; what it is about is a place in the sheet's table."""

    CHANGE = "change"
    """The study file that is open is to be changed here."""
    COLUMN = "column"
    ABOUT = "about"
    ADD_TERM = "add term"
    REMOVE_TERM = "remove term"
    FITTING = "fitting"
    METHODS = "methods"
    """What is done about missing values and optimism."""
    FIRTH = "firth"
    """The equation of that place is to be fitted with Firth's penalty: the form of its fit, with that chosen."""
    RIDGE = "ridge"
    REPORT = "report"
    """The fit is to be saved as a report."""
    ANSWER = "answer"
    """An item of the documentation is to be answered."""
    LEAVE = "leave"
    """What was changed is not to be kept."""
    HOLD_MODEL = "hold model"
    """A coefficient file is to be chosen that is held against these people."""
    UPDATE = "update"
    """The form in which an update is asked for."""
    VALIDATION_REPORT = "validation report"
    UPDATE_REPORT = "update report"
    TABLES = "tables"
    """The figures of a validation are to be saved as tables."""
    DRAWINGS = "drawings"
    """Its drawings are to be saved, each as a file."""
    HORIZON = "horizon"
    """Another horizon is shown: its place."""
