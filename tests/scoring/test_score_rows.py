"""A block scored at once against `assess` row by row: the same bits, the same codes; and what a scorer refuses."""

import numpy as np
import pytest
from hypothesis import HealthCheck, given, settings
from hypothesis import strategies as st

from clinicalc.assessment.cautions import COMPETING_AGE
from clinicalc.assessment.fields import NumberField, QuestionField
from clinicalc.coefficients.spans import Span
from clinicalc.errors import UnitError, UsageError
from clinicalc.scoring.score_rows import Scorer
from clinicalc.scoring.scored import CodedTexts
from tests.assessment.cases import DEMO, NOW, WOMAN_55_AT_RISK, WOMAN_61, WOMAN_EGFR_90, shipped
from tests.scoring.rows_of_cells import Run, cells_for, models, one_by_one, rows_of, runs, unsure

SLOW = settings(max_examples=150, deadline=None, suppress_health_check=list(HealthCheck))


def _columns(*rows: dict[str, str]) -> dict[str, list[str]]:
    return {id: [row.get(id, "") for row in rows] for id in rows[0]}


@SLOW
@given(st.data())
def test_a_block_is_what_assess_gives_row_by_row(data: st.DataObject) -> None:
    run = data.draw(runs())
    cells = data.draw(cells_for(run))
    assert rows_of(run.scorer().score(cells)) == one_by_one(run, cells)


@settings(SLOW, max_examples=40)
@given(st.data())
def test_block_size_and_what_was_scored_before_change_nothing(data: st.DataObject) -> None:
    run = data.draw(runs())
    cells = data.draw(cells_for(run, most=12))
    size = len(next(iter(cells.values())))
    step = data.draw(st.integers(1, size))
    scorer = run.scorer()
    whole = rows_of(scorer.score(cells))
    parts = [scorer.score({id: column[at : at + step] for id, column in cells.items()}) for at in range(0, size, step)]
    assert [row for part in parts for row in rows_of(part)] == whole
    again = run.scorer().score({id: column[:step] for id, column in cells.items()})
    assert again.findings == parts[0].findings
    assert again.said.tolist() == parts[0].said.tolist()


@pytest.mark.parametrize("place", range(len(models())))
def test_thousands_of_rows_of_each_model_are_what_assess_gives(place: int) -> None:
    model = models()[place]
    offered = [offer.id for offer in model.recalibrations_at(model.spans[-1])]
    run = Run(model, model.spans[-1], offered[-1] if offered else None, 0.95)
    cells = _many(run, 1500)
    block = run.scorer().score(cells)
    assert rows_of(block) == one_by_one(run, cells)
    # the comparison means something: numbers, stops and, where a file has any, cautions are all there
    assert 100 < np.isnan(block.probability).sum() < 1400
    assert any(said.cautions for said in block.findings) or model.content.id == "tiny-logit"


def _many(run: Run, size: int) -> dict[str, list[str]]:
    """Rows around an ordinary person, some cells of which are odd."""
    draw = np.random.default_rng(20261201)
    cells = {}
    for one in run.model.fields:
        far = "no"
        if isinstance(one, QuestionField):
            ids = ["no"] * 40 + ["yes"] if one.excludes else [option.id for option in one.options]
            column: list[str] = draw.choice(ids, size).tolist()
        elif one.formula is not None and not one.may_be_typed:
            continue
        else:
            low, high = _middle(one)
            far = f"{high * 1.15:.0f}"
            decimals = 0 if high > 30 else 1
            column = [f"{low + part * (high - low):.{decimals}f}" for part in 0.15 + 0.7 * draw.random(size)]
        if not isinstance(one, QuestionField) and one.formula is not None:
            column = [text if place % 3 == 0 else "" for place, text in enumerate(column)]
        for row in np.flatnonzero(draw.random(size) < 0.03):
            column[row] = str(draw.choice(["", "unknown", "x", f"{column[row]}0", f"{column[row]},5", "NA", far, far]))
        cells[one.id] = column
    return cells


def _middle(one: NumberField) -> tuple[float, float]:
    """The values that are usual and within those that the model was made from."""
    lows = [end for end in (one.usual[0], one.derivation[0]) if end is not None]
    highs = [end for end in (one.usual[1], one.derivation[1]) if end is not None]
    return max(lows, default=0.0), min(highs, default=1.0)


def test_cells_may_come_coded_or_as_numbers() -> None:
    model = shipped("tarnwick-cvd-10y-cox")
    person = DEMO | {"egfr": "80"}
    cells = _columns(person, person | {"age": "71"}, person | {"age": ""}, person | {"egfr": "60"})
    whole = rows_of(Scorer(model, at=NOW).score(cells))
    coded = CodedTexts(["71", "61", "61"], np.array([1, 0, -1, 2]))
    assert rows_of(Scorer(model, at=NOW).score(cells | {"age": coded})) == whole
    numbers = np.array([61.0, 71.0, np.nan, 61.0])
    assert rows_of(Scorer(model, at=NOW).score(cells | {"age": numbers})) == whole
    assert rows_of(Scorer(model, at=NOW).score(cells | {"age": [61, 71.0, None, "61"]})) == whole
    assert rows_of(Scorer(model, at=NOW).score(cells | {"smoker": np.array([True] * 4)})) == whole
    assert [row[0] for row in whole] == [set(), set(), {"missing:age"}, set()]
    assert whole[1][1] == {"competing_events:age"}
    assert COMPETING_AGE == 70


