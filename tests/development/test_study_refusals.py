"""What a study cannot be fitted from: every fault in a sentence, at its place in the study file, all at once."""

from collections.abc import Mapping
from pathlib import Path
from typing import Any

import numpy as np
import pytest

from clinicalc.errors import DescriptionRefused
from tests.development.describing import Tree, linear_terms
from tests.development.studying import BINARY, plain_study, run_study, timed, write_people, write_study

YEAR = [{"time": 365, "unit": "d"}]
PEOPLE = 300


def people() -> dict[str, Any]:
    """Random people (numpy's PCG64, seed 1): nothing in them is related to anything."""
    draw = np.random.default_rng(1)
    return {
        "x": draw.normal(50, 10, PEOPLE).round(1),
        "z": draw.integers(0, 2, PEOPLE),
        "time": draw.exponential(900, PEOPLE).round() + 1,
        "status": (draw.random(PEOPLE) < 0.5).astype(int),
    }


def cox(**more: Any) -> Tree:
    return plain_study(["x", "z"], timed(), {"kind": "cox"}, horizons=YEAR, **more)


def logistic(names: list[str] | None = None) -> Tree:
    return plain_study(names or ["x", "z"], BINARY, {"kind": "logistic"})


def problems(folder: Path, columns: Mapping[str, Any], study: Tree) -> dict[str, str]:
    """What is said, by place."""
    write_people(folder / "people.csv", columns)
    with pytest.raises(DescriptionRefused) as refused:
        run_study(write_study(folder, study))
    return {problem.path: problem.message for problem in refused.value.problems}


def test_every_slip_of_a_study_file_at_once(tmp_path: Path) -> None:
    study = cox(terms=[{"spline_of": "x", "knots": 9}, *linear_terms(["z"])]) | {"titel": "A slip"}
    study["cohort"] |= {"persn": "id", "columns": {"zz": {"column": "z"}}}
    study["estimate"]["all"] |= {"tie": "efron", "covariance": "cluster"}
    study["estimate"]["some"] = {"kind": "cox"}
    said = problems(tmp_path, people(), study)
    assert said["titel"].endswith('Did you mean "title"?')
    assert said["cohort.persn"].endswith('Did you mean "person"?')
    assert said["estimate.all.tie"].endswith('Did you mean "ties"?')
    assert said["cohort.columns.zz"] == 'there is no predictor "zz". Did you mean "z"?'
    assert said["estimate.some"] == 'there is no equation "some". Known here: "all".'
    assert said['equations "all", terms 1, knots'] == "9 must be at most 7."
    assert 'field "terms"' not in " ".join(said.values())


@pytest.mark.parametrize(
    ("change", "sentence"),
    [
        ({"z": np.ones(PEOPLE, dtype=int)}, 'Column "z" is "1" for everybody'),
        ({"x": ["abc"] * PEOPLE}, 'Column "x" should hold numbers and holds only texts, such as "abc".'),
        ({"status": people()["status"] + 1}, 'event = "2" and censored = "1", or the other way round.'),
        ({"status": people()["status"] * 0}, 'Column "status": nobody had the event ("1" stands in no line)'),
        ({"time": np.where(np.arange(PEOPLE) < 3, 0, people()["time"])}, "a time of 0 cannot be, in lines 2, 3 and 4"),
    ],
    ids=["constant", "text", "coded 1 and 2", "no events", "time of 0"],
)
def test_people_that_stop_a_fit(change: dict[str, Any], sentence: str, tmp_path: Path) -> None:
    said = problems(tmp_path, people() | change, cox())
    assert len(said) == 1
    assert sentence in said["cohort"]


def test_separation(tmp_path: Path) -> None:
    columns = people()
    y = columns["status"]
    separated = {"x": np.where(y == 1, 70.0, 40.0) + columns["x"] / 100, "z": columns["z"], "y": y}
    said = problems(tmp_path, separated, logistic())
    assert "the values of people with and without the event do not overlap" in said["estimate.all"]


def test_a_rare_answer_without_events(tmp_path: Path) -> None:
    columns = people()
    rare = np.where((columns["status"] == 0) & (np.arange(PEOPLE) < 30), 1, 0)
    said = problems(tmp_path, columns | {"z": rare}, cox())
    assert '"z": none of the' in said["estimate.all"]


