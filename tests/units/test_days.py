"""Days in words, and read back; what no calendar has stands as it is."""

import os
import subprocess
import sys
from datetime import date

import pytest

from clinicalc.units.days import day_words, read_day_words, stated_day


@pytest.mark.parametrize("month", range(1, 13))
def test_a_day_in_words_is_read_back(month: int) -> None:
    day = date(2027, month, 28)
    assert read_day_words(day_words(day)) == day
    assert read_day_words(day_words(day).upper()) == day
    assert read_day_words(day.isoformat()) == day


@pytest.mark.parametrize(
    "text", ["", "31 June 2027", "2027-02-29", "20270228", "1 Brumaire 2027", "1.6.2027", "June 2027"]
)
def test_what_is_no_day_is_none(text: str) -> None:
    assert read_day_words(text) is None


def test_a_stated_day_and_a_stated_time() -> None:
    assert stated_day("2027-06-30") == "30 June 2027"
    assert stated_day("2026-12-01T10:00:00Z") == "1 December 2026"


@pytest.mark.parametrize("text", ["2027-02-29", "2026-12-99T12:00:00Z", "0000-00-00"])
def test_what_no_calendar_has_stands_as_it_is(text: str) -> None:
    assert stated_day(text) == text[:10]


@pytest.mark.skipif(os.name != "posix", reason="the zone of a process is set by TZ on POSIX")
@pytest.mark.parametrize(("zone", "day"), [("UTC", "1 December 2026"), ("Pacific/Auckland", "2 December 2026")])
def test_a_time_falls_on_the_day_of_this_machines_clock(zone: str, day: str) -> None:
    code = "from clinicalc.units.days import stated_day; print(stated_day('2026-12-01T23:00:00Z'))"
    ended = subprocess.run(
        [sys.executable, "-c", code], env={**os.environ, "TZ": zone}, capture_output=True, text=True, check=True
    )
    assert ended.stdout.strip() == day
