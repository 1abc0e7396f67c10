"""From the cells of a file to a patient's values: units, codes, derived values, what may stay open, exclusions."""

from pathlib import Path
from typing import Any

import numpy as np
import pytest

from clinicalc.assessment.assess import assess
from clinicalc.assessment.entry import entry_from_texts
from clinicalc.cohort.checked import CheckedCohort
from clinicalc.development.estimating import FittedStudy
from clinicalc.errors import Stopped
from clinicalc.operations.course import Course
from clinicalc.operations.study import check_data, fit_study, open_study
from tests.development.describing import Tree, linear_terms
from tests.development.studying import BINARY, plain_study, run_study, write_people, write_study
from tests.development.test_study_against_r import estimate_at

PEOPLE = 2000
CHOLESTEROL = {
    "id": "cholesterol",
    "label": "Total cholesterol",
    "kind": "number",
    "quantity": "total_cholesterol",
    "unit": "mmol/L",
    "group": "Blood",
}
SMOKER = {"id": "smoker", "label": "Smokes now", "kind": "yes_no", "group": "History"}
SEX = {
    "id": "sex",
    "label": "Sex",
    "kind": "choice",
    "group": "Person",
    "choices": [{"id": "female", "label": "Female"}, {"id": "male", "label": "Male"}],
}


def number(id: str, quantity: str, unit: str) -> Tree:
    return {"id": id, "label": id.title(), "kind": "number", "quantity": quantity, "unit": unit, "group": "Person"}


def people() -> dict[str, Any]:
    """Random people (numpy's PCG64, seed 7) whose outcome goes with cholesterol and smoking."""
    draw = np.random.default_rng(7)
    mmol = draw.normal(5.4, 1.0, PEOPLE).clip(3, 9)
    smokes = draw.random(PEOPLE) < 0.3
    eta = -1.5 + 0.5 * (mmol - 5.4) + 0.8 * smokes
    return {
        "chol": (mmol / 0.02586).round(),
        "smoke": np.where(smokes, "J", "N"),
        "kg": draw.normal(80, 12, PEOPLE).round(1),
        "cm": draw.normal(172, 8, PEOPLE).round(),
        "who": np.where(draw.random(PEOPLE) < 0.5, "w", "m"),
        "y": (draw.random(PEOPLE) < 1 / (1 + np.exp(-eta))).astype(int),
    }


def fitted(folder: Path, columns: dict[str, Any], study: Tree) -> tuple[CheckedCohort, FittedStudy]:
    write_people(folder / "people.csv", columns)
    read, course = open_study(write_study(folder, study)), Course()
    cohort = check_data(read, course)
    return cohort, fit_study(read, cohort, course)


def study_of(predictors: list[Tree | str], columns: Tree, **more: Any) -> Tree:
    study = plain_study(predictors, BINARY, {"kind": "logistic"}, **more)
    study["cohort"]["columns"] = columns
    return study


COLUMNS = {
    "cholesterol": {"column": "chol", "unit": "mg/dL"},
    "smoker": {"column": "smoke", "levels": {"yes": "J", "no": "N"}},
}


def test_units_and_codes(tmp_path: Path) -> None:
    """mg/dL in the file, mmol/L in the model: a slope 1 / 0.02586 times that of the file's own figures."""
    study = study_of([CHOLESTEROL, SMOKER], COLUMNS)
    cohort, found = fitted(tmp_path, people(), study)
    assert set(cohort.columns["smoker"]) == {0.0, 1.0}
    bare = study_of(["chol", SMOKER], {"smoker": COLUMNS["smoker"]})
    _, plain = fitted(tmp_path, people(), bare)
    ratio = found.fits["all"].coefficients[0] / plain.fits["all"].coefficients[0]
    assert ratio == pytest.approx(1 / 0.02586, rel=1e-9)
    model = run_study(write_study(tmp_path, study)).model
    own = estimate_at(model, {"cholesterol": "6", "smoker": "yes"})
    other = estimate_at(model, {"cholesterol": f"{6 / 0.02586!r} mg/dL", "smoker": "yes"})
    assert other.probability == pytest.approx(own.probability, rel=1e-12)
    low, high = model.content.predictors[0].derivation  # type: ignore[union-attr, misc]
    assert (low, high) == pytest.approx((people()["chol"].min() * 0.02586, people()["chol"].max() * 0.02586))


