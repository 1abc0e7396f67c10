"""Why a number stands without a band."""

from clinicalc.assessment.numerals import NARROW_SPACE
from clinicalc.prediction.line import Adjustment, Draws, Line


def say_no_band(line: Line, level: float, adjustment: Adjustment | None) -> str:
    """The reason, for a line that gives no band at this level: what the file says, or how few draws it holds."""
    if isinstance(line.band, Draws):
        return (
            f"The file holds {line.band.baselines.size} draws, too few for a band of {100 * level:g}{NARROW_SPACE}%."
            " Ask for a lower level."
        )
    if adjustment is not None and adjustment.covariance is not None:
        return f"{line.no_band_because} The recalibration’s own imprecision alone makes no band."
    return line.no_band_because
