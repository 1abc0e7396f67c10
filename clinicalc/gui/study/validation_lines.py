"""The lines of state of the steps Validation and Update."""

from clinicalc.gui.study.steps import StepLine
from clinicalc.gui.study.validation_state import ValidationState


def validation_line(validating: ValidationState) -> StepLine:
    """What is said of the step Validation."""
    made = validating.made
    if validating.not_made is not None:
        return StepLine("refused" if made is None else "refused; the one before stays")
    if made is None:
        return StepLine("not started" if validating.opened is None else "ready to begin")
    if validating.is_stale:
        return StepLine("of earlier data")
    spans = [one.span.words for one in made.validation.horizons if one.span is not None]
    found = len(made.validation.faults)
    said = "no fault found" if not found else "1 fault found" if found == 1 else f"{found} faults found"
    return StepLine(f"{spans[-1]}, {said}" if spans else said, is_done=True)


def update_line(validating: ValidationState) -> StepLine:
    """What is said of the step Update."""
    made = validating.update
    if made is None:
        return StepLine()
    if validating.is_update_stale:
        return StepLine("of earlier data")
    if validating.written is not None:
        return StepLine(validating.written.name, is_done=True)
    if made.package is None:
        return StepLine("the model is kept", is_done=True)
    return StepLine(f"version {made.package.model.content.version}, not written", is_done=True)