def test_a_value_worked_out(tmp_path: Path) -> None:
    """Body mass index from weight and height, with the range of the people used."""
    columns = {"weight": {"column": "kg"}, "height": {"column": "cm", "unit": "cm"}}
    study = study_of(
        [number("weight", "weight", "kg"), number("height", "height", "cm")], columns, terms=linear_terms(["bmi"])
    )
    inputs = {"weight": "weight", "height": "height"}
    study["derived"] = [
        {
            "id": "bmi",
            "label": "BMI",
            "quantity": "body_mass_index",
            "unit": "kg/m2",
            "equation": "body_mass_index",
            "inputs": inputs,
        }
    ]
    _, found = fitted(tmp_path, people(), study)
    bmi = people()["kg"] / (people()["cm"] / 100) ** 2
    assert found.people["all"].columns["bmi"] == pytest.approx(bmi)
    model = run_study(write_study(tmp_path, study)).model
    assert model.content.derived[0].derivation == pytest.approx((bmi.min(), bmi.max()))
    assert estimate_at(model, {"weight": "80", "height": "172"}).probability > 0


def test_a_value_that_may_stay_unmeasured(tmp_path: Path) -> None:
    """The described people stand in: a probability between those of a low and a high value."""
    study = study_of([CHOLESTEROL | {"may_be_missing": True}, SMOKER], COLUMNS)
    write_people(tmp_path / "people.csv", people())
    model = run_study(write_study(tmp_path, study)).model
    population = model.content.population
    assert population is not None
    mean, sd = (people()["chol"] * 0.02586).mean(), (people()["chol"] * 0.02586).std(ddof=1)
    assert (population.numbers[0].mean, population.numbers[0].sd) == pytest.approx((mean, sd))
    row = population.yes_no[0]
    share = 1 / (1 + np.exp(-row.intercept - row.coefficients["cholesterol"] * people()["chol"] * 0.02586))
    assert share.mean() == pytest.approx((people()["smoke"] == "J").mean())  # a logistic fit hits the share it is from
    found = assess(model, entry_from_texts({"cholesterol": "not measured", "smoker": "no"}), span=model.spans[0])
    assert found.estimate is not None
    low, high = (estimate_at(model, {"cholesterol": text, "smoker": "no"}).probability for text in ("4", "7"))
    assert low < found.estimate.probability < high


def test_skewed_numbers_are_described_by_their_logarithm(tmp_path: Path) -> None:
    columns = people()
    columns["x"] = np.exp(np.random.default_rng(8).normal(0, 1, PEOPLE)).round(4) + 0.001
    write_people(tmp_path / "people.csv", columns)
    model = run_study(write_study(tmp_path, study_of(["x"], {}))).model
    assert model.content.population is not None
    described = model.content.population.numbers[0]
    assert described.log == "natural"
    assert described.mean == pytest.approx(np.log(columns["x"]).mean())


def test_exclusions_and_people_without_an_equation(tmp_path: Path) -> None:
    """Five people whose sex is not known are in no fit, which is said; examples answer an exclusion with no."""
    columns = people()
    columns["who"] = np.where(np.arange(PEOPLE) < 5, "", columns["who"])
    study = study_of([SEX, CHOLESTEROL], COLUMNS | {"sex": {"column": "who", "levels": {"female": "w", "male": "m"}}})
    del study["cohort"]["columns"]["smoker"]
    common = study["equations"][0] | {"terms": linear_terms(["cholesterol"])}
    study["equations"] = [common | {"id": id, "applies_when": {"sex": [id]}} for id in ("female", "male")]
    study["estimate"] = {id: {"kind": "logistic"} for id in ("female", "male")}
    study["exclusions"] = [{"id": "ill_before", "ask": "Was the patient ill before?", "because": "It was not studied."}]
    _, found = fitted(tmp_path, columns, study)
    assert found.remarks == (
        "5 people are in no fit: no equation applies, because what decides which one does is missing.",
    )
    content = run_study(write_study(tmp_path, study)).model.content
    assert len(content.worked_examples) == 6
    assert {example.values["ill_before"] for example in content.worked_examples} == {"no"}
    described = [equation.population for equation in content.equations]
    assert [population.choices[0].shares["female"] for population in described] == [1.0, 0.0]  # type: ignore[union-attr, index]


