"""Net benefit over decision points as what is shown, and what its figure says in words."""

from collections.abc import Iterator
from dataclasses import dataclass
from math import isfinite

import numpy as np
from numpy.typing import NDArray

from clinicalc.assessment.numerals import MINUS, NARROW_SPACE, join_words, percent_in_full
from clinicalc.report.phrases import count_words

Array = NDArray[np.float64]

BY_MODEL, ON_EVERYONE, ON_NOBODY = "act by the model", "act on everyone", "on nobody"


@dataclass(frozen=True, slots=True)
class DecisionMark:
    """A decision point that is marked, as a probability, and what acting by the model is worth at it, if known."""

    point: float
    by_model: float | None
    treat_all: float | None


@dataclass(frozen=True, slots=True, eq=False)
class ShownNetBenefit:
    """Net benefit for each person by the model and on everyone at ascending points, each (k,), NaN where not known.

    `marks` are the decision points asked about; `span` the horizon in words, "" for none; `note` stands under it.
    The axis goes to about `reach`, and to marks not far beyond; None is as far as the model is worth anything.
    """

    points: Array
    by_model: Array
    treat_all: Array
    marks: tuple[DecisionMark, ...] = ()
    span: str = ""
    note: str = ""
    reach: float | None = None


def worth_words(worth: float) -> str:
    """A net benefit for each person, in true positives of 100 people, with a true minus: "3.48"."""
    text = f"{100.0 * worth:,.2f}"
    return text.removeprefix("-") if float(text.replace(",", "")) == 0.0 else text.replace("-", MINUS)


def figure_notes(shown: ShownNetBenefit, end: float) -> Iterator[str]:
    """The lines under the plot: what each line is, what is not drawn, the caller's own note."""
    beyond = len(shown.points) and float(shown.points[-1]) > end * (1.0 + 1e-9)
    rest = f" Points above {100.0 * end:g}{NARROW_SPACE}% are not drawn." if beyond else ""
    far = [percent_in_full(mark.point) for mark in shown.marks if mark.point > end * (1.0 + 1e-9)]
    if far:
        rest += f" Beyond the axis lies the decision point of {join_words(far)}; hardly anybody is predicted so much."
    marked = " Dashed upright: the decision points asked about, a dot at what acting by the model is worth."
    yield (
        "Net benefit: true positives of 100 people, less false ones at the exchange rate of the decision point. Strong"
        f" line: {BY_MODEL}; dashed: {ON_EVERYONE}; level line at 0: act {ON_NOBODY}."
        f"{marked if shown.marks else ''}{rest}"
    )
    lost = int((~np.isfinite(shown.by_model)).sum())
    if lost:
        yield (
            f"The line is not known at {count_words(lost, 'point')} of {len(shown.points)}: all who are flagged there"
            " were lost from sight before the horizon."
        )
    yield shown.note


def figure_sentence(shown: ShownNetBenefit) -> str:
    """The figure for a screen reader."""
    when = f" at {shown.span}" if shown.span else ""
    parts = [
        f"at a decision point of {percent_in_full(mark.point)} {_pair(mark.by_model, mark.treat_all)}"
        for mark in shown.marks
    ]
    words = "; ".join(parts) or "no decision point is marked"
    return f"Net benefit of 100 people{when}: {words}; acting on nobody is worth 0"


def _pair(by_model: float | None, treat_all: float | None) -> str:
    model, everyone = (
        "not known" if worth is None or not isfinite(worth) else worth_words(worth) for worth in (by_model, treat_all)
    )
    return f"{BY_MODEL} {model}, {ON_EVERYONE} {everyone}"


def figure_table(shown: ShownNetBenefit) -> tuple[tuple[str, ...], ...]:
    """A heading, the decision points that are marked, and every point of the line."""
    rows = [("Decision point", f"net benefit of 100 people{f' at {shown.span}' if shown.span else ''}")]
    rows += [(f"{percent_in_full(mark.point)}, marked", _pair(mark.by_model, mark.treat_all)) for mark in shown.marks]
    for point, model, everyone in zip(
        shown.points.tolist(), shown.by_model.tolist(), shown.treat_all.tolist(), strict=True
    ):
        rows.append((f"{100.0 * point:.2f}{NARROW_SPACE}%", _pair(model, everyone)))
    return tuple(rows)
