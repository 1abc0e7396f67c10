"""The sentences of a print."""

from datetime import UTC, datetime, timedelta, timezone

import pytest

from clinicalc.assessment.result import Band
from clinicalc.report import phrases
from tests.assessment.cases import shipped


@pytest.mark.parametrize(
    ("probability", "wanted"),
    [
        (0.122, "Of 100 people with these values, about 12 have the event within 10 years and about 88 do not."),
        (0.014, "Of 100 people with these values, about 1 has the event within 10 years and about 99 do not."),
        (0.989, "Of 100 people with these values, about 99 have the event within 10 years and about 1 does not."),
        (0.004, "Of 1000 people with these values, about 4 have the event within 10 years and about 996 do not."),
        (0.0001, "Of 1000 people with these values, fewer than 1 has the event within 10 years."),
        (0.9999, "Of 1000 people with these values, all but fewer than 1 have the event within 10 years."),
    ],
)
def test_people(probability: float, wanted: str) -> None:
    assert phrases.people_sentence(probability, "10 years", others_censored=False) == wanted
    censored = phrases.people_sentence(probability, "10 years", others_censored=True)
    assert censored == f"{wanted[:-1]}, if no other cause of death came first."


def test_moments_read_the_same_in_every_locale() -> None:
    moment = datetime(2026, 3, 9, 7, 5, tzinfo=timezone(timedelta(hours=-3, minutes=-30)))
    assert phrases.moment_words(moment) == "9 March 2026, 07:05"
    assert phrases.zone_words(moment) == "UTC−03:30"
    assert phrases.zone_words(datetime(2026, 3, 9, tzinfo=UTC)) == "UTC+00:00"
    assert phrases.zone_words(datetime(2026, 3, 9)) == ""


def test_levels_and_counts() -> None:
    assert phrases.level_words(0.95) == "95\u202f%"
    assert phrases.level_words(0.975) == "97.5\u202f%"
    assert [phrases.count_words(n, "entry", "entries") for n in (1, 2)] == ["1 entry", "2 entries"]


def test_a_rebuilt_band_is_said_to_be_approximate() -> None:
    lipids, pooled = shipped("general-cvd-2008-lipids").content, shipped("ascvd-2013-pooled-cohort").content
    said = "Approximate, rebuilt from printed intervals: clinicalc inspect lists what was assumed."
    assert phrases.rebuilt_words(lipids) == "Approximate, rebuilt from printed intervals."
    assert phrases.rebuilt_words(pooled) == ""
    assert phrases.basis_words(Band(0.95, 0.1, 0.2, "reconstructed")) == said
