"""What a band rests on that was rebuilt from printed intervals."""

from msgspec import UnsetType

from clinicalc.assessment.model import Model
from clinicalc.assessment.result import Assessment
from clinicalc.coefficients.equations import ReconstructedBand


def band_assumptions(assessment: Assessment) -> tuple[str, ...]:
    """The assumptions that the file states for the band of this number, in its order; () for any other band."""
    if assessment.estimate is None or assessment.estimate.band is None:
        return ()
    return assumptions_of(assessment.model, assessment.equation)


def assumptions_of(model: Model, equation: str | None) -> tuple[str, ...]:
    """Those that the file states for one equation, by its id; for None those of every equation, each once."""
    found: list[str] = []
    for each in model.content.equations:
        band = each.uncertainty
        if equation not in (None, each.id) or not isinstance(band, ReconstructedBand):
            continue
        found += () if isinstance(band.assumptions, UnsetType) else band.assumptions
    return tuple(dict.fromkeys(found))
