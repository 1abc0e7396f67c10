"""`clinicalc update`: the next version of a model, whole or not at all, with its parent and its people named in it."""

import json
import math
from pathlib import Path
from typing import Any

import pytest

from clinicalc.coefficients.reader import read_file
from clinicalc.library.key_files import make_key
from tests.cli.calling import call
from tests.cli.northgate import MODEL, PEOPLE, Row, change_people, change_plan, lay_out

PASSPHRASE = "a dozen invented words"
WORDS = (
    "prior_cvd=no",
    "age=61",
    "sex=female",
    "systolic_bp=142",
    "bp_treated=no",
    "smoker=yes",
    "diabetes=no",
    "egfr=78",
    "total_cholesterol=5.2",
    "hdl_cholesterol=1.3",
)


@pytest.fixture
def plan(tmp_path: Path) -> str:
    """The path of the shipped validation file, laid out in a folder of its own."""
    return str(lay_out(tmp_path))


def said(text: str) -> str:
    """All of it on one line."""
    return " ".join(text.split())


def hazard(file: Path) -> float:
    """The log cumulative hazard at 10 years, as it stands in a file of one equation."""
    (equation,) = json.loads(file.read_text(encoding="utf-8"))["model"]["equations"]
    return float(equation["horizons"][0]["log_cumulative_hazard"])


def test_a_new_version_is_made_and_answers(plan: str, tmp_path: Path) -> None:
    out = tmp_path / "new.json"
    ended = call("update", plan, "-o", str(out))
    assert (ended.status, ended.err) == (0, "")
    assert "version 1.1.0: written to" in said(ended.out)
    content = json.loads(out.read_text(encoding="utf-8"))["model"]
    assert (content["id"], content["version"]) == ("tarnwick-cvd-10y-cox", "1.1.0")
    ancestry = content["ancestry"]
    assert ancestry["fingerprint"] == read_file(tmp_path / MODEL).fingerprint
    assert ancestry["version"] == "1.0.0"
    assert ancestry["cohort"]["words"] == "Tarnwick Northgate, everybody registered on 2012-01-01, invented"
    assert ancestry["method"] == "intercept"
    before, after = (call("assess", str(file), *WORDS, "--json").record for file in (tmp_path / MODEL, out))
    # 0.65 times the hazard is the truth (make_tarnwick_northgate.RATIO), and 1/sqrt(103 events) its standard error
    moved = math.log(math.log1p(-after["probability"]) / math.log1p(-before["probability"]))
    assert moved == pytest.approx(math.log(0.65), abs=3 / math.sqrt(103))
    assert moved == pytest.approx(hazard(out) - hazard(tmp_path / MODEL), abs=1e-12)


def test_one_json_object(plan: str, tmp_path: Path) -> None:
    out = tmp_path / "new.json"
    record = call("update", plan, "-o", str(out), "--json").record
    assert record["file"] == str(out)
    assert record["fingerprint"] == read_file(out).fingerprint
    (equation,) = record["update"]["equations"]
    (line,) = equation["lines"]
    assert line["intercept"] == pytest.approx(hazard(out) - hazard(tmp_path / MODEL), abs=1e-12)
    # in the people it was moved to, the new version expects as many events as there were
    (at,) = record["after"]["horizons"]
    assert at["observed_to_expected"]["value"] == pytest.approx(1.0, abs=0.02)
    (before,) = record["validation"]["horizons"]
    assert before["observed_to_expected"]["value"] < 0.8
    # how far off it could be and pass unseen is nothing that these people could tell
    assert record["after"]["verdict"] == [
        "These are the people that the new version was made from: this is no validation of it."
    ]


@pytest.mark.parametrize("method", ["intercept", "intercept_slope", "two_scale"])
def test_a_method_of_the_call_stands_in_the_place_of_the_plans(method: str, plan: str, tmp_path: Path) -> None:
    change_plan(tmp_path, "[update]\n", "[update]\ngroups = 4\n")
    record = call("update", plan, "--method", method, "--json").record
    assert record["update"]["method"] == method
    assert [one["method"] for one in record["update"]["equations"]] == [method]
    assert record["file"] is None


def test_beside_a_slope_the_intercept_is_not_called_a_shift(plan: str) -> None:
    shifted = said(call("update", plan, "--method", "intercept").out)
    assert "Shift of the linear predictor −0.4365 at 10 years (standard error 0.1022)." in shifted
    sloped = said(call("update", plan, "--method", "intercept_slope").out)
    assert "New linear predictor where the old one is 0: −0." in sloped
    assert "Shift of" not in sloped


