"""The step Model where a validation file is open: the coefficient file that is held against its people."""

from collections.abc import Iterator

from clinicalc.coefficients.fingerprint import group_fingerprint
from clinicalc.coefficients.schema import ChoicePredictor, NumberPredictor, Predictor
from clinicalc.gui.study.fact_rows import Fact, FactColumn
from clinicalc.gui.study.step_sheet import StepSheet
from clinicalc.gui.study.validation_state import OpenedValidation
from clinicalc.units.unit import unit as unit_of

_PREDICTORS = (FactColumn("Id"), FactColumn("Label"), FactColumn("Unit or answers"))


def make_held_sheet(opened: OpenedValidation) -> StepSheet:
    """What the coefficient file says of itself, and which values it needs."""
    content = opened.model.content
    sheet = StepSheet("Model", f"{content.title}, version {content.version}")
    sheet.add_lines(tuple(_head_lines(opened)))
    sheet.add_heading("Values that it needs")
    sheet.add_table("Predictors", _PREDICTORS, [_fact(predictor) for predictor in content.predictors])
    sheet.add_words(
        "It is a coefficient file that was made elsewhere, and nothing in it is changed here. Another one is chosen in"
        " the step Validation.",
        soft=True,
    )
    return sheet


def _head_lines(opened: OpenedValidation) -> Iterator[tuple[str, str]]:
    model = opened.model
    yield "Id", model.content.id
    yield "Fingerprint", group_fingerprint(model.fingerprint)
    yield "Outcome", model.content.outcome
    yield "Made for", model.content.use.population
    if model.spans:
        yield "Horizons", ", ".join(span.words for span in model.spans)
    if opened.settled.recalibration:
        yield "Recalibration", opened.settled.recalibration


def _fact(predictor: Predictor) -> Fact:
    if isinstance(predictor, NumberPredictor):
        return Fact((predictor.id, predictor.label, unit_of(predictor.unit).spelling))
    if isinstance(predictor, ChoicePredictor):
        return Fact((predictor.id, predictor.label, ", ".join(choice.label for choice in predictor.choices)))
    return Fact((predictor.id, predictor.label, "yes, no"))
