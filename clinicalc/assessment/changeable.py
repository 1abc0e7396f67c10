"""Which values of a patient a comparison may change: those the file calls modifiable, and never one of a few kinds."""

from difflib import get_close_matches
from functools import lru_cache

from clinicalc.assessment.fields import Field, NumberField
from clinicalc.assessment.model import Model
from clinicalc.assessment.numerals import join_words
from clinicalc.coefficients.roles import SEX
from clinicalc.units.quoting import quote


@lru_cache(maxsize=8)
def changeable_fields(model: Model) -> tuple[Field, ...]:
    """The fields that a comparison may change, in page order; none where the file calls no value modifiable."""
    return tuple(field for field in model.fields if not why_unchangeable(model, field.id))


def why_unchangeable(model: Model, id: str) -> str:
    """Why a comparison cannot change this value and what to do instead, in sentences; "" where it can."""
    field = model.by_id.get(id)
    if field is None:
        return f"{quote(id)} is not a field of this model.{_hint(model, id)}"
    if isinstance(field, NumberField) and field.formula is not None:
        sources = join_words([model.by_id[source].label for source in field.sources])
        return f"{field.label} is worked out from {sources} and follows them. Change those instead."
    reason = _refusal(model, field)
    return "" if not reason else f"{reason} {_offer(model)}"


def _refusal(model: Model, field: Field) -> str:
    predictor = next((p for p in model.content.predictors if p.id == field.id), None)
    if predictor is None:
        return "Whether the model answers for this patient at all is not part of a comparison."
    if predictor.treatment is True:
        return f"{field.label}: a comparison cannot say what starting or stopping a treatment would bring."
    if _is_age_or_sex(model, field):
        return f"{field.label} is not something that can be changed."
    if any(field.id in equation.content.applies_when for equation in model.equations):
        return f"{field.label} decides which equation of the model answers, and no comparison is made across two."
    if predictor.modifiable is not True:
        return f"{field.label} is not among the values that the coefficient file calls modifiable."
    return ""


def _is_age_or_sex(model: Model, field: Field) -> bool:
    if isinstance(field, NumberField):
        return field.quantity.id == "age"
    roles = (pair for derived in model.derived if derived.formula is not None for pair in derived.formula.inputs)
    return field.id == SEX or (SEX, field.id) in roles


def _offer(model: Model) -> str:
    offered = [p.id for p in model.content.predictors if not _refusal(model, model.by_id[p.id])]
    return (
        f"A comparison can change {join_words(offered)}." if offered else "This model has nothing that can be changed."
    )


def _hint(model: Model, id: str) -> str:
    close = get_close_matches(id, [field.id for field in changeable_fields(model)], n=1)
    return f" Did you mean {close[0]}?" if close else f" {_offer(model)}"
