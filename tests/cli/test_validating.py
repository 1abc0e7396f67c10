"""`clinicalc validate`: the verdict first, every bad input a sentence, and nothing written that is not whole."""

import shutil
from pathlib import Path

import pytest

from clinicalc.resources import find_shipped
from tests.cli.calling import call
from tests.cli.northgate import MODEL, PEOPLE, PLAN, Row, change_people, change_plan, lay_out, read_rows


@pytest.fixture
def plan(tmp_path: Path) -> str:
    """The path of the shipped validation file, laid out in a folder of its own."""
    return str(lay_out(tmp_path))


def said(text: str) -> str:
    """All of it on one line."""
    return " ".join(text.split())


def test_the_verdict_comes_first_and_everybody_is_accounted_for(plan: str) -> None:
    ended = call("validate", plan)
    assert (ended.status, ended.err) == (0, "")
    record = call("validate", plan, "--json").record["validation"]
    first = said(ended.out.split("\n\n")[0])
    assert first == said(" ".join(record["verdict"]))
    people = record["people"]
    parts = [*people["excluded"].values(), *(people[name] for name in ("not_covered", "no_outcome", "missing"))]
    assert people["in_file"] == 2000 == sum(parts) + people["refused"] + people["used"]
    assert f"Used: {people['used']:,}" in ended.out


def test_figures_are_told_as_they_are_recorded(plan: str) -> None:
    told = said(call("validate", plan).out)
    (at,) = call("validate", plan, "--json").record["validation"]["horizons"]
    for name in ("observed_to_expected", "slope", "c", "uno", "auc", "brier"):
        measure = at[name]
        assert f"{measure['value']:.4f} {measure['lower']:.4f} to {measure['upper']:.4f}" in told, name
    assert at["intercept"]["value"] < 0
    assert f"−{-at['intercept']['value']:.4f}" in told
    assert [one["point"] for one in at["decisions"]] == [0.1, 0.2]


def test_check_reads_and_works_nothing_out(plan: str, tmp_path: Path) -> None:
    before = sorted(tmp_path.iterdir())
    ended = call("validate", plan, "--check")
    assert (ended.status, ended.err) == (0, "")
    assert ended.out.endswith("The model may be held against these people.\n")
    assert sorted(tmp_path.iterdir()) == before
    assert call("validate", plan, "--check", "--json").record["data"]["people"] == 2000


@pytest.mark.parametrize(
    "words",
    [
        ("--check", "--report", "x.pdf"),
        ("--check", "--replace"),
        ("--check", "--figures", "x"),
        ("--replace",),
        ("--library", "somewhere"),
        ("--model", MODEL, "--approved", "tarnwick-cvd-10y-cox"),
    ],
)
def test_words_that_contradict(words: tuple[str, ...], plan: str) -> None:
    ended = call("validate", plan, *words)
    assert (ended.status, ended.out) == (2, "")


def test_a_study_file_names_the_people_and_the_call_names_the_model(tmp_path: Path) -> None:
    lay_out(tmp_path)
    for name in ("tarnwick-cvd-10y-cox.toml", "tarnwick-cohort.csv"):
        shutil.copy(find_shipped(f"example_models/{name}"), tmp_path / name)
    study = str(tmp_path / "tarnwick-cvd-10y-cox.toml")
    lacking = call("validate", study)
    assert lacking.status == 2
    assert "--model FILE.json" in lacking.err
    found = call("validate", study, "--model", str(tmp_path / MODEL), "--json").record["validation"]
    assert found["people"]["in_file"] == 5000
    # in the very people it was fitted to as many had the event as were predicted
    (at,) = found["horizons"]
    assert at["slope"]["value"] == pytest.approx(1.0, abs=1e-6)


def test_a_model_that_counts_competing_events_is_held_against_their_incidence(plan: str, tmp_path: Path) -> None:
    model = str(find_shipped("example_models/tarnwick-cvd-10y-finegray.json"))
    (at,) = call("validate", plan, "--model", model, "--json").record["validation"]["horizons"]
    assert (at["outcomes"], at["observed"]["method"]) == ("competing", "aalen_johansen")
    assert at["competing"] > 0
    told = said(call("validate", plan, "--model", model).out)
    people = f"Of {at['people']:,} people {at['events']:,} were seen to have the event by 10 years"
    assert f"{people}, another event first in {at['competing']:,}" in told
    assert "Harrell, other events stay to the end" in told


