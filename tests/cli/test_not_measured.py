"""`unknown` on the command line: assess, its record, the print, and the print worked out again."""

from pathlib import Path

import pytest

from tests.cli.calling import LIPIDS, WOMAN_61, call

OPEN = [word for word in WOMAN_61 if not word.startswith(("smoker=", "hdl_cholesterol="))]


def test_assess_says_what_was_not_measured() -> None:
    ended = call("assess", LIPIDS, *OPEN, "smoker=unknown", "hdl_cholesterol=Not measured")
    assert (ended.status, ended.err) == (0, "")
    assert "Caution: HDL cholesterol: not measured." in ended.out
    assert "HDL cholesterol                   not measured\n" in ended.out
    assert "Smokes now                        not measured\n" in ended.out
    assert "What was not measured is in it." in " ".join(ended.out.split())


def test_the_record_has_no_value_for_it() -> None:
    record = call("assess", LIPIDS, *OPEN, "smoker=unknown", "hdl_cholesterol=unknown", "--json").record
    values = {value["id"]: value for value in record["values"]}
    for id in ("smoker", "hdl_cholesterol"):
        assert (values[id]["typed"], values[id]["value"], values[id]["unit"]) == ("unknown", None, None)
    assert 0 < record["band"]["lower"] < record["probability"] < record["band"]["upper"] < 1
    assert {f["field"] for f in record["findings"] if f["code"] == "not_measured"} == {"smoker", "hdl_cholesterol"}


@pytest.mark.parametrize("open_", [["smoker=unknown", "hdl_cholesterol=47"], ["smoker=yes", "hdl_cholesterol=unknown"]])
def test_a_print_of_it_is_worked_out_again(tmp_path: Path, open_: list[str]) -> None:
    path = tmp_path / "print.pdf"
    assert call("report", LIPIDS, *OPEN, *open_, "--out", str(path)).status == 0
    ended = call("report", "--check", str(path), "--model", LIPIDS)
    assert (ended.status, ended.err) == (0, "")
    assert ended.out.startswith("Agrees: ")


def test_no_number_and_no_print_where_it_must_be_known(tmp_path: Path) -> None:
    words = [word for word in WOMAN_61 if not word.startswith("age=")]
    ended = call("report", LIPIDS, *words, "age=unknown", "--out", str(tmp_path / "print.pdf"))
    assert ended.status != 0
    assert not list(tmp_path.iterdir())
    assert "Age: not measured. This model gives no number without it" in " ".join((ended.out + ended.err).split())


def test_inspect_says_what_may_stand_open() -> None:
    lines = call("inspect", LIPIDS).out.splitlines()
    assert sum("may be left not measured" in line for line in lines) == 3
