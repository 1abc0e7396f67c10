"""Many rows predicted at once: bit for bit what one patient gets, and no number where a value is missing."""

import numpy as np
import pytest

from clinicalc.assessment.assess import assess
from clinicalc.assessment.entry import entry_from_texts
from clinicalc.assessment.fields import NumberField, QuestionField
from clinicalc.assessment.model import Model
from clinicalc.assessment.rows import NO_EQUATION, find_equations, predict_rows
from clinicalc.covariates.transforms import Column
from tests.assessment.cases import FULL, NOW, shipped


def _people(model: Model, size: int) -> list[dict[str, str]]:
    """The full entry of a file with numbers moved a little and other answers."""
    draw = np.random.default_rng(11)
    people = []
    for _ in range(size):
        entry = dict(FULL[model.content.id])
        for id, text in entry.items():
            field = model.by_id[id]
            if isinstance(field, NumberField):
                digits, *unit = text.split(" ")
                moved = float(digits) * draw.uniform(0.92, 1.08)
                entry[id] = " ".join([f"{moved:.0f}" if moved > 20 else f"{moved:.1f}", *unit])
            elif not field.excludes:
                entry[id] = str(draw.choice([option.id for option in field.options]))
        people.append(entry)
    return people


def _columns(model: Model, people: list[dict[str, str]]) -> dict[str, Column]:
    """Values in the file's units, answers as their places, from the lines of each assessment."""
    columns: dict[str, list[float]] = {}
    for person in people:
        for line in assess(model, entry_from_texts(person), span=model.spans[-1], at=NOW, number_only=True).values:
            field = model.by_id[line.id]
            value = line.number
            if isinstance(field, QuestionField):
                value = None
                if line.answer is not None:
                    value = float([option.id for option in field.options].index(line.answer))
            columns.setdefault(line.id, []).append(np.nan if value is None else value)
    derived = {field.id for field in model.derived}
    return {
        id: np.array(column)
        for id, column in columns.items()
        # a derived value that nobody typed is to be worked out here
        if id not in derived or id in people[0]
    }


@pytest.mark.parametrize("id", FULL)
def test_rows_have_the_bits_of_one_patient(id: str) -> None:
    model = shipped(id)
    people = _people(model, 150)
    recalibrations = model.recalibrations_at(model.spans[-1])
    chosen = recalibrations[0] if model.content.recalibration_required else None
    found = predict_rows(model, _columns(model, people), model.spans[-1], recalibration=chosen)
    numbers = 0
    for row, person in enumerate(people):
        result = assess(
            model,
            entry_from_texts(person),
            span=model.spans[-1],
            recalibration=None if chosen is None else chosen.id,
            at=NOW,
            number_only=True,
        )
        assert (model.equations[found.equation[row]].content.id) == result.equation
        if result.estimate is None:
            assert np.isnan(found.probability[row])
            continue
        numbers += 1
        assert found.eta[row] == result.estimate.eta
        assert found.probability[row] == result.estimate.probability
        assert found.complement[row] == result.estimate.complement
        if result.estimate.band is not None:
            assert (found.lower[row], found.upper[row]) == (result.estimate.band.lower, result.estimate.band.upper)
    assert numbers > 75


def test_a_row_without_a_value_or_an_equation_has_no_number() -> None:
    model = shipped("general-cvd-2008-lipids")
    columns = _columns(model, [FULL[model.content.id]] * 4)
    whole = predict_rows(model, columns, model.spans[0])
    columns["age"][1] = columns["sex"][2] = np.nan
    found = predict_rows(model, columns, model.spans[0])
    assert found.equation.tolist() == [0, 0, NO_EQUATION, 0]
    assert np.isnan(found.probability).tolist() == [False, True, True, False]
    assert np.isnan(found.upper).tolist() == [False, True, True, False]
    assert found.probability[0] == whole.probability[0] == found.probability[3]
    without = {id: column for id, column in columns.items() if id != "age"}
    assert np.isnan(predict_rows(model, without, model.spans[0]).probability).all()
    assert find_equations(model, {"age": columns["age"]}, 4).tolist() == [NO_EQUATION] * 4


def test_equations_that_the_caller_found_are_used_and_rows_can_be_left_out() -> None:
    model = shipped("general-cvd-2008-lipids")
    columns = _columns(model, [FULL[model.content.id]] * 3)
    found = predict_rows(model, columns, model.spans[0], equation=np.array([0, NO_EQUATION, 1]))
    whole = predict_rows(model, columns, model.spans[0], band=False)
    assert found.probability[0] == whole.probability[0]
    assert np.isnan(found.probability[1])
    assert found.probability[2] != whole.probability[2]
    assert np.isnan(whole.lower).all()
