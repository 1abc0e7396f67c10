"""A file with several horizons and a recalibration at one of them."""

from pathlib import Path

import pytest

from clinicalc.coefficients.writer import write_file
from tests.cli.calling import call
from tests.coefficients.tiny_model import file_of, tiny_cloglog_model

VALUES = ("sex=female", "age=60", "total_cholesterol=5.5", "bp_treated=no")


@pytest.fixture
def several(tmp_path: Path) -> str:
    """The path of an invented file with horizons of 5 and 10 years."""
    path = tmp_path / "several.json"
    write_file(path, file_of(tiny_cloglog_model()))
    return str(path)


def test_the_horizon_must_be_said(several: str) -> None:
    ended = call("assess", several, *VALUES, "--json")
    assert (ended.status, ended.out) == (2, "")
    assert "5 years, 10 years" in ended.err


def test_each_horizon_has_its_own_number(several: str) -> None:
    five, ten = (call("assess", several, *VALUES, "--years", years, "--json") for years in ("5", "10"))
    assert (five.status, ten.status) == (0, 0)
    assert (five.record["years"], ten.record["years"]) == (5, 10)
    assert five.record["probability"] < ten.record["probability"]


def test_a_horizon_is_not_given_twice(several: str) -> None:
    ended = call("assess", several, *VALUES, "--years", "5", "--time", "5 a")
    assert ended.status == 2
    assert "both" in ended.err


def test_a_horizon_in_another_unit_is_another_horizon(several: str) -> None:
    assert call("assess", several, *VALUES, "--time", "5 a").status == 0
    assert call("assess", several, *VALUES, "--time", "60 mo").status == 2