def test_examples_are_nobody_s_own_values(tmp_path: Path) -> None:
    """Each of the three is made of medians and commonest answers of many people, three digits each."""
    write_people(tmp_path / "people.csv", people())
    content = run_study(write_study(tmp_path, study_of([CHOLESTEROL, SMOKER], COLUMNS))).model.content
    values = [example.values for example in content.worked_examples]
    assert len(values) == 3
    assert all(len(value["cholesterol"]) <= 4 for value in values)
    risks = [example.probability for example in content.worked_examples]
    assert risks == sorted(risks)


def test_what_is_documented(tmp_path: Path) -> None:
    study = study_of([CHOLESTEROL, SMOKER], COLUMNS)
    study["documentation"] = [{"item": "Fairness", "text": "Looked at by sex."}]
    write_people(tmp_path / "people.csv", people())
    package = run_study(write_study(tmp_path, study))
    texts = {item.item: item.text for item in package.model.content.documentation}
    events = int(people()["y"].sum())
    assert texts["sample size and events"].startswith(f"2,000 people, {events} events")
    assert texts["Fairness"] == "Looked at by sex."
    assert texts["analysis"].startswith("Logistic regression by maximum likelihood")
    assert "follow-up" not in texts
    assert "fairness" not in texts["not stated"]
    assert any(remark.startswith("The documentation does not answer: ") for remark in package.remarks)


@pytest.mark.parametrize("required", [False, True])
def test_recalibrations_are_shown_in_examples(required: bool, tmp_path: Path) -> None:
    """eta' = -0.2 + 0.9 eta, for the one year of the fit."""
    study = study_of([CHOLESTEROL, SMOKER], COLUMNS)
    line = {"intercept": -0.2, "slope": 0.9}
    study["recalibrations"] = [
        {"id": "north", "label": "North", "source": "Invented.", "years": 1, "equations": {"all": line}}
    ]
    study["recalibration_required"] = required
    write_people(tmp_path / "people.csv", people())
    content = run_study(write_study(tmp_path, study)).model.content
    shown = [example.recalibration for example in content.worked_examples]
    assert shown.count("north") == 1
    assert len(shown) == (1 if required else 4)


def test_an_equation_may_say_that_it_has_no_band(tmp_path: Path) -> None:
    study = study_of([CHOLESTEROL, SMOKER], COLUMNS)
    study["equations"][0]["uncertainty"] = {"basis": "none", "because": "It is not published."}
    write_people(tmp_path / "people.csv", people())
    model = run_study(write_study(tmp_path, study)).model
    found = assess(model, entry_from_texts({"cholesterol": "5", "smoker": "no"}), span=model.spans[0])
    assert found.estimate is not None
    assert found.estimate.band is None


def test_a_third_of_the_values_missing(tmp_path: Path) -> None:
    """Complete cases are used, and that many left out are cautioned against."""
    columns = people()
    missing = np.random.default_rng(9).random(PEOPLE) < 0.3
    columns["chol"] = np.where(missing, np.nan, columns["chol"])
    cohort, found = fitted(tmp_path, columns, study_of([CHOLESTEROL, SMOKER], COLUMNS))
    (figures,) = found.figures
    assert figures.people == PEOPLE - missing.sum()
    assert figures.left_out.missing == {"cholesterol": missing.sum()}
    assert not cohort.stops
    cautions = {one.code for one in figures.screened if one.gravity == "caution"}
    assert {"missing", "complete_cases"} <= cautions


def test_work_that_is_stopped(tmp_path: Path) -> None:
    write_people(tmp_path / "people.csv", people())
    read, course = open_study(write_study(tmp_path, study_of([CHOLESTEROL, SMOKER], COLUMNS))), Course()
    cohort = check_data(read, course)
    course.stop()
    with pytest.raises(Stopped):
        fit_study(read, cohort, course)