def test_a_yes_or_no_is_counted(plan: str, tmp_path: Path) -> None:
    change_people(tmp_path, lambda _, row: row | {"status": "1" if row["status"] == "1" else "0"})
    text = (tmp_path / PLAN).read_text(encoding="utf-8")
    begin, end = text.index("[cohort.outcome]"), text.index("[cohort.columns]")
    outcome = '[cohort.outcome]\nkind = "binary"\ncolumn = "status"\nevent = "1"\nno_event = "0"\n\n'
    text = text[:begin] + outcome + text[end:].replace('egfr = {column = "egfr"}\n', "")
    (tmp_path / PLAN).write_text(text, encoding="utf-8")
    model = str(find_shipped("example_models/tarnwick-cvd-10y.json"))
    ended = call("validate", plan, "--model", model, "--json")
    assert ended.status == 0, ended.err
    (at,) = ended.record["validation"]["horizons"]
    # by hand: the model is for 35 to 79 years, and asks for no eGFR
    used = [
        row
        for row in read_rows(tmp_path)
        if row["prior_cvd"] == "no"
        and "" not in (row["sbp"], row["chol"], row["hdl"])
        and row["smoker"] != "unknown"
        and 35 <= int(row["age"]) <= 79
    ]
    events = sum(row["status"] == "1" for row in used)
    assert (at["people"], at["events"]) == (len(used), events)
    assert at["observed"]["value"] == pytest.approx(events / len(used), abs=1e-15)
    assert at["outcomes"] == "binary"
    told = said(call("validate", plan, "--model", model).out)
    assert "C, the area under the ROC curve" in told
    assert "Uno" not in told


# what is wrong with the files, each in its own words


def test_nobodys_outcome_is_known(plan: str, tmp_path: Path) -> None:
    change_people(tmp_path, lambda _, row: row | {"status": ""})
    ended = call("validate", plan)
    assert ended.status == 4
    assert "status" in ended.out + ended.err
    assert_nothing_worked_out(ended.out)


def test_a_horizon_beyond_the_follow_up(plan: str, tmp_path: Path) -> None:
    def cut(_: int, row: Row) -> Row:
        if row["last_seen"] > "2016-12-31":
            return row | {"last_seen": "2016-12-31", "status": "0"}
        return row

    change_people(tmp_path, cut)
    ended = call("validate", plan)
    assert ended.status == 2
    assert "10 years lies beyond the follow-up" in said(ended.err)
    assert ended.out == ""


def test_a_group_of_three_people_has_no_figures_and_says_why(plan: str, tmp_path: Path) -> None:
    change_people(tmp_path, lambda place, row: row | ({"surgery": "The barge"} if place in (0, 1, 2) else {}))
    ended = call("validate", plan, "--json")
    assert ended.status == 0, ended.err
    (barge,) = [group for group in ended.record["validation"]["groups"] if group["level"] == "The barge"]
    assert barge["people"] == 3
    assert barge["observed_to_expected"]["value"] is None
    assert "3 people are in this group" in barge["why"]
    assert barge["why"] in said(call("validate", plan).out)


def test_predictions_that_are_all_equal(plan: str, tmp_path: Path) -> None:
    same = {
        "prior_cvd": "no",
        "age": "60",
        "sex": "M",
        "sbp": "140",
        "bp_tablets": "0",
        "chol": "5.0",
        "hdl": "1.2",
        "smoker": "no",
        "diabetes": "0",
        "egfr": "80",
    }
    change_people(tmp_path, lambda _, row: row | same)
    ended = call("validate", plan, "--json")
    assert ended.status == 0, ended.err
    (at,) = ended.record["validation"]["horizons"]
    assert at["slope"]["value"] is None
    assert "same predicted risk" in at["slope"]["why"]
    assert at["c"]["value"] is None
    assert at["observed_to_expected"]["value"] > 0
    told = said(call("validate", plan).out)
    assert at["slope"]["why"] in told


def test_a_decision_point_that_nobody_reaches(plan: str, tmp_path: Path) -> None:
    change_plan(tmp_path, "[0.1, 0.2]", "[0.1, 0.99]")
    ended = call("validate", plan, "--json")
    assert ended.status == 0, ended.err
    (at,) = ended.record["validation"]["horizons"]
    last = at["decisions"][-1]
    assert (last["point"], last["flagged"], last["net_benefit"]) == (0.99, 0, 0.0)
    assert last["positive_value"]["value"] is None
    assert "Nobody reaches the decision point." in said(call("validate", plan).out)


def test_a_column_in_the_wrong_unit_stops(plan: str, tmp_path: Path) -> None:
    def to_mass(_: int, row: Row) -> Row:
        return row | {"chol": str(round(float(row["chol"]) * 38.67))} if row["chol"] else row

    change_people(tmp_path, to_mass)
    ended = call("validate", plan)
    assert ended.status == 4
    assert "mg/dL" in ended.out
    assert_nothing_worked_out(ended.out)
    change_plan(tmp_path, 'column = "chol", unit = "mmol/L"', 'column = "chol", unit = "mg/dL"')
    assert call("validate", plan).status == 0


def test_a_row_with_too_many_fields(plan: str, tmp_path: Path) -> None:
    path = tmp_path / PEOPLE
    lines = path.read_text(encoding="utf-8").splitlines()
    lines[6] += ",7"
    path.write_text("\n".join(lines) + "\n", encoding="utf-8")
    ended = call("validate", plan)
    assert (ended.status, ended.out) == (4, "")
    assert "line 7" in ended.err


