"""Contrast of every documented pair in both themes, from the tokens and from what is painted.

Formula and limits: WCAG 2.2, "relative luminance", "contrast ratio", 1.4.3 (text 4.5:1), 1.4.11 (control edges 3:1).
"""

from collections import Counter
from collections.abc import Callable, Iterator

import pytest
from PySide6.QtCore import QPoint, QRect
from PySide6.QtGui import QColor, QImage
from PySide6.QtWidgets import QApplication, QWidget

from clinicalc.assessment.model import Model
from clinicalc.gui import theme
from clinicalc.gui.labels import make_button, make_label
from clinicalc.gui.main_window import MainWindow
from clinicalc.gui.tokens import DARK, LIGHT, Tokens
from clinicalc.settings import ThemeChoice
from tests.gui.bedside_hands import fill_2008, number_row, question_row, retype_number

pytestmark = pytest.mark.gui

TEXT, EDGE = 4.5, 3.0
BOTH = [ThemeChoice.LIGHT, ThemeChoice.DARK]

# figure, ground, least ratio, ratio measured when the colours were chosen (light, dark; one decimal)
PAIRS = [
    ("ink", "sheet", TEXT, 17.1, 14.1),
    ("ink", "ground", TEXT, 14.8, 15.4),
    ("ink", "wash", TEXT, 15.3, 13.3),
    ("ink", "tint", TEXT, 10.4, 8.0),
    ("ink", "sel", TEXT, 13.6, 11.3),
    ("soft", "sheet", TEXT, 7.1, 7.6),
    ("soft", "ground", TEXT, 6.2, 8.3),
    ("soft", "wash", TEXT, 6.4, 7.1),
    ("soft", "sel", TEXT, 5.7, 6.0),
    ("accent", "sheet", TEXT, 9.5, 8.4),
    ("accent", "ground", TEXT, 8.2, 9.2),
    ("accent", "wash", TEXT, 8.5, 7.9),
    ("accent", "tint", TEXT, 5.8, 4.7),
    ("on_accent", "accent", TEXT, 9.5, 9.1),
    ("edge", "sheet", EDGE, 3.7, 4.3),
    ("edge", "ground", EDGE, 3.2, 4.7),
    ("edge", "field", EDGE, 3.7, 4.8),
    ("edge", "wash", EDGE, 3.3, 4.0),
    ("hatch", "sheet", EDGE, 3.1, 3.6),
]


def luminance(colour: QColor) -> float:
    """Relative luminance of an sRGB colour, 0 to 1."""

    def linear(channel: int) -> float:
        part = channel / 255
        return float(part / 12.92 if part <= 0.04045 else ((part + 0.055) / 1.055) ** 2.4)

    return 0.2126 * linear(colour.red()) + 0.7152 * linear(colour.green()) + 0.0722 * linear(colour.blue())


def contrast(one: QColor, other: QColor) -> float:
    """Contrast ratio of two colours, 1 to 21."""
    dark, light = sorted((luminance(one), luminance(other)))
    return (light + 0.05) / (dark + 0.05)


def pixels(image: QImage, part: QRect | None = None) -> Counter[int]:
    """How often each colour stands in this part of the image."""
    area = image.rect() if part is None else part.intersected(image.rect())
    return Counter(
        image.pixel(x, y) for y in range(area.top(), area.bottom() + 1) for x in range(area.left(), area.right() + 1)
    )


def text_contrast(image: QImage, part: QRect | None = None) -> float:
    """The commonest colour is the ground; the figure is the one furthest from it, where a stem covers a pixel."""
    found = pixels(image, part)
    ground = QColor(found.most_common(1)[0][0])
    return max(contrast(QColor(colour), ground) for colour in found)


def edge_contrast(image: QImage, inside: str, outside: str) -> float:
    """Of the line met on the way in from the left, half way down: its weaker contrast, with in- and outside."""
    y, seen = image.height() // 2, list[QColor]()
    for x in range(12):
        colour = image.pixelColor(x, y)
        if colour.name() not in (QColor(inside).name(), QColor(outside).name()):
            seen.append(colour)
    line = max(seen, key=lambda colour: contrast(colour, QColor(outside)))
    return min(contrast(line, QColor(inside)), contrast(line, QColor(outside)))


@pytest.fixture(autouse=True)
def _as_before() -> Iterator[None]:
    yield
    theme.choose(ThemeChoice.SYSTEM)


