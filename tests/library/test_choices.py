"""What an approver may choose: review dates, comparisons of unconfirmed figures, recalibrations, decision points."""

from datetime import date

import pytest

from clinicalc.assessment.proof import load_model_bytes
from clinicalc.coefficients.schema import DecisionPoint, ModelContent, Unconfirmed
from clinicalc.errors import LibraryError, UsageError
from clinicalc.library.choices import (
    check_points,
    check_recalibration,
    check_review,
    settle_comparisons,
)
from clinicalc.library.records import Compared
from clinicalc.resources import read_shipped

TODAY = date(2026, 12, 1)


def content_of(name: str) -> ModelContent:
    """The content of a shipped file."""
    return load_model_bytes(read_shipped(f"example_models/{name}.json"), name).content


class TestReviewDate:
    def test_it_is_ahead_and_five_years_at_most(self) -> None:
        assert check_review(date(2026, 12, 2), TODAY) == date(2026, 12, 2)
        assert check_review(date(2031, 12, 1), TODAY) == date(2031, 12, 1)
        for until in (TODAY, date(2026, 11, 30), date(2031, 12, 2)):
            with pytest.raises(UsageError, match=str(until)):
                check_review(until, TODAY)

    def test_a_leap_day_has_a_day_five_years_on(self) -> None:
        assert check_review(date(2033, 2, 28), date(2028, 2, 29)) == date(2033, 2, 28)
        with pytest.raises(UsageError, match="the latest is 2033-02-28"):
            check_review(date(2033, 3, 1), date(2028, 2, 29))


FIGURES = (
    Unconfirmed("/equations", "Typed from memory.", "the paper, table 2."),
    Unconfirmed("/equations/0/terms/1/coefficient", "One digit is not legible.", "the paper, table 2"),
    Unconfirmed("", "Nobody compared it.", "the paper"),
)


class TestComparisons:
    def test_what_is_said_of_a_place_holds_below_it(self) -> None:
        settled = settle_comparisons(FIGURES[:2], [Compared("/equations", " Cleo Fell ")])
        assert settled == (
            Compared("/equations", "Cleo Fell"),
            Compared("/equations/0/terms/1/coefficient", "Cleo Fell"),
        )

    def test_what_is_said_of_a_place_does_not_hold_above_it(self) -> None:
        with pytest.raises(LibraryError, match=r"1 of 2 figures .* by nobody: /equations\."):
            settle_comparisons(FIGURES[:2], [Compared("/equations/0", "Cleo Fell")])

    def test_a_place_that_only_begins_alike_is_another_place(self) -> None:
        entries = (Unconfirmed("/equations/10", "?", "the paper"), Unconfirmed("/equations/1", "?", "the paper"))
        with pytest.raises(LibraryError, match="by nobody: /equations/10"):
            settle_comparisons(entries, [Compared("/equations/1", "Cleo Fell")])

    def test_the_whole_model_covers_everything_and_only_itself_is_it(self) -> None:
        assert len(settle_comparisons(FIGURES, [Compared("", "Cleo Fell")])) == 3
        with pytest.raises(LibraryError, match="by nobody: the whole model"):
            settle_comparisons(FIGURES, [Compared("/equations", "Cleo Fell")])

    def test_nothing_is_wanted_of_a_file_without_such_figures(self) -> None:
        assert settle_comparisons((), ()) == ()
        with pytest.raises(UsageError, match="It names none"):
            settle_comparisons((), [Compared("/equations", "Cleo Fell")])

    def test_an_empty_name_is_refused(self) -> None:
        with pytest.raises(UsageError, match="name of who compared it is empty"):
            settle_comparisons(FIGURES, [Compared("", " ")])


def test_a_recalibration_is_one_that_the_file_offers() -> None:
    regional, tarnwick = content_of("cvd-2021-regional"), content_of("tarnwick-cvd-10y")
    assert check_recalibration(regional, "low") == "low"
    assert check_recalibration(tarnwick, None) is None
    with pytest.raises(UsageError, match="It offers none"):
        check_recalibration(tarnwick, "low")
    with pytest.raises(UsageError, match="without one of its recalibrations"):
        check_recalibration(regional, None)


def test_decision_points_are_eight_at_most_and_each_once() -> None:
    tarnwick = content_of("tarnwick-cvd-10y")
    points = tuple(DecisionPoint(number / 100, "Talk", "Meeting") for number in range(1, 10))
    assert check_points(tarnwick, points[:8]) == points[:8]
    with pytest.raises(UsageError, match="9 decision points were given, and at most 8"):
        check_points(tarnwick, points)
    with pytest.raises(UsageError, match="same probability"):
        check_points(tarnwick, (points[0], points[0]))
    with pytest.raises(UsageError, match="at most 80"):
        check_points(tarnwick, (DecisionPoint(0.1, "x" * 81, "Meeting"),))