def test_a_refit_to_few_events_is_refused_and_nothing_is_written(plan: str, tmp_path: Path) -> None:
    out = tmp_path / "new.json"
    ended = call("update", plan, "--method", "refit", "-o", str(out))
    assert (ended.status, ended.out) == (4, "")
    assert "a refit of 12 coefficients takes 120 events at least" in said(ended.err)
    assert not out.exists()


def test_few_events_are_said_to_be_few(plan: str, tmp_path: Path) -> None:
    assert "few for an update" not in said(call("update", plan, "--method", "intercept").out)
    change_people(tmp_path, lambda place, row: row if place % 2 else row | {"prior_cvd": "yes"})
    ended = call("update", plan, "--method", "intercept")
    assert ended.status == 0
    events = record_of(plan, "--method", "intercept")["update"]["events"]
    assert events < 100
    assert said(ended.out).count(f"{events} events are few for an update: with fewer than 100") == 1


def test_a_model_that_holds_is_kept(tmp_path: Path) -> None:
    lay_out(tmp_path)
    model = tmp_path / "new.json"
    plan = str(tmp_path / "tarnwick-northgate-validation.toml")
    assert call("update", plan, "-o", str(model)).status == 0
    again = tmp_path / "newer.json"
    ended = call("update", plan, "--model", str(model), "--version", "1.2.0", "-o", str(again))
    assert (ended.status, ended.err) == (3, "")
    assert f"The model is kept as it is, and there is no new version of it. {again} was not written." in said(ended.out)
    assert not again.exists()
    record = call("update", plan, "--model", str(model), "--version", "1.2.0", "--json").record
    assert (record["update"]["keeps"], record["file"], record["after"]) == (True, None, None)


def test_nothing_is_written_without_a_place(plan: str, tmp_path: Path) -> None:
    before = sorted(tmp_path.iterdir())
    ended = call("update", plan)
    assert ended.status == 0
    assert ended.out.endswith("No coefficient file was written. Say -o NEW.json to keep it.\n")
    assert sorted(tmp_path.iterdir()) == before


@pytest.mark.parametrize(
    "words",
    [
        ("--replace",),
        ("--sign-key", "key.json"),
        ("--method", "guess"),
        ("-o", "same.json", "--report", "same.json"),
    ],
)
def test_words_that_contradict(words: tuple[str, ...], plan: str) -> None:
    ended = call("update", plan, *words)
    assert (ended.status, ended.out) == (2, "")


def test_neither_method_nor_version_is_guessed(plan: str, tmp_path: Path) -> None:
    change_plan(tmp_path, 'version = "1.1.0"\n', "")
    ended = call("update", plan)
    assert ended.status == 2
    assert "--version; the model is 1.0.0" in said(ended.err)
    text = (tmp_path / "tarnwick-northgate-validation.toml").read_text(encoding="utf-8")
    (tmp_path / "tarnwick-northgate-validation.toml").write_text(text.partition("[update]")[0], encoding="utf-8")
    ended = call("update", plan, "--version", "1.1.0")
    assert ended.status == 2
    assert "--method closed_test" in said(ended.err)
    assert call("update", plan, "--version", "1.1.0", "--method", "intercept").status == 0


def test_a_new_version_has_to_say_who_its_people_were(plan: str, tmp_path: Path) -> None:
    change_plan(tmp_path, 'words = "Tarnwick Northgate, everybody registered on 2012-01-01, invented"\n', "")
    ended = call("update", plan)
    assert (ended.status, ended.out) == (2, "")
    assert "nobody says who these people are" in ended.err
    assert call("validate", plan).status == 0


def test_a_version_that_is_not_higher_is_refused(plan: str, tmp_path: Path) -> None:
    ended = call("update", plan, "--version", "1.0.0", "-o", str(tmp_path / "new.json"))
    assert ended.status == 4
    assert "1.0.0" in ended.err
    assert not (tmp_path / "new.json").exists()


def test_a_file_that_is_there_stays(plan: str, tmp_path: Path) -> None:
    out = tmp_path / "new.json"
    assert call("update", plan, "-o", str(out)).status == 0
    first = out.read_bytes()
    again = call("update", plan, "-o", str(out))
    assert again.status == 2
    assert "is there already and was left as it is" in said(again.err)
    assert call("update", plan, "-o", str(out), "--method", "intercept_slope", "--replace").status == 0
    assert out.read_bytes() != first