def test_a_list_of_those_who_are_still_there_is_asked_about(plan: str, tmp_path: Path) -> None:
    asked = "Is this everybody who was there at the start?"
    assert asked not in said(call("validate", plan).out)

    def stay(_: int, row: Row) -> Row:
        return row if row["status"] == "1" else row | {"status": "0", "last_seen": "2022-12-31"}

    change_people(tmp_path, stay)
    ended = call("validate", plan)
    assert ended.status == 0
    assert f"Nobody of them was lost before 10 years, and nobody died of anything else. {asked}" in said(ended.out)


def test_slips_of_the_plan_are_all_told_at_once(plan: str, tmp_path: Path) -> None:
    change_plan(tmp_path, "decision_points", "decision_point")
    change_plan(tmp_path, '"diabetes", "surgery"]', '"diabetis", "surgery"]')
    change_plan(tmp_path, "{years = 10}", "{years = 5}")
    ended = call("validate", plan)
    assert (ended.status, ended.out) == (4, "")
    assert 'the field "decision_point" is not known here. Did you mean "decision_points"?' in said(ended.err)
    change_plan(tmp_path, "decision_point =", "decision_points =")
    ended = call("validate", plan)
    assert "by 5 years" in said(ended.err)
    change_plan(tmp_path, "{years = 5}", "{years = 10}")
    ended = call("validate", plan)
    assert ended.status == 4
    assert '"diabetis"' in ended.err
    assert '"diabetes"' in ended.err


@pytest.mark.parametrize("name", ["nobody.toml", "."])
def test_a_plan_that_cannot_be_read(name: str, tmp_path: Path) -> None:
    ended = call("validate", str(tmp_path / name))
    assert ended.status == 4
    assert "Something went wrong" not in ended.err


def test_a_model_that_is_not_there_or_damaged(plan: str, tmp_path: Path) -> None:
    (tmp_path / MODEL).write_text("{", encoding="utf-8")
    assert call("validate", plan).status == 4
    (tmp_path / MODEL).unlink()
    ended = call("validate", plan)
    assert ended.status == 4
    assert MODEL in ended.err


# what is written


def test_report_and_tables_are_written_whole_and_replaced_only_on_request(plan: str, tmp_path: Path) -> None:
    report, tables = tmp_path / "out.pdf", tmp_path / "figures"
    words = ("validate", plan, "--report", str(report), "--tables", str(tables))
    ended = call(*words)
    assert (ended.status, ended.err) == (0, "")
    assert report.read_bytes().startswith(b"%PDF")
    first = {path.name: path.read_bytes() for path in tables.iterdir()}
    assert first
    assert all(name.endswith(".csv") for name in first)
    again = call(*words)
    assert again.status != 0
    assert str(report) in again.err
    assert {path.name: path.read_bytes() for path in tables.iterdir()} == first
    assert call(*words, "--replace").status == 0
    assert {path.name: path.read_bytes() for path in tables.iterdir()} == first


def test_each_figure_is_written_beside_the_rest(plan: str, tmp_path: Path) -> None:
    tables, figures = tmp_path / "tables", tmp_path / "figures"
    words = ("validate", plan, "--tables", str(tables), "--figures", str(figures))
    ended = call(*words)
    assert (ended.status, ended.err) == (0, "")
    assert ended.out.endswith(f"Tables: written to {tables}\nFigures: written to {figures}\n")
    names = ("people", "calibration 10 years", "spread 10 years", "net benefit 10 years", "groups")
    assert {path.name for path in figures.iterdir()} == {f"{name}.pdf" for name in names}
    assert all(path.read_bytes().startswith(b"%PDF") for path in figures.iterdir())
    assert call("validate", plan, "--figures", str(figures)).status != 0
    record = call(*words, "--replace", "--json").record
    assert (record["tables"], record["figures"]) == (str(tables), str(figures))
    same = call("validate", plan, "--tables", str(tables), "--figures", f"{tables}/", "--replace")
    assert same.status == 2
    assert "the same folder" in said(same.err)


def test_a_place_that_cannot_be_written_is_said_before_the_people_are_read(plan: str, tmp_path: Path) -> None:
    (tmp_path / PEOPLE).unlink()
    for words in (
        ("--report", str(tmp_path / "no" / "out.pdf")),
        ("--tables", str(tmp_path / PLAN)),
        ("--figures", str(tmp_path / PLAN)),
    ):
        ended = call("validate", plan, *words)
        assert ended.status != 0
        assert PEOPLE not in ended.err


def test_where_people_stop_nothing_is_written(plan: str, tmp_path: Path) -> None:
    change_people(tmp_path, lambda place, row: row | ({"chol": "<2.6"} if place == 4 else {}))
    report = tmp_path / "out.pdf"
    ended = call("validate", plan, "--report", str(report))
    assert ended.status == 4
    assert_nothing_worked_out(ended.out)
    assert not report.exists()


def assert_nothing_worked_out(out: str) -> None:
    """No figure stands anywhere."""
    assert "Observed" not in out
    assert "Used" not in out
