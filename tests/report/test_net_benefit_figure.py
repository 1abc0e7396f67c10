"""Net benefit over decision points: the lines where they belong, their names, the marks, and the words."""

from itertools import pairwise

import numpy as np
import pytest

from clinicalc.estimation.net_benefit import curve_of_risks
from clinicalc.report.net_benefit_figure import draw_net_benefit
from clinicalc.report.net_benefit_words import DecisionMark, ShownNetBenefit, worth_words
from clinicalc.report.plot_frame import PlotSize
from clinicalc.report.shapes import Anchor, Dot, Figure, Line, Poly, Text, Tone
from tests.report.calibrations import EVERY_SIZE
from tests.report.viewing import MEASURE, assert_inside, assert_no_words_overlap

SIZE = PlotSize(510.0, 9.0, 0.75)


def curve(
    mean: float = -2.6, right: float = 0.85, marks: tuple[float, ...] = (0.05, 0.075, 0.1, 0.2)
) -> ShownNetBenefit:
    """Net benefit of 2,000 invented people."""
    rng = np.random.default_rng(3)
    p = 1 / (1 + np.exp(-rng.normal(mean, 1.0, 2000)))
    y = (rng.random(2000) < p * right).astype(np.float64)
    points = p.max() * np.arange(1, 51) / 50
    observed = float(y.mean())

    def everyone(t: float) -> float:
        return observed - (1 - observed) * t / (1 - t)

    at = tuple(DecisionMark(t, float(curve_of_risks(p, y, np.array([t]))[0]), everyone(t)) for t in marks)
    all_of_them = observed - (1 - observed) * points / (1 - points)
    return ShownNetBenefit(points, curve_of_risks(p, y, points), all_of_them, at, "10 years", "A note of the caller.")


def lost() -> ShownNetBenefit:
    """A curve that is not known at its end."""
    shown = curve()
    by_model = shown.by_model.copy()
    by_model[12:] = np.nan
    return ShownNetBenefit(shown.points, by_model, shown.treat_all, shown.marks)


def harmful() -> ShownNetBenefit:
    """A model that is far too high: worth less than nothing at most points."""
    return curve(mean=0.5, right=0.25)


def flat() -> ShownNetBenefit:
    """Nobody has the event."""
    points = np.linspace(0.01, 0.5, 50)
    return ShownNetBenefit(points, np.zeros(50), -points / (1 - points))


SHOWN = {
    "usual": curve(),
    "lost": lost(),
    "harmful": harmful(),
    "flat": flat(),
    "rare": curve(mean=-7.0, marks=(0.001, 0.5)),
    "high": curve(mean=2.0, right=1.0, marks=(0.3, 0.31, 0.32, 0.33, 0.9)),
}


def draw(shown: ShownNetBenefit, size: PlotSize = SIZE) -> Figure:
    return draw_net_benefit(shown, size, MEASURE)


def written(figure: Figure) -> str:
    return " ".join(shape.text for shape in figure.shapes if isinstance(shape, Text))


def ticks(figure: Figure) -> dict[float, float]:
    """The y of each figure of the upright axis."""
    found = {}
    for shape in figure.shapes:
        if (
            isinstance(shape, Text)
            and shape.anchor is Anchor.END
            and shape.text.replace("−", "-").replace(".", "").strip("-").isdigit()
        ):
            found[float(shape.text.replace("−", "-"))] = shape.y - 0.34 * shape.size
    return found


@pytest.mark.parametrize("size", EVERY_SIZE)
@pytest.mark.parametrize("kind", SHOWN)
def test_everything_stays_inside_and_apart(kind: str, size: PlotSize) -> None:
    figure = draw(SHOWN[kind], size)
    assert_inside(figure)
    assert_no_words_overlap(figure)


def test_the_lines_are_named_in_the_plot() -> None:
    figure = draw(SHOWN["usual"])
    named = {shape.text: shape for shape in figure.shapes if isinstance(shape, Text)}
    assert named["act by the model"].tone is Tone.ACCENT
    assert named["act on everyone"].tone is Tone.INK
    assert "on nobody" in named
    assert "A note of the caller." in written(figure)