def test_values_that_meet_each_other_are_compared_as_for_one_patient() -> None:
    person = WOMAN_55_AT_RISK
    cells = _columns(
        person | {"systolic_bp": "120", "diastolic_bp": "120"},
        person | {"systolic_bp": "120", "diastolic_bp": "119"},
        person | {"systolic_bp": "120", "diastolic_bp": "16 kPa"},
        person | {"systolic_bp": "16.0 kPa", "diastolic_bp": "16 kPa"},
    )
    block = Scorer(shipped("diabetes-2007-clinical"), at=NOW).score(cells)
    # 16 kPa are 120.0098 mmHg
    assert block.stops.tolist() == [
        "cross_check:diastolic_bp",
        "",
        "cross_check:diastolic_bp",
        "cross_check:diastolic_bp",
    ]
    lipids = _columns(*(WOMAN_61 | {"total_cholesterol": "5", "hdl_cholesterol": hdl} for hdl in ("5", "5.01")))
    units = {"total_cholesterol": "mmol/L", "hdl_cholesterol": "mmol/L"}
    said = Scorer(shipped("general-cvd-2008-lipids"), units=units, at=NOW).score(lipids)
    assert ["cross_check" in stops for stops in said.stops] == [False, True]


def test_unconfirmed_figures_are_asked_for_in_each_pattern_of_units_and_worked_out_values() -> None:
    id = "total-cvd-2024-base"
    without = {name: text for name, text in WOMAN_EGFR_90.items() if name != "egfr"}
    people = (
        WOMAN_EGFR_90,
        WOMAN_EGFR_90 | {"total_cholesterol": "5.2", "hdl_cholesterol": "1.2"},
        without | {"total_cholesterol": "5.2", "hdl_cholesterol": "1.2", "creatinine": "0.9", "egfr": ""},
    )
    cells = _columns(*reversed(people))
    for path, expected in (
        ("/predictors/2/factor", ["", "", "unconfirmed"]),
        ("/derived/0", ["unconfirmed", "", ""]),
        ("/derived/1", ["unconfirmed"] * 3),
        ("/predictors/0", ["unconfirmed"] * 3),
    ):
        run = Run(unsure(id, path), None, None, 0.95)
        block = run.scorer().score(cells)
        assert block.cautions.tolist() == expected, path
        assert rows_of(block) == one_by_one(run, cells)


def test_codes_of_answers_are_translated_and_others_read_as_they_stand() -> None:
    model = shipped("general-cvd-2008-lipids")
    cells = _columns(WOMAN_61 | {"sex": "2"}, WOMAN_61 | {"sex": "Female"}, WOMAN_61 | {"sex": "3"})
    block = Scorer(model, answers={"sex": {"1": "male", "2": "female"}}, at=NOW).score(cells)
    assert block.stops.tolist() == ["", "", "unknown_answer:sex"]
    assert block.probability[0] == block.probability[1]
    assert np.isnan(block.probability[2])


def test_notes_of_every_number_stand_once_and_cautions_in_their_rows() -> None:
    model = shipped("general-cvd-2008-lipids")
    scorer = Scorer(model, at=NOW)
    once = scorer.said_once.findings
    assert [finding.message for finding in once] == [f"About this model: {said}" for said in model.content.use.cautions]
    block = scorer.score(_columns(WOMAN_61))
    assert block.cautions.tolist() == ["unconfirmed"]
    assert block.notes.tolist() == [""]


def test_no_rows_are_a_block_of_none() -> None:
    block = Scorer(shipped("general-cvd-2008-lipids"), at=NOW).score({id: [] for id in WOMAN_61})
    assert block.size == 0
    assert block.stops.tolist() == []


def test_what_is_not_on_offer_is_refused_before_any_row() -> None:
    model = shipped("general-cvd-2008-lipids")
    with pytest.raises(UsageError, match="not a value of this model"):
        Scorer(model).score({"shoe_size": ["44"]})
    with pytest.raises(UsageError, match="has none of 5 years"):
        Scorer(model, span=Span(5.0, "a"))
    with pytest.raises(UsageError, match="not a recalibration"):
        Scorer(model, recalibration="north")
    with pytest.raises(UsageError, match="level"):
        Scorer(model, level=95)
    with pytest.raises(UsageError, match="no unit"):
        Scorer(model, units={"sex": "a"})
    with pytest.raises(UnitError, match="not given in"):
        Scorer(model, units={"age": "mm[Hg]"})
    with pytest.raises(UsageError, match="differ in length"):
        Scorer(model).score({"age": ["44"], "smoker": ["no", "no"]})
    with pytest.raises(UsageError, match="no column"):
        Scorer(model).score({})
