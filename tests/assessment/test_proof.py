"""A file proves itself at every load."""

import json
from pathlib import Path

import pytest

from clinicalc.assessment.proof import load_model, load_model_bytes
from clinicalc.errors import CoefficientFileRefused, Problem
from clinicalc.resources import list_example_models, read_shipped

LIPIDS = read_shipped("example_models/general-cvd-2008-lipids.json")


def refusal(change: dict[str, object], at: tuple[str | int, ...]) -> tuple[Problem, ...]:
    """The problems of the lipid form with some members of one object changed."""
    tree = json.loads(LIPIDS)
    part = tree["model"]
    for key in at:
        part = part[key]
    part.update(change)
    with pytest.raises(CoefficientFileRefused) as refused:
        load_model_bytes(json.dumps(tree).encode(), "changed.json")
    return refused.value.problems


@pytest.mark.parametrize("name", list_example_models())
def test_every_shipped_file_proves_itself(name: str) -> None:
    model = load_model_bytes(read_shipped(f"example_models/{name}"), name)
    assert model.content.worked_examples


def test_a_mistyped_coefficient_is_caught() -> None:
    (problem, *_) = refusal({"coefficient": 2.23888}, ("equations", 0, "terms", 0))
    assert problem.path == "/model/worked_examples/0/probability"
    assert "misses" in problem.message


def test_a_worked_example_that_gives_no_number_is_refused_with_the_reason() -> None:
    tree = json.loads(LIPIDS)
    values = tree["model"]["worked_examples"][0]["values"]
    (problem, *_) = refusal({"values": values | {"age": "80"}}, ("worked_examples", 0))
    assert "no number" in problem.message
    assert "30–74" in problem.message


def test_a_step_that_is_not_finite_in_range_is_refused() -> None:
    """log(total cholesterol - 100 mg/dL) has no value at 40 mg/dL, which is possible."""
    tree = json.loads(LIPIDS)
    term = next(
        place for place, t in enumerate(tree["model"]["equations"][0]["terms"]) if t["id"] == "ln_total_cholesterol"
    )
    steps = [{"subtract": 100}, {"log": "natural"}]
    (problem, *_) = refusal({"product": [{"of": "total_cholesterol", "steps": steps}]}, ("equations", 0, "terms", term))
    assert problem.path == f"/model/equations/0/terms/{term}/product/0/steps/1"
    assert "at or below 0" in problem.message


def test_an_example_far_out_of_tolerance_in_one_limit_is_caught() -> None:
    name = "tarnwick-cvd-10y.json"
    tree = json.loads(read_shipped(f"example_models/{name}"))
    tree["model"]["worked_examples"][0]["upper"] += 0.001
    with pytest.raises(CoefficientFileRefused) as refused:
        load_model_bytes(json.dumps(tree).encode(), name)
    assert [problem.path for problem in refused.value.problems] == ["/model/worked_examples/0/upper"]


def test_an_example_may_carry_dates() -> None:
    tree = json.loads(LIPIDS)
    values = tree["model"]["worked_examples"][0]["values"]
    values["total_cholesterol"] = "180 mg/dL on 2015-01-01"
    assert load_model_bytes(json.dumps(tree).encode(), "dated.json").content.worked_examples


def test_a_path_may_be_a_text(tmp_path: Path) -> None:
    file = tmp_path / "tarnwick-cvd-10y.json"
    file.write_bytes(read_shipped("example_models/tarnwick-cvd-10y.json"))
    assert load_model(str(file)).fingerprint == load_model(file).fingerprint
