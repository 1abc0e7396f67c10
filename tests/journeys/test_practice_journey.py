"""A practice looks whether a model holds, makes the next version, and scores its people: what it is told on the way."""

import csv
import json
import shutil
from pathlib import Path

import numpy as np
import pytest

from tests.cli.calling import call, example
from tests.cli.northgate import MODEL, PEOPLE, PLAN, change_people, change_plan, lay_out, read_rows

EXCLUSIONS = 'exclusions = {prior_cvd = {column = "prior_cvd", yes = "yes"}}'


@pytest.fixture
def plan(tmp_path: Path) -> str:
    """The path of the shipped validation file, laid out in a folder of its own."""
    return str(lay_out(tmp_path))


def _repeat(folder: Path, times: int) -> None:
    """Everybody so many times, each under another name: chance is magnified, and O/E stays what it was."""
    names, *lines = (folder / PEOPLE).read_text(encoding="utf-8").splitlines()
    more = [f"{copy}-{line}" for copy in range(times) for line in lines]
    (folder / PEOPLE).write_text("\n".join([names, *more, ""]), encoding="utf-8")


def test_groups_are_said_beside_what_holds_for_everybody(plan: str, tmp_path: Path) -> None:
    """With so many people chance differences of groups are certain; the verdict still begins with the shift of all."""
    once = call("validate", plan, "--json").record["validation"]
    _repeat(tmp_path, 20)
    found = call("validate", plan, "--json").record["validation"]
    first, *rest = found["verdict"]
    ratio = found["horizons"][0]["observed_to_expected"]["value"]
    assert ratio == pytest.approx(once["horizons"][0]["observed_to_expected"]["value"], rel=1e-9)
    assert first.startswith("The predictions are too high throughout: ")
    assert f"observed over expected {ratio:.2f}" in first
    assert len(rest) >= 2
    of = {one["level"]: one["observed_to_expected"]["value"] for one in found["groups"]}
    for sentence in rest:
        assert sentence.startswith("The predictions are too high by ")
        assert "beside what was predicted" in sentence
        for level, own in of.items():
            if f": {level} (" in sentence:
                assert ("by more" in sentence) is (own < ratio), sentence


def test_what_is_answered_is_no_longer_called_not_stated(plan: str, tmp_path: Path) -> None:
    out = tmp_path / "new.json"
    assert call("update", plan, "-o", str(out)).status == 0
    names = [
        {item["item"]: item["text"] for item in json.loads(path.read_text("utf-8"))["model"]["documentation"]}
        for path in (tmp_path / MODEL, out)
    ]
    before, after = ([*items["not stated"].removesuffix(".").split("; ")] for items in names)
    assert "updating" in before
    assert "updating" in names[1]
    assert after == [one for one in before if one not in ("updating", "external validation")]


def test_the_very_people_of_the_update_are_recognised(plan: str, tmp_path: Path) -> None:
    out = tmp_path / "new.json"
    assert call("update", plan, "-o", str(out)).status == 0
    verdict = " ".join(call("validate", plan, "--model", str(out), "--json").record["validation"]["verdict"])
    assert "Version 1.1.0 was updated to 1,636 people with 103 events, as here" in verdict
    assert "this is no validation" in verdict
    change_plan(tmp_path, 'words = "Tarnwick Northgate', 'words = "Tarnwick Southgate')
    change_people(tmp_path, lambda place, row: row | ({"age": ""} if place < 300 else {}))
    verdict = " ".join(call("validate", plan, "--model", str(out), "--json").record["validation"]["verdict"])
    assert "no validation" not in verdict


def test_the_very_people_of_the_fit_are_recognised() -> None:
    study = str(Path(__file__).parents[2] / "example_models" / "tarnwick-cvd-10y-cox.toml")
    model = study.replace(".toml", ".json")
    verdict = " ".join(call("validate", study, "--model", model, "--json").record["validation"]["verdict"])
    assert "The model was made from 4,329 people with 522 events, as here" in verdict


def test_an_exclusion_that_nobody_answers_is_said_with_what_the_column_holds(plan: str, tmp_path: Path) -> None:
    assert not any("prior_cvd" in one for one in call("validate", plan, "--json").record["validation"]["remarks"])
    change_plan(tmp_path, EXCLUSIONS, EXCLUSIONS.replace('"yes"', '"1"'))
    remarks = " ".join(call("validate", plan, "--json").record["validation"]["remarks"])
    assert 'Nobody was left out by prior_cvd: "1", which means yes, stands in no line of the column' in remarks
    assert 'It holds "no" and "yes".' in remarks


def test_an_exclusion_left_empty_is_said(plan: str, tmp_path: Path) -> None:
    change_people(tmp_path, lambda place, row: row | ({"prior_cvd": ""} if place < 40 else {}))
    remarks = " ".join(call("validate", plan, "--json").record["validation"]["remarks"])
    assert 'The column "prior_cvd" of prior_cvd is empty in 40 lines. These people were not left out' in remarks


