"""The practice's own decision points: for one model and one horizon each, with who says so."""

from dataclasses import dataclass
from math import isfinite

from clinicalc.errors import UsageError
from clinicalc.settings.faults import fault_of_unseen

MOST_POINTS = 8
POINT_UNITS = ("a", "mo", "wk", "d")
"""UCUM codes in which a horizon is stated, as in a coefficient file."""
_LONGEST = {"model": 64, "label": 80, "source": 300}


@dataclass(frozen=True, slots=True)
class PracticePoint:
    """A probability at which this practice acts. Raises UsageError, naming the part, where one cannot be.

    `model` is the id of a model; `time` and `unit` are the horizon for which alone the point holds.
    """

    model: str
    time: float
    unit: str
    probability: float
    label: str
    source: str

    def __post_init__(self) -> None:
        fault = (
            _fault_of_texts({"model": self.model, "label": self.label, "source": self.source})
            or _fault_of_horizon(self.time, self.unit)
            or _fault_of_probability(self.probability)
        )
        if fault:
            raise UsageError(fault)


def _fault_of_texts(texts: dict[str, str]) -> str:
    for name, text in texts.items():
        if not text.strip():
            return f"its {name} is empty."
        if len(text) > _LONGEST[name]:
            return f"its {name} has {len(text)} characters, and at most {_LONGEST[name]} are taken."
        unseen = fault_of_unseen(text)
        if unseen:
            return f"its {name} holds {unseen}"
    return ""


def _fault_of_horizon(time: float, unit: str) -> str:
    if not (isfinite(time) and time > 0):
        return f"its horizon of {time:g} is not a time span."
    return "" if unit in POINT_UNITS else f"its unit is none of {', '.join(POINT_UNITS)}."


def _fault_of_probability(probability: float) -> str:
    if 0 < probability < 1:
        return ""
    if not probability > 1:
        return f"its probability of {probability:g} is not between 0 and 1."
    meant = [f"{part:g}" for part in (probability / 100, probability / 10) if part < 1]
    slip = f"; did you mean {' or '.join(meant)}" if meant else ""
    return f"{probability:g} is a probability above 1{slip}{'?' if meant else '.'}"
