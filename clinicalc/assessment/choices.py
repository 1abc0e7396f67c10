"""What is chosen about the model, not typed about the patient: horizon, recalibration, level of the band."""

from clinicalc.assessment.findings import Finding, FindingCode, Grade
from clinicalc.assessment.model import Model
from clinicalc.coefficients.schema import Recalibration
from clinicalc.coefficients.spans import Span
from clinicalc.errors import UsageError
from clinicalc.units.quoting import quote

DEFAULT_LEVEL = 0.95
LEVELS = (0.5, 0.999)
"""The narrowest and the widest band that may be asked for."""


def check_level(level: float) -> float:
    """The level of the band, if one can be made of it. Raises UsageError, with the likely slip, where not."""
    low, high = LEVELS
    if low <= level <= high:
        return level
    slip = f" Did you mean {level / 100:g}?" if low <= level / 100 <= high else ""
    raise UsageError(f"a band cannot be made at the level {level:g}.", why=f"Levels go from {low:g} to {high:g}.{slip}")


def settle_choices(
    model: Model, span: Span | None, recalibration: str | None
) -> tuple[Recalibration | None, tuple[Finding, ...]]:
    """The recalibration to use (None for none), and a stop for each choice that is open or not on offer."""
    if span is None or span not in model.spans:
        spans = ", ".join(span.words for span in model.spans)
        said = "This model answers for several time spans" if span is None else f"This model has none of {span.words}"
        return None, (_stop(FindingCode.HORIZON, f"{said} ({spans}): choose one."),)
    offered = model.recalibrations_at(span)
    chosen = next((offer for offer in offered if offer.id == recalibration), None)
    if chosen is not None or (recalibration is None and not model.content.recalibration_required):
        return chosen, ()
    names = ", ".join(f"{offer.id} ({offer.label})" for offer in offered) or "none"
    if recalibration is None:
        message = f"This model gives no number without one of its recalibrations: choose one of {names}."
    else:
        message = f"{quote(recalibration)} is not a recalibration for {span.words}; this model offers {names}."
    return None, (_stop(FindingCode.RECALIBRATION, message),)


def _stop(code: FindingCode, message: str) -> Finding:
    return Finding(Grade.STOP, code, code.value, message)