def test_a_scored_table_takes_the_exclusions_of_the_plan_and_has_its_figures(plan: str, tmp_path: Path) -> None:
    """Coded 1 and 0, as practices do; used, predicted and O/E are those of the validation."""
    change_people(tmp_path, lambda place, row: row | {"prior_cvd": {"yes": "1", "no": "0"}[row["prior_cvd"]]})
    change_plan(tmp_path, EXCLUSIONS, EXCLUSIONS.replace('"yes"', '"1"'))
    found = call("validate", plan, "--json").record["validation"]
    out = tmp_path / "scored.csv"
    ended = call("score", str(tmp_path / MODEL), str(tmp_path / PEOPLE), "-o", str(out), "--columns", plan)
    assert ended.status == 0, ended.err
    with out.open(encoding="utf-8", newline="") as file:
        rows = list(csv.DictReader(file))
    risks = np.array([float(row["probability"]) for row in rows if row["probability"]])
    assert len(risks) == found["people"]["used"] == 1636
    assert float(risks.mean()) == pytest.approx(found["horizons"][0]["expected"], rel=1e-12)
    stopped = [row for row in rows if "excluded:prior_cvd" in row["stops"]]
    assert len(stopped) == found["people"]["excluded"]["prior_cvd"] == 154


def test_an_unknown_answer_to_an_exclusion_stops_its_row_and_no_other(plan: str, tmp_path: Path) -> None:
    change_people(tmp_path, lambda place, row: row | {"prior_cvd": "perhaps" if place == 3 else row["prior_cvd"]})
    out = tmp_path / "scored.csv"
    assert call("score", str(tmp_path / MODEL), str(tmp_path / PEOPLE), "-o", str(out), "--columns", plan).status == 0
    with out.open(encoding="utf-8", newline="") as file:
        stopped = [place for place, row in enumerate(csv.DictReader(file)) if "unknown_answer" in row["stops"]]
    assert stopped == [3]
    assert len(read_rows(tmp_path)) == 2000


def test_what_holds_for_everybody_goes_before_an_exclusion_of_the_plan(plan: str, tmp_path: Path) -> None:
    lines = (tmp_path / PEOPLE).read_text(encoding="utf-8").splitlines()
    (tmp_path / PEOPLE).write_text("\n".join([lines[0].replace("prior_cvd", "earlier"), *lines[1:], ""]), "utf-8")
    words = ("score", str(tmp_path / MODEL), str(tmp_path / PEOPLE), "--columns", plan, "-o", str(tmp_path / "out.csv"))
    assert 'has no column "prior_cvd", which should hold prior_cvd.' in call(*words).err
    assert call(*words, "prior_cvd=no").status == 0


def test_years_in_words_are_answered_with_their_code(plan: str, tmp_path: Path) -> None:
    change_plan(tmp_path, 'start = "registered"\nend = "last_seen"', 'time = "last_seen"\nunit = "years"')
    assert '"years" is not one of "a", "d", "mo" or "wk". Did you mean "a"?' in call("validate", plan).err


def test_a_refit_says_that_its_population_is_still_the_parents(plan: str, tmp_path: Path) -> None:
    """Everybody twice, so that the events suffice; the plan's own population is left out."""
    _repeat(tmp_path, 2)
    words = ("update", plan, "--method", "refit")
    assert "For whom the model is meant" not in call(*words).out
    text = Path(plan).read_text(encoding="utf-8")
    Path(plan).write_text("\n".join(line for line in text.split("\n") if not line.startswith("use = ")), "utf-8")
    ended = call(*words)
    assert ended.status == 0, ended.err
    assert "still reads as in version 1.0.0" in " ".join(ended.out.split())


def test_a_model_that_needs_a_recalibration_is_not_judged_without_one_unsaid(tmp_path: Path) -> None:
    """And an update, which begins without one, says so."""
    lay_out(tmp_path)
    text = (tmp_path / PLAN).read_text(encoding="utf-8").replace(MODEL, "cvd-2021-regional.json")
    gone = ("groups =", "bp_treated =", "egfr =", "diabetes =")
    plan = tmp_path / "regional.toml"
    lines = [line for line in text.split("\n") if not line.startswith(gone)]
    plan.write_text("\n".join(lines), encoding="utf-8")
    shutil.copy(example("cvd-2021-regional"), tmp_path)
    verdict = call("validate", str(plan), "--json").record["validation"]["verdict"]
    assert verdict[-1].startswith("This is not the model as it is used: it gives no number without one")
    assert 'recalibration = "low", "moderate", "high" or "very-high".' in verdict[-1]
    plan.write_text("\n".join(['recalibration = "low"', *lines]), encoding="utf-8")
    verdict = call("validate", str(plan), "--json").record["validation"]["verdict"]
    assert "not the model as it is used" not in " ".join(verdict)
    ended = call("update", str(plan), "--method", "intercept")
    assert ended.status == 0, ended.err
    assert "The update began from the model without one" in " ".join(ended.out.split())
