"""Reference people: drawn as they are described, and only those for whom the equation gives a number."""

import msgspec
import numpy as np
import pytest
from msgspec import UNSET

from clinicalc.assessment.model import Model, ModelEquation
from clinicalc.coefficients.schema import (
    Choice,
    ChoicePredictor,
    CompetingEvents,
    Derived,
    Equation,
    Factor,
    Horizon,
    ModelContent,
    NoBand,
    NumberPredictor,
    Population,
    PopulationAnswer,
    PopulationChoice,
    PopulationNumber,
    Step,
    Term,
    YesNoPredictor,
)
from clinicalc.development.reconstruction_bands import make_bare_model
from clinicalc.development.reconstruction_plan import ReconstructionPlan
from clinicalc.development.reference_people import draw_people, find_population_faults, needed_predictors, take_rows
from clinicalc.errors import ReconstructionRefused
from tests.development.published import content_of

PLAN = ReconstructionPlan(seed=1)
PEOPLE = 40_000

AGE = NumberPredictor("age", "Age", "age", "a", "Person", derivation=(40.0, 60.0), outside_derivation="stop")
TOTAL = NumberPredictor("total_cholesterol", "Total cholesterol", "total_cholesterol", "mmol/L", "Blood")
HDL = NumberPredictor("hdl_cholesterol", "HDL cholesterol", "hdl_cholesterol", "mg/dL", "Blood")
SEX = ChoicePredictor("sex", "Sex", "Person", (Choice("female", "Female"), Choice("male", "Male")))
GROUP = ChoicePredictor("group", "Group", "Person", (Choice("a", "A"), Choice("b", "B"), Choice("c", "C")))
SMOKER = YesNoPredictor("smoker", "Smokes", "History")
TREATED = YesNoPredictor("treated", "Treated", "History")
NON_HDL = Derived(
    "non_hdl",
    "Non-HDL cholesterol",
    "non_hdl_cholesterol",
    "mmol/L",
    "non_hdl_cholesterol",
    {"total_cholesterol": "total_cholesterol", "hdl_cholesterol": "hdl_cholesterol"},
)

POPULATION = Population(
    source="Invented.",
    numbers=(
        PopulationNumber("age", 50.0, 12.0),
        PopulationNumber("total_cholesterol", 5.5, 1.0),
        PopulationNumber("hdl_cholesterol", 4.0, 0.25, log="natural"),
    ),
    correlations=((1.0, 0.3, 0.0), (0.3, 1.0, -0.6), (0.0, -0.6, 1.0)),
    yes_no=(
        PopulationAnswer("smoker", -1.0, {}),
        PopulationAnswer("treated", -42.0, {"hdl_cholesterol": 10.0, "smoker": 2.0}),
    ),
    choices=(PopulationChoice("group", {"a": 0.2, "b": 0.5, "c": 0.3}),),
)


def term(id: str, of: str, *steps: Step) -> Term:
    return Term(id, 0.1, product=(Factor(of, steps or UNSET),))


def equation(id: str, sex: str, population: Population | None = None) -> Equation:
    return Equation(
        id,
        {"sex": (sex,)},
        "logit",
        CompetingEvents("not_applicable"),
        (
            term("age", "age"),
            term("non_hdl", "non_hdl"),
            term("smoker", "smoker"),
            term("treated", "treated"),
            term("group_b", "group", Step(is_=("b",))),
            term("male", "sex", Step(is_=("male",))),
        ),
        (Horizon(years=10.0, intercept=-5.0),),
        NoBand("It is to be rebuilt."),
        population=UNSET if population is None else population,
    )


def content() -> ModelContent:
    return content_of(
        (AGE, TOTAL, HDL, SEX, GROUP, SMOKER, TREATED),
        (equation("women", "female"), equation("men", "male", msgspec.structs.replace(POPULATION, source="Men."))),
        derived=(NON_HDL,),
        population=POPULATION,
    )


@pytest.fixture(scope="module")
def model() -> Model:
    return make_bare_model(content(), PLAN)


@pytest.fixture
def men(model: Model) -> ModelEquation:
    return model.equations[1]


