"""The fit's own time for each horizon of an equation."""

from collections.abc import Sequence
from dataclasses import dataclass

from clinicalc.coefficients.pointers import listed
from clinicalc.coefficients.spans import TIME_UNITS, Span
from clinicalc.development.tables import Fault

SLACK = 0.02
"""How far the fit's time may lie from the horizon: 1825 days are called 5 years, and so are 1826."""


@dataclass(frozen=True, slots=True)
class HorizonTime:
    """One horizon; `span` is None where the description does not give it properly, which is said elsewhere."""

    span: Span | None


def match_times(horizons: Sequence[HorizonTime], stated: Sequence[float] | None) -> tuple[float, ...] | Fault:
    """The time at which each horizon is looked up: the stated one, or the horizon's own figure."""
    spans = [horizon.span for horizon in horizons if horizon.span is not None]
    if len(spans) < len(horizons):
        return Fault(
            'a horizon of the equation does not say its time properly: "years", or "time" together with "unit".'
        )
    if stated is None:
        return tuple(span.time for span in spans)
    if len(stated) != len(spans):
        return Fault(f"there are {len(stated)} times and {len(spans)} horizons; one stands for each, in their order.")
    units = [Span(1.0, unit).days for unit in TIME_UNITS]
    for span, time in zip(spans, stated, strict=True):
        if span.unit in TIME_UNITS:
            fitting = [days for days in units if abs(time * days / span.days - 1) <= SLACK]
            if not fitting:
                years = listed((f"{span.days / days:.6g}" for days in units), "or")
                return Fault(f"{time:g} is no way to say {span.words} in years, months, weeks or days ({years}).")
    return tuple(stated)
