"""What explains how people differ from predictions, as far as a search has come, and the findings it comes to."""

from collections.abc import Iterator
from dataclasses import dataclass, replace

import numpy as np
from numpy.typing import NDArray

from clinicalc.assessment.rarity import chi_square_beyond
from clinicalc.validation.evidence import Evidence, Fitted
from clinicalc.validation.fault_groups import Level
from clinicalc.validation.search import Finding
from clinicalc.validation.suspected_units import Suspicion
from clinicalc.validation.validated import FaultKind

Array = NDArray[np.float64]


@dataclass(frozen=True, slots=True, eq=False)
class Explained:
    """What has been found so far: eta with corrected columns, whether a slope stands beside it, which levels."""

    eta: Array
    slope: bool = False
    levels: tuple[Level, ...] = ()
    units: tuple[tuple[Suspicion, float], ...] = ()
    p: tuple[tuple[str, float], ...] = ()

    def columns(self, evidence: Evidence, *, shifted: bool = True) -> tuple[Array, ...]:
        """The columns beside eta: the intercept first, then the slope's, then the levels'."""
        found = [np.ones(len(self.eta))] if shifted else []
        if self.slope:
            weights = evidence.weigh(evidence.expect(self.eta))
            found.append(self.eta - float((weights * self.eta).sum()) / float(weights.sum()))
        return (*found, *(level.rows for level in self.levels))


@dataclass(frozen=True, slots=True, eq=False)
class Attempt:
    """One more explanation: what would be known, by how much it explains more, and beyond what chance allows."""

    explained: Explained
    chi2: float
    beyond: float


def with_p(explained: Explained, name: str, chi2: float, looked: float) -> Explained:
    """The same with the p value of what was added, for all that was looked for."""
    p = min(1.0, 4.0 * looked * chi_square_beyond(max(chi2, 0.0), 1))
    return replace(explained, p=(*explained.p, (name, p)))


def tell_units(explained: Explained) -> Iterator[Finding]:
    """The findings about units."""
    for suspicion, p in explained.units:
        yield Finding(FaultKind.UNIT, 0.0, 0.0, p, at=suspicion.id, suspicion=suspicion)


def tell_levels(explained: Explained, fitted: Fitted, places: int, base: float) -> Iterator[Finding]:
    """The findings about groups, beside the others: coefficients stand after `places` others.

    `base` is the shift of everybody, 0 where none was found.
    """
    first = places + explained.slope
    errors = np.sqrt(np.diag(fitted.covariance))
    p = dict(explained.p)
    for place, level in enumerate(explained.levels, start=first):
        size = float(fitted.coefficients[place])
        yield Finding(
            FaultKind.GROUP_TOO_LOW if size > 0.0 else FaultKind.GROUP_TOO_HIGH,
            size,
            float(errors[place]),
            p.get(str(level.key), 1.0),
            at=level.group.by,
            label=level.group.label,
            level=level.name,
            people=int(level.rows.sum()),
            rest=base,
        )