def test_people_are_drawn_as_described(model: Model, men: ModelEquation) -> None:
    people = draw_people(model, men, POPULATION, count=PEOPLE, seed=5)
    columns = people.columns
    assert people.count == PEOPLE
    assert {column.shape for column in columns.values()} == {(PEOPLE,)}
    assert (columns["sex"] == 1).all()
    # a normal of mean 50 and deviation 12 cut at 40 and 60, 0.833 deviations away: variance 1 - 2 * 0.8333 * phi / mass
    # = 1 - 2 * 0.8333 * 0.2819 / 0.5953 = 0.2108 of the whole
    assert columns["age"].mean() == pytest.approx(50.0, abs=0.1)
    assert columns["age"].std() == pytest.approx(12 * np.sqrt(0.2108), rel=0.01)
    assert people.left_out == pytest.approx(1 - 0.5953, abs=0.01)
    # of the others only what the cut of age leaves of its correlation with them
    assert np.log(columns["hdl_cholesterol"]).mean() == pytest.approx(4.0, abs=0.01)
    assert np.log(columns["hdl_cholesterol"]).std() == pytest.approx(0.25, rel=0.02)
    relation = np.corrcoef(columns["total_cholesterol"], np.log(columns["hdl_cholesterol"]))[0, 1]
    assert relation == pytest.approx(-0.6, abs=0.03)
    assert columns["smoker"].mean() == pytest.approx(1 / (1 + np.e), abs=0.01)
    odds = -42.0 + 10 * np.log(columns["hdl_cholesterol"]) + 2 * columns["smoker"]
    assert columns["treated"].mean() == pytest.approx(float((1 / (1 + np.exp(-odds))).mean()), abs=0.01)
    shares = [float((columns["group"] == place).mean()) for place in range(3)]
    assert shares == pytest.approx([0.2, 0.5, 0.3], abs=0.01)


def test_a_seed_gives_the_same_people_and_another_gives_others(model: Model, men: ModelEquation) -> None:
    one, same, other = (draw_people(model, men, POPULATION, count=20_000, seed=seed).columns for seed in (5, 5, 6))
    assert all((one[id] == same[id]).all() for id in one)
    assert not (one["age"] == other["age"]).any()


def test_nobody_is_outside_the_limits_or_contradicts_himself(model: Model, men: ModelEquation) -> None:
    columns = draw_people(model, men, POPULATION, count=PEOPLE, seed=5).columns
    assert columns["age"].min() >= 40
    assert columns["age"].max() <= 60
    # mg/dL to mmol/L with the table's 0.02586
    assert (columns["hdl_cholesterol"] * 0.02586 < columns["total_cholesterol"]).all()
    assert columns["non_hdl"] == pytest.approx(columns["total_cholesterol"] - columns["hdl_cholesterol"] * 0.02586)


def test_an_equation_needs_the_inputs_of_its_derived_values(model: Model, men: ModelEquation) -> None:
    needed = {"age", "total_cholesterol", "hdl_cholesterol", "smoker", "treated", "group", "sex"}
    assert needed_predictors(model, men) == needed
    assert needed_predictors(model, men, {"non_hdl"}) == needed - {"total_cholesterol", "hdl_cholesterol"}
    assert list(find_population_faults(model, men, POPULATION)) == []
    lacking = msgspec.structs.replace(POPULATION, choices=UNSET)
    (fault,) = find_population_faults(model, men, lacking)
    assert fault.path == "/model/equations/1/population"
    assert 'does not describe "group"' in fault.message


def test_rows_are_those_to_whom_the_equation_applies(model: Model, men: ModelEquation) -> None:
    rows = {
        # too young; a woman; HDL above total; and two who stay, one of them on the limit
        "age": np.array([39.0, 50.0, 50.0, 50.0, 60.0]),
        "sex": np.array([1.0, 0.0, 1.0, 1.0, 1.0]),
        "total_cholesterol": np.array([5.0, 5.0, 1.9, 5.0, 5.0]),
        "hdl_cholesterol": np.array([50.0, 50.0, 90.0, 50.0, 50.0]),
        "smoker": np.array([0.0, 1.0, 0.0, 1.0, 0.0]),
        "treated": np.zeros(5),
        "group": np.zeros(5),
    }
    people = take_rows(model, men, rows)
    assert people.columns["age"].tolist() == [50.0, 60.0]
    assert people.columns["non_hdl"] == pytest.approx([5.0 - 50.0 * 0.02586] * 2)
    assert people.count == 2
    assert people.left_out == pytest.approx(0.6)
    with pytest.raises(ReconstructionRefused, match="for none of the reference people"):
        take_rows(model, men, {id: column[:3] for id, column in rows.items()})
    with pytest.raises(ReconstructionRefused, match='lack the columns "group" and "sex"'):
        take_rows(model, men, {id: column for id, column in rows.items() if id not in ("group", "sex")})