def test_more_terms_than_events(tmp_path: Path) -> None:
    names = [f"v{place}" for place in range(40)]
    draw = np.random.default_rng(2)
    columns = {name: draw.normal(size=PEOPLE).round(3) for name in names}
    said = problems(tmp_path, columns | {"y": (np.arange(PEOPLE) < 20).astype(int)}, logistic(names))
    assert said["estimate.all"].startswith("The equation has 40 coefficients and there are only 20 events")


def test_terms_that_follow_from_one_another(tmp_path: Path) -> None:
    said = problems(tmp_path, people() | {"z": people()["x"] * 2}, cox())
    assert '"z" says exactly the same as "x"' in said["estimate.all"]


def test_a_horizon_beyond_the_follow_up(tmp_path: Path) -> None:
    study = cox()
    study["equations"][0]["horizons"] = [{"years": 30}]
    said = problems(tmp_path, people(), study)
    longest = int(people()["time"].max())
    assert f"30 years lies beyond the follow-up: the longest is {longest} days" in said['equations "all", horizons']


def test_a_horizon_before_the_first_event(tmp_path: Path) -> None:
    study = cox()
    study["equations"][0]["horizons"] = [{"time": 0.5, "unit": "d"}]
    said = problems(tmp_path, people(), study)
    assert said['equations "all", horizons'].startswith("nobody had the event by 0.5 days")


def test_an_unknown_column_has_a_close_match(tmp_path: Path) -> None:
    study = cox()
    study["cohort"]["columns"] = {"x": {"column": "xx"}}
    assert problems(tmp_path, people(), study)["cohort"].endswith('Did you mean "x"?')


def test_knots_that_fall_together(tmp_path: Path) -> None:
    said = problems(tmp_path, people(), cox(terms=[{"spline_of": "z", "knots": 4}, *linear_terms(["x"])]))
    assert "heap so that two knots fall together: 0, 0, 1 and 1" in said['equations "all", terms 1, knots']


def test_competing_events_must_be_stated(tmp_path: Path) -> None:
    study = plain_study(["x", "z"], timed(competing="2"), {"kind": "cox"}, horizons=YEAR)
    said = problems(tmp_path, people(), study)
    assert 'competing_events = {handled = "censored"' in said['equations "all", competing_events, handled']


@pytest.mark.parametrize(("kind", "outcome"), [("logistic", timed()), ("cox", BINARY)])
def test_a_fit_needs_its_kind_of_outcome(kind: str, outcome: Tree, tmp_path: Path) -> None:
    study = plain_study(["x", "z"], outcome, {"kind": kind}, horizons=YEAR)
    assert "needs a" in problems(tmp_path, people(), study)["estimate.all.kind"]


def test_an_equation_for_nobody(tmp_path: Path) -> None:
    answers = [{"id": "a", "label": "A"}, {"id": "b", "label": "B"}]
    study = plain_study(
        [{"id": "group", "label": "Group", "kind": "choice", "group": "Values", "choices": answers}, "x"],
        timed(),
        {"kind": "cox"},
        horizons=YEAR,
    )
    common = study["equations"][0] | {"terms": linear_terms(["x"])}
    study["equations"] = [common | {"id": id, "applies_when": {"group": [id]}} for id in ("a", "b")]
    study["estimate"] = {"a": {"kind": "cox"}, "b": {"kind": "cox"}}
    columns = {name: column for name, column in people().items() if name != "z"}
    said = problems(tmp_path, columns | {"group": ["a"] * PEOPLE}, study)
    assert any("nobody" in sentence or "everybody" in sentence for sentence in said.values())


def test_dates_and_ranges_of_toml_are_spelled_as_in_a_description(tmp_path: Path) -> None:
    """A study is a description: what it says itself is kept, and only what it leaves out comes from its people."""
    study = cox()
    study["predictors"][0]["derivation"] = [20, "open"]
    study["source"]["derivation"] = {"people": 301}
    write_people(tmp_path / "people.csv", people())
    model = run_study(write_study(tmp_path, study)).model.content
    assert model.predictors[0].derivation == (20, None)  # type: ignore[union-attr]
    assert model.predictors[1].derivation == (0, 1)  # type: ignore[union-attr]
    assert model.source.derivation.people == 301  # type: ignore[union-attr]
    assert model.source.derivation.events == int(people()["status"].sum())  # type: ignore[union-attr]
