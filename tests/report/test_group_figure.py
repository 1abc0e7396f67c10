"""Groups side by side: intervals on a logarithmic axis, counts beside them, and what cannot be drawn said."""

from math import log

import pytest

from clinicalc.report.group_figure import ShownGroup, ShownGroups, draw_groups
from clinicalc.report.plot_frame import PlotSize
from clinicalc.report.shapes import Dot, Figure, Line, Poly, Text, Tone
from tests.report.calibrations import EVERY_SIZE
from tests.report.viewing import MEASURE, assert_inside, assert_no_words_overlap

SIZE = PlotSize(510.0, 9.0, 0.75)
EVERYBODY = ShownGroup("", "Everybody", 4812, 347, 0.85, 0.77, 0.94)
SEX = (ShownGroup("Sex", "Female", 2500, 120, 0.7, 0.55, 0.88), ShownGroup("Sex", "Male", 2312, 227, 0.95, 0.83, 1.08))
FEW = ShownGroup(
    "Practice", "Northgate by the old mill on the river", 3, 0, None,
    why="3 people are in this group: no figures are made of fewer than 20.",
)  # fmt: skip
NOBODY = ShownGroup("Practice", "Quay", 40, 0, 0.0, why="Nobody was seen to have the event: no limits follow.")
WIDE = ShownGroup("Practice", "Mill", 30, 9, 4.0, 0.3, 80.0)

SHOWN = {
    "usual": ShownGroups((EVERYBODY, *SEX), "10 years", "A note."),
    "few": ShownGroups((EVERYBODY, *SEX, FEW, NOBODY)),
    "wide": ShownGroups((EVERYBODY, *SEX, WIDE)),
    "none": ShownGroups((FEW,)),
}


def draw(shown: ShownGroups, size: PlotSize = SIZE) -> Figure:
    return draw_groups(shown, size, MEASURE)


def written(figure: Figure) -> str:
    return " ".join(shape.text for shape in figure.shapes if isinstance(shape, Text))


def place_of(figure: Figure, label: str) -> float:
    """The x of a figure under the axis."""
    return next(s.x for s in figure.shapes if isinstance(s, Text) and s.text == label and s.y == figure.baseline)


@pytest.mark.parametrize("size", [size for size in EVERY_SIZE if size.width / size.part > 400])
@pytest.mark.parametrize("kind", SHOWN)
def test_everything_stays_inside_and_apart(kind: str, size: PlotSize) -> None:
    figure = draw(SHOWN[kind], size)
    assert_inside(figure)
    assert_no_words_overlap(figure)


def test_ratios_and_limits_stand_where_their_logarithms_are() -> None:
    figure = draw(SHOWN["usual"])
    one, two = place_of(figure, "1"), place_of(figure, "2")
    dots = [shape for shape in figure.shapes if isinstance(shape, Dot)]
    lines = [s for s in figure.shapes if isinstance(s, Line) and s.tone is Tone.INK and s.y == s.to_y and s.width > 1.0]
    for dot, line, group in zip(dots, lines, (EVERYBODY, *SEX), strict=True):
        assert group.ratio is not None
        assert group.lower is not None
        assert group.upper is not None
        for x, ratio in ((dot.x, group.ratio), (line.x, group.lower), (line.to_x, group.upper)):
            assert x == pytest.approx(one + (two - one) * log(ratio) / log(2.0))
        assert dot.y == line.y


def test_everybody_is_filled_and_groups_are_open() -> None:
    dots = [shape for shape in draw(SHOWN["usual"]).shapes if isinstance(shape, Dot)]
    assert [dot.fill for dot in dots] == [Tone.ACCENT, Tone.SHEET, Tone.SHEET]


def test_counts_and_figures_stand_in_each_row() -> None:
    said = written(draw(SHOWN["few"]))
    for words in ("4,812", "347", "0.85 (0.77 to 0.94)", "Female", "2,312", "0.95 (0.83 to 1.08)", "0.00 (no limits)"):
        assert words in said
    assert "3 people are in this group: no figures are made of" in said


def test_what_goes_on_beyond_the_axis_is_pointed_and_said() -> None:
    figure = draw(SHOWN["wide"])
    assert len([shape for shape in figure.shapes if isinstance(shape, Poly)]) == 1
    assert "A pointed end goes on beyond the axis." in written(figure)
    assert "4.00 (0.30 to 80.00)" in written(figure)
    assert "A pointed end" not in written(draw(SHOWN["usual"]))


def test_nobody_with_the_event_is_pointed_at_the_lower_end() -> None:
    figure = draw(SHOWN["few"])
    assert len([shape for shape in figure.shapes if isinstance(shape, Poly)]) == 1


def test_words_for_a_screen_reader() -> None:
    figure = draw(SHOWN["few"])
    assert figure.sentence.startswith(
        "Observed over expected: Everybody, 4,812 people, 0.85 (0.77 to 0.94); Sex: Female"
    )
    assert figure.table[1] == ("Everybody, 4,812 people, 347 events", "0.85 (0.77 to 0.94)")
    assert figure.table[4][1] == FEW.why