def turn(choice: ThemeChoice, qapp: QApplication) -> Tokens:
    """Take a theme and let everything be painted."""
    theme.choose(choice)
    qapp.processEvents()
    return theme.tokens()


def test_the_formula() -> None:
    # from memory: 21 for black on white; #767676 is the lightest grey with 4.5 on white, at 4.54
    assert contrast(QColor("#000000"), QColor("#FFFFFF")) == pytest.approx(21)
    assert contrast(QColor("#767676"), QColor("#FFFFFF")) == pytest.approx(4.54, abs=0.005)
    assert contrast(QColor("#777777"), QColor("#FFFFFF")) < 4.5


@pytest.mark.parametrize(("figure", "ground", "least", "light", "dark"), PAIRS)
def test_every_documented_pair(figure: str, ground: str, least: float, light: float, dark: float) -> None:
    for tokens, measured in ((LIGHT, light), (DARK, dark)):
        ratio = contrast(QColor(getattr(tokens, figure)), QColor(getattr(tokens, ground)))
        assert ratio >= least
        assert ratio == pytest.approx(measured, abs=0.051)


@pytest.mark.parametrize("tokens", [LIGHT, DARK], ids=["light", "dark"])
@pytest.mark.parametrize(
    ("figure", "ground", "least"),
    [("ink", "field", TEXT), ("soft", "field", TEXT), ("sheet", "ink", TEXT), ("accent", "field", EDGE)],
)
def test_pairs_that_the_widgets_add(tokens: Tokens, figure: str, ground: str, least: float) -> None:
    """Typed values, units and the ring on a field; the digit on the filled mark of a stop."""
    assert contrast(QColor(getattr(tokens, figure)), QColor(getattr(tokens, ground))) >= least


@pytest.mark.parametrize("choice", BOTH)
@pytest.mark.parametrize("ground", ["sheet", "ground"])
@pytest.mark.parametrize("soft", [False, True], ids=["ink", "soft"])
def test_painted_labels(qtbot_parent: Callable[[str], QWidget], choice: ThemeChoice, ground: str, soft: bool) -> None:
    theme.choose(choice)
    parent = qtbot_parent(ground)
    label = make_label("Systolic pressure 142 mmHg", soft=soft)
    label.setParent(parent)
    label.resize(260, 40)
    image = parent.grab(QRect(QPoint(0, 0), label.size())).toImage()
    tokens = theme.tokens()
    assert QColor(pixels(image).most_common(1)[0][0]).name().upper() == getattr(tokens, ground)
    assert text_contrast(image) >= TEXT
    # not darker than its ink: nothing but that ink is painted
    ink = QColor(tokens.soft if soft else tokens.ink)
    assert text_contrast(image) <= contrast(ink, QColor(getattr(tokens, ground))) + 0.01


@pytest.mark.parametrize("choice", BOTH)
@pytest.mark.parametrize(("name", "fill"), [("", "field"), ("primary", "accent"), ("offer", "field")])
def test_painted_buttons(qtbot_parent: Callable[[str], QWidget], choice: ThemeChoice, name: str, fill: str) -> None:
    theme.choose(choice)
    tokens = theme.tokens()
    parent = qtbot_parent("ground")
    button = make_button("Save PDF…", name=name)
    button.setParent(parent)
    button.resize(120, 32)
    image = parent.grab(QRect(QPoint(0, 0), button.size())).toImage()
    inner = QRect(4, 4, 112, 24)
    assert QColor(pixels(image, inner).most_common(1)[0][0]).name().upper() == getattr(tokens, fill)
    assert text_contrast(image, inner) >= TEXT
    if name == "primary":
        assert contrast(image.pixelColor(3, 16), QColor(tokens.ground)) >= EDGE
    else:
        assert edge_contrast(image, tokens.field, tokens.ground) >= EDGE


@pytest.mark.parametrize("choice", BOTH)
def test_a_painted_button_that_cannot_be_pressed_is_still_readable(
    qtbot_parent: Callable[[str], QWidget], choice: ThemeChoice
) -> None:
    theme.choose(choice)
    parent = qtbot_parent("ground")
    for name in ("", "primary"):
        button = make_button("Save PDF…", name=name)
        button.setParent(parent)
        button.resize(120, 32)
        button.setEnabled(False)
        assert text_contrast(parent.grab(QRect(4, 4, 112, 24)).toImage()) >= TEXT
        button.setParent(None)