def test_the_same_people_give_the_same_file(plan: str, tmp_path: Path) -> None:
    for name in ("one.json", "two.json"):
        assert call("update", plan, "-o", str(tmp_path / name)).status == 0
    assert (tmp_path / "one.json").read_bytes() == (tmp_path / "two.json").read_bytes()


def test_signed_where_a_key_is_named(plan: str, tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    make_key(tmp_path / "key.json", "Invented Publisher", PASSPHRASE)
    monkeypatch.setenv("CLINICALC_PASSPHRASE", PASSPHRASE)
    out = tmp_path / "new.json"
    ended = call("update", plan, "-o", str(out), "--sign-key", str(tmp_path / "key.json"), "--json")
    assert ended.status == 0, ended.err
    assert ended.record["signatures"] == len(read_file(out).content.signatures) == 1
    monkeypatch.setenv("CLINICALC_PASSPHRASE", "another dozen of words")
    before = out.read_bytes()
    wrong = call("update", plan, "-o", str(out), "--replace", "--sign-key", str(tmp_path / "key.json"))
    assert (wrong.status, wrong.out) == (6, "")
    assert out.read_bytes() == before


def test_a_report_beside_the_file(plan: str, tmp_path: Path) -> None:
    report = tmp_path / "update.pdf"
    ended = call("update", plan, "--report", str(report))
    assert (ended.status, ended.err) == (0, "")
    assert report.read_bytes().startswith(b"%PDF")


def test_a_report_goes_where_the_file_cannot_be_written(plan: str, tmp_path: Path) -> None:
    report, out = tmp_path / "update.pdf", tmp_path / "full" / "new.json"
    out.parent.mkdir()
    out.mkdir()
    ended = call("update", plan, "-o", str(out), "--report", str(report), "--replace")
    assert ended.status != 0
    assert not report.exists()


# what these people do not let be done


def refused(plan: str, *words: str) -> str:
    ended = call("update", plan, *words)
    assert ended.status == 4, (ended.out, ended.err)
    assert "Something went wrong" not in ended.err
    return said(ended.out + ended.err)


def test_nobody_has_the_event(plan: str, tmp_path: Path) -> None:
    change_people(tmp_path, lambda _, row: row | {"status": "0"})
    assert "event" in refused(plan, "--method", "intercept")


def test_predictions_that_are_all_equal(plan: str, tmp_path: Path) -> None:
    same = {"prior_cvd": "no", "age": "60", "sex": "M", "sbp": "140", "bp_tablets": "0", "chol": "5.0"}
    same |= {"hdl": "1.2", "smoker": "no", "diabetes": "0", "egfr": "80"}
    change_people(tmp_path, lambda _, row: row | same)
    assert "everybody has the same prediction" in refused(plan, "--method", "intercept_slope")
    assert call("update", plan, "--method", "intercept").status == 0


def test_the_sick_coded_as_the_well(plan: str, tmp_path: Path) -> None:
    def turn(_: int, row: Row) -> Row:
        # the event comes to the young, and to nobody else
        return row | {"status": "1" if int(row["age"]) < 40 else "0"}

    change_people(tmp_path, turn)
    assert "a slope must be above 0" in refused(plan, "--method", "intercept_slope")


def test_stops_of_the_people_are_told_and_nothing_is_written(plan: str, tmp_path: Path) -> None:
    change_people(tmp_path, lambda place, row: row | ({"chol": "<2.6"} if place == 4 else {}))
    out = tmp_path / "new.json"
    ended = call("update", plan, "-o", str(out))
    assert ended.status == 4
    assert '"<2.6" in line 6' in said(ended.out)
    assert not out.exists()
    assert (tmp_path / PEOPLE).exists()


def record_of(plan: str, *words: str) -> Any:
    return call("update", plan, *words, "--json").record


def test_people_outside_the_model_change_nothing(plan: str, tmp_path: Path) -> None:
    before = record_of(plan)["update"]

    def spoil(_: int, row: Row) -> Row:
        return row | ({"status": "1", "sbp": "180"} if row["prior_cvd"] == "yes" else {})

    change_people(tmp_path, spoil)
    assert record_of(plan)["update"] == before
