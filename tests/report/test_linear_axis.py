"""The linear axis: round ends that hold what is shown, and ticks with few digits."""

import pytest

from clinicalc.report.linear_axis import LinearAxis, choose_end


@pytest.mark.parametrize(
    ("values", "limits", "end"),
    [
        ((0.004,), (), 0.01),
        ((0.01,), (), 0.01),
        ((0.0101,), (), 0.02),
        ((0.33, 0.21), (), 0.4),
        ((0.33,), (0.47,), 0.5),
        ((0.05,), (0.6,), 0.1),  # one wide limit does not take more than as much again
        ((0.2,), (1.0,), 0.4),
        ((0.97,), (1.0,), 1.0),
        ((1.0,), (), 1.0),
        ((0.0,), (), 0.01),
    ],
)
def test_the_end_is_the_least_round_one_that_holds_all(
    values: tuple[float, ...], limits: tuple[float, ...], end: float
) -> None:
    assert choose_end(values, limits)[0] == end


def test_places_are_even_and_stop_at_the_ends() -> None:
    axis = LinearAxis(20.0, 300.0, 0.3, 0.1)
    assert [axis.place(at) for at in (0.0, 0.15, 0.3, 0.9)] == pytest.approx([20.0, 170.0, 320.0, 320.0])
    up = LinearAxis(320.0, -300.0, 0.3, 0.1)
    assert [up.place(at) for at in (-0.1, 0.0, 0.15, 0.3)] == pytest.approx([320.0, 320.0, 170.0, 20.0])


def test_figures_are_percent_without_sign_or_needless_digits() -> None:
    assert LinearAxis(0.0, 1.0, *choose_end((0.28,))).figures == ("0", "10", "20", "30")
    assert LinearAxis(0.0, 1.0, *choose_end((0.009,))).figures == ("0", "0.2", "0.4", "0.6", "0.8", "1")
    assert LinearAxis(0.0, 1.0, *choose_end((0.02,))).figures == ("0", "0.5", "1", "1.5", "2")
    for value in (0.01, 0.02, 0.05, 0.1, 0.15, 0.2, 0.3, 0.4, 0.5, 0.6, 0.8, 1.0):
        axis = LinearAxis(0.0, 1.0, *choose_end((value,)))
        assert axis.ticks[0] == 0.0
        assert axis.ticks[-1] == pytest.approx(axis.end)
        assert 4 <= len(axis.ticks) <= 7