@pytest.fixture
def qtbot_parent(qapp: QApplication) -> Iterator[Callable[[str], QWidget]]:
    """Makes a widget with the ground of a pane, for controls to stand on."""
    made: list[QWidget] = []

    def make(name: str) -> QWidget:
        parent = QWidget()
        parent.setObjectName(name)
        parent.resize(300, 60)
        made.append(parent)
        return parent

    yield make
    for parent in made:
        parent.deleteLater()


@pytest.mark.parametrize("choice", BOTH)
def test_painted_fields(window: MainWindow, qapp: QApplication, choice: ThemeChoice) -> None:
    fill_2008(window)
    tokens = turn(choice, qapp)
    row = number_row(window, "systolic_bp")
    frame = row.frame
    image = frame.grab().toImage()
    edit = frame.edit.geometry()
    assert edge_contrast(image, tokens.field, tokens.ground) >= EDGE
    assert text_contrast(image, edit) >= TEXT
    unit = QRect(edit.right() + 8, 6, frame.width() - edit.right() - 34, frame.height() - 12)
    assert text_contrast(image, unit) >= TEXT


@pytest.mark.parametrize("choice", BOTH)
def test_the_painted_focus_ring(window: MainWindow, qapp: QApplication, choice: ThemeChoice) -> None:
    frame = number_row(window, "systolic_bp").frame
    frame.edit.setFocus()
    tokens = turn(choice, qapp)
    image = frame.grab().toImage()
    # the ring is the first line met from the left, two pixels wide
    ring = [x for x in range(6) if image.pixelColor(x, image.height() // 2).name().upper() == tokens.accent]
    assert len(ring) == 2
    assert contrast(QColor(tokens.accent), QColor(tokens.ground)) >= EDGE


@pytest.mark.parametrize("choice", BOTH)
def test_painted_segments(window: MainWindow, qapp: QApplication, choice: ThemeChoice) -> None:
    fill_2008(window)
    tokens = turn(choice, qapp)
    for segment in question_row(window, "sex").segments.segments:
        image = segment.grab().toImage()
        inner = segment.rect().adjusted(5, 5, -5, -5)
        ground = QColor(pixels(image, inner).most_common(1)[0][0])
        assert text_contrast(image, inner) >= TEXT
        if segment.isChecked():
            assert ground.name().upper() == tokens.sel
            assert text_contrast(image, QRect(0, 10, 4, 8)) >= EDGE  # its accent frame, on the field or on sel


@pytest.mark.parametrize("choice", BOTH)
def test_the_painted_number_and_its_seats(
    window: MainWindow, lipids: Model, qapp: QApplication, choice: ThemeChoice
) -> None:
    turn(choice, qapp)
    sheet = QColor(theme.tokens().sheet)
    seats = window.grab(QRect(window.sheet.number.mapTo(window, QPoint(0, 0)), window.sheet.number.size())).toImage()
    assert QColor(pixels(seats).most_common(1)[0][0]) == sheet
    assert text_contrast(seats) >= EDGE  # seats for digits are drawn, not written
    fill_2008(window)
    qapp.processEvents()
    shown = window.grab(QRect(window.sheet.number.mapTo(window, QPoint(0, 0)), window.sheet.number.size())).toImage()
    assert text_contrast(shown) >= TEXT


@pytest.mark.parametrize("choice", BOTH)
def test_the_painted_strip_and_stop(window: MainWindow, qapp: QApplication, choice: ThemeChoice) -> None:
    fill_2008(window)
    retype_number(window, "total_cholesterol", "5.2")
    tokens = turn(choice, qapp)
    strip = window.sheet.strip
    image = strip.grab().toImage()
    assert text_contrast(image, strip.label.geometry()) >= TEXT
    clear = QRect(strip.label.geometry().right() + 2, 0, 60, strip.height())
    hatching = pixels(image, clear)
    assert max(contrast(QColor(colour), QColor(tokens.sheet)) for colour in hatching) >= EDGE
    frame = number_row(window, "total_cholesterol").frame
    inked = contrast(frame.grab().toImage().pixelColor(4, frame.height() // 2), QColor(tokens.field))
    assert inked >= TEXT  # the heavy frame of a stop
