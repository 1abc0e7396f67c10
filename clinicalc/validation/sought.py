"""Which values of a model are looked for in a table of people: what its equations use, and what the file names."""

from collections.abc import Collection, Iterable

from clinicalc.assessment.model import Model
from clinicalc.coefficients.schema import Derived, NumberPredictor, Predictor


def find_sought(model: Model, named: Collection[str], groups: Iterable[str] = ()) -> tuple[Predictor, ...]:
    """The predictors to look for, in file order, then derived values that have a column of their own.

    `named` are ids with a column. A derived value with a column needs none of what it is worked out from.
    """
    needed = set(named) | set(groups)
    own = [derived for derived in model.content.derived if derived.id in named]
    given = {derived.id for derived in own}
    for equation in model.equations:
        needed |= equation.content.applies_when.keys()
        needed |= equation.uses
    for field in model.derived:
        if field.id in needed and field.id not in given:
            needed |= set(field.sources)
    found = [predictor for predictor in model.content.predictors if predictor.id in needed]
    return (*found, *(_as_predictor(derived) for derived in own))


def _as_predictor(derived: Derived) -> NumberPredictor:
    return NumberPredictor(
        id=derived.id,
        label=derived.label,
        quantity=derived.quantity,
        unit=derived.unit,
        group=derived.label,
        factor=derived.factor,
        possible=derived.possible,
        usual=derived.usual,
    )