def test_dots_stand_at_what_the_model_is_worth_at_each_decision_point() -> None:
    shown = SHOWN["usual"]
    figure = draw(shown)
    at = ticks(figure)
    dots = [shape for shape in figure.shapes if isinstance(shape, Dot)]
    upright = sorted(
        {shape.x for shape in figure.shapes if isinstance(shape, Line) and shape.dash and shape.x == shape.to_x}
    )
    nought, other = at[0.0], at[2.0]
    assert len(dots) == len(shown.marks) == len(upright)
    for dot, mark in zip(dots, shown.marks, strict=True):
        assert mark.by_model is not None
        assert dot.y == pytest.approx(nought + (other - nought) * 100 * mark.by_model / 2.0, abs=0.01)
        assert any(dot.x == pytest.approx(x) for x in upright)


def test_the_models_line_goes_through_its_points() -> None:
    shown = SHOWN["usual"]
    figure = draw(shown)
    (line,) = [shape for shape in figure.shapes if isinstance(shape, Poly)]
    at = ticks(figure)
    per = (at[2.0] - at[0.0]) / 2.0
    for (_, y), worth in zip(line.points, shown.by_model.tolist(), strict=False):
        assert y == pytest.approx(at[0.0] + per * 100 * worth, abs=0.01)


def test_a_line_that_is_not_known_ends_there() -> None:
    figure = draw(SHOWN["lost"])
    (line,) = [shape for shape in figure.shapes if isinstance(shape, Poly)]
    assert len(line.points) == 12
    assert "not known at 38 points of 50" in written(figure)


def test_a_decision_point_far_beyond_is_said_and_not_drawn() -> None:
    figure = draw(SHOWN["rare"])
    assert "Beyond the axis lies the decision point of 50.0\u202f%" in written(figure)
    assert [shape.text for shape in figure.shapes if isinstance(shape, Text) and shape.text == "50\u202f%"] == []


def test_its_words_hold_every_figure() -> None:
    shown = SHOWN["usual"]
    figure = draw(shown)
    assert figure.sentence.startswith("Net benefit of 100 people at 10 years: at a decision point of 5.0\u202f% act by")
    assert len(figure.table) == 1 + len(shown.marks) + len(shown.points)
    for row, mark in zip(figure.table[1:], shown.marks, strict=False):
        assert mark.by_model is not None
        assert mark.treat_all is not None
        assert row[1] == f"act by the model {worth_words(mark.by_model)}, act on everyone {worth_words(mark.treat_all)}"


@pytest.mark.parametrize(
    ("worth", "words"),
    [(0.0348, "3.48"), (-0.00001, "0.00"), (-0.0329, "−3.29"), (-91.9621, "−9,196.21"), (0.0, "0.00")],
)
def test_worth_is_written_of_100_people(worth: float, words: str) -> None:
    assert worth_words(worth) == words


@pytest.mark.parametrize("kind", ["usual", "lost", "flat", "rare", "high"])
def test_a_name_stands_nearer_to_its_own_line_than_to_the_other(kind: str) -> None:
    figure = draw(SHOWN[kind])
    named = {shape.text: shape for shape in figure.shapes if isinstance(shape, Text)}
    runs = [shape.points for shape in figure.shapes if isinstance(shape, Poly)]
    model = [
        (x + (u - x) * k / 20, y + (v - y) * k / 20)
        for run in runs
        for (x, y), (u, v) in pairwise(run)
        for k in range(20)
    ]
    everyone = [(s.x, s.y) for s in figure.shapes if isinstance(s, Line) and s.width == pytest.approx(1.2 * SIZE.line)]
    for words, own, other in (("act by the model", model, everyone), ("act on everyone", everyone, model)):
        text = named[words]
        wide = MEASURE(text.text, text.size, text.weight)
        spots = [(text.x + wide * part / 4, text.y - 0.3 * text.size) for part in range(5)]
        nearest = [min(np.hypot(x - u, y - v) for x, y in line for u, v in spots) for line in (own, other)]
        assert nearest[0] < nearest[1]
