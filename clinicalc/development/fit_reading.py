"""One [fit] table being read: what its equation wants, and the problems met with it."""

from collections.abc import Callable
from dataclasses import dataclass, field
from pathlib import Path
from typing import TypeVar

from clinicalc.development.description import FitTable
from clinicalc.development.horizon_times import HorizonTime
from clinicalc.development.tables import Fault, read_text
from clinicalc.errors import Problem

_Taken = TypeVar("_Taken")


@dataclass(frozen=True, slots=True)
class Wanted:
    """What an equation wants of its fit: the ids of its estimated terms, its horizons, and whether it has a band."""

    equation: str
    terms: tuple[str, ...]
    horizons: tuple[HorizonTime, ...]
    band: bool


@dataclass(slots=True)
class FitReading:
    """One [fit] table being read; `problems` gathers what is wrong with it."""

    table: FitTable
    wanted: Wanted
    folder: Path
    problems: list[Problem] = field(default_factory=list)

    def say(self, part: str, message: str) -> None:
        """Note a problem with a part of the table."""
        where = getattr(self.table, part, "")
        file = f" ({where})" if part in ("coefficients", "covariance", "baseline") and isinstance(where, str) else ""
        self.problems.append(Problem(f"fit.{self.wanted.equation}{'.' if part else ''}{part}{file}", message))

    def take(self, part: str, file: str, reader: Callable[[str, bool], _Taken | Fault]) -> _Taken | None:
        """What the reader makes of a named file; None where it cannot be taken, which is noted."""
        text = read_text(self.folder / file)
        taken = text if isinstance(text, Fault) else reader(text, file.lower().endswith(".json"))
        if isinstance(taken, Fault):
            self.say(part, taken.message)
            return None
        return taken
