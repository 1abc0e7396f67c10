"""The same shapes through Qt and through the PDF library are the same picture; on screen thin lines are sharp."""

import shutil
import subprocess
from collections.abc import Mapping, Sequence
from dataclasses import fields
from io import BytesIO
from pathlib import Path
from typing import Any

import numpy as np
import pytest
from numpy.typing import NDArray
from PySide6.QtCore import QMarginsF, QSizeF
from PySide6.QtGui import QColor, QImage, QPageLayout, QPageSize, QPainter, QPdfWriter
from reportlab.pdfgen.canvas import Canvas

from clinicalc.gui.painting import colours_of, paint
from clinicalc.gui.tokens import LIGHT, Tokens
from clinicalc.report.compose import compose
from clinicalc.report.dots import draw_people, draw_small_grid
from clinicalc.report.fonts import Lettering, read_lettering
from clinicalc.report.measured import DecisionPoint, Interval, Lane, Measured
from clinicalc.report.number import draw_number, draw_seats
from clinicalc.report.pages import PAGE_HEIGHT, PAGE_WIDTH, lay_out
from clinicalc.report.painter import paint_shapes
from clinicalc.report.palette import PAPER
from clinicalc.report.range_line import RangeOfValues, draw_range
from clinicalc.report.ruler import RulerSize, draw_ruler
from clinicalc.report.shapes import Anchor, Dot, Line, Poly, Rect, Shape, Text, Tone, hatch, move
from clinicalc.report.typefaces import Weight, make_known
from tests.report.printing import PRACTICE, PRINTED, with_band

DPI = 150
MOST_DIFFERING = 0.01
LARGEST_DIFFERENCE = 32
needs_pdftoppm = pytest.mark.skipif(shutil.which("pdftoppm") is None, reason="pdftoppm (Poppler) is not installed")

Pixels = NDArray[np.int16]


@pytest.fixture(scope="module")
def lettering() -> Lettering:
    return read_lettering()


def every_shape() -> tuple[Shape, ...]:
    """One of each, with every option."""
    return (
        Rect(10, 10, 60, 30, fill=Tone.TINT, outline=Tone.INK, line=1.5),
        Rect(80, 10, 60, 30, outline=Tone.EDGE, radius=6),
        Line(150, 10, 210, 40, 2, Tone.ACCENT),
        Line(220.5, 10, 220.5, 40, 2, Tone.INK, dash=3),
        Line(230, 25, 280, 25, 1, Tone.RULE, dash=4),
        Dot(25, 65, 12, fill=Tone.ACCENT),
        Dot(60, 65, 12, outline=Tone.EDGE, line=1.2),
        Dot(95, 65, 12, fill=Tone.WASH, outline=Tone.INK),
        Poly(((120, 55), (140, 75), (160, 55), (180, 75)), outline=Tone.ACCENT, line=2),
        Poly(((200, 55), (220, 55), (210, 75)), fill=Tone.ACCENT),
        Poly(((230, 55), (250, 55), (255, 75), (225, 75)), fill=Tone.TINT, outline=Tone.INK),
        *hatch(10, 90, 270, 19),
        Text(10, 130, "Fi fl ffi AV To 1.17 %", 13),
        Text(145, 150, "in the middle", 17, Weight.SEMIBOLD, Tone.SOFT, Anchor.MIDDLE),
        Text(280, 130, "to the end", 11.5, anchor=Anchor.END),
        Text(10, 180, "Żółć Őry, Ǆ and Ӂ, ŀ", 14),
        Text(10, 200, "Ǆukela Ӂ", 14, Weight.SEMIBOLD),
    )


def figures(lettering: Lettering) -> tuple[Shape, ...]:
    """A sheet of every figure."""
    measure = lettering.width
    full = Measured(
        "cloglog",
        0.122,
        band=Interval(0.093, 0.161),
        spread=Interval(0.087, 0.17),
        decisions=(DecisionPoint(0.1, "practice setting"),),
    )
    wide = Measured("logit", 0.0002, band=Interval(0.0001, 0.001))
    size = RulerSize(330)
    placed = (
        (draw_number("12.2 %", measure, vetted=True), 20, 10),
        (draw_seats(measure), 220, 10),
        (draw_small_grid(0.122), 420, 10),
        (draw_small_grid(0.004), 500, 10),
        (draw_ruler(full, size, measure, tuple(Lane)).figure, 20, 100),
        (draw_ruler(wide, size, measure).figure, 20, 240),
        (draw_ruler(Measured("logit"), size, measure).figure, 20, 330),
        (draw_people(0.122), 20, 420),
        (draw_people(0.004, room=300), 240, 420),
        (draw_range(RangeOfValues(30, 120, "30", "120"), 27, measure, inside=False), 420, 130),
        (draw_range(RangeOfValues(30, 120, "30", "120"), 70, measure, inside=True), 420, 160),
    )
    return tuple(shape for figure, x, y in placed for shape in move(figure.shapes, x, y))


def through_qt(shapes: Sequence[Shape], lettering: Lettering, width: float, height: float) -> Pixels:
    zoom = DPI / 72
    image = QImage(round(width * zoom), round(height * zoom), QImage.Format.Format_RGB32)
    image.fill(QColor(PAPER[Tone.SHEET]))
    painter = QPainter(image)
    paint(painter, shapes, colours_of(LIGHT), lettering, scale=zoom, snap=True)
    painter.end()
    return pixels_of(image)


def pixels_of(image: QImage) -> Pixels:
    """Red, green and blue, rows first."""
    plain = image.convertToFormat(QImage.Format.Format_RGB888)
    rows = np.frombuffer(plain.constBits(), np.uint8).reshape(plain.height(), plain.bytesPerLine())
    return rows[:, : 3 * plain.width()].reshape(plain.height(), plain.width(), 3).astype(np.int16)


def through_pdf(shapes: Sequence[Shape], lettering: Lettering, width: float, height: float, folder: Path) -> Pixels:
    target = BytesIO()
    make_known(Weight.REGULAR.value)
    canvas: Any = Canvas(target, pagesize=(width, height), initialFontName=Weight.REGULAR.value)
    paint_shapes(canvas, lettering, shapes, height)
    canvas.showPage()
    canvas.save()
    (folder / "shapes.pdf").write_bytes(target.getvalue())
    return rastered(folder / "shapes.pdf")


def rastered(pdf: Path) -> Pixels:
    """The first page as pixels."""
    stem = pdf.with_suffix("")
    subprocess.run(["pdftoppm", "-r", str(DPI), "-png", "-singlefile", str(pdf), str(stem)], check=True)
    return pixels_of(QImage(str(stem.with_suffix(".png"))))


def share_differing(one: Pixels, other: Pixels) -> float:
    """The share of pixels of which some colour differs by more than the limit; edges of one pixel are let go."""
    rows, columns = (min(sizes) for sizes in zip(one.shape[:2], other.shape[:2], strict=True))
    assert max(abs(a - b) for a, b in zip(one.shape, other.shape, strict=True)) <= 1
    apart = np.abs(one[:rows, :columns] - other[:rows, :columns]).max(axis=2) > LARGEST_DIFFERENCE
    return float(apart.mean())


@needs_pdftoppm
@pytest.mark.parametrize("which", ["every shape", "figures", "page"])
def test_screen_and_pdf_show_the_same(which: str, lettering: Lettering, tmp_path: Path) -> None:
    width, height = 288.0, 216.0
    shapes: tuple[Shape, ...]
    if which == "every shape":
        shapes = every_shape()
    elif which == "figures":
        shapes, width, height = figures(lettering), 600.0, 648.0
    else:
        sheet = compose(with_band("Żółć Őry Ǆ"), practice=PRACTICE, printed_at=PRINTED)
        shapes, width, height = lay_out(lettering, sheet)[0].shapes, PAGE_WIDTH, PAGE_HEIGHT
    painted = through_qt(shapes, lettering, width, height)
    printed = through_pdf(shapes, lettering, width, height, tmp_path)
    assert (painted.min(axis=2) < 200).mean() > 0.01  # there is something to compare
    assert share_differing(painted, printed) <= MOST_DIFFERING


@needs_pdftoppm
def test_a_difference_would_be_seen(lettering: Lettering, tmp_path: Path) -> None:
    moved = move(every_shape(), 0.0, 1.0)
    painted = through_qt(moved, lettering, 288, 216)
    assert share_differing(painted, through_pdf(every_shape(), lettering, 288, 216, tmp_path)) > MOST_DIFFERING


@needs_pdftoppm
def test_a_printer_gets_the_same_picture(lettering: Lettering, tmp_path: Path) -> None:
    """Qt's own PDF stands for a printer: it takes the same path, in the printer's dots."""
    shapes = figures(lettering)
    writer = QPdfWriter(str(tmp_path / "printer.pdf"))
    writer.setResolution(600)
    writer.setPageSize(QPageSize(QSizeF(600, 648), QPageSize.Unit.Point))
    writer.setPageMargins(QMarginsF(0, 0, 0, 0), QPageLayout.Unit.Point)
    painter = QPainter(writer)
    paint(painter, shapes, colours_of(LIGHT), lettering, scale=600 / 72, snap=False)
    painter.end()
    printed = through_pdf(shapes, lettering, 600, 648, tmp_path)
    assert share_differing(rastered(tmp_path / "printer.pdf"), printed) <= MOST_DIFFERING


def test_the_light_theme_and_paper_have_the_same_colours() -> None:
    assert {tone.value: colour for tone, colour in PAPER.items()} == {
        field.name: getattr(LIGHT, field.name) for field in fields(Tokens)
    }
    assert colours_of(LIGHT).keys() == set(Tone)


@pytest.mark.parametrize("zoom", [1.0, 1.25, 1.5, 2.0])
@pytest.mark.parametrize("x", [10.0, 10.3, 10.5, 10.8])
def test_on_screen_thin_lines_and_the_edges_of_boxes_are_sharp(lettering: Lettering, zoom: float, x: float) -> None:
    shapes: tuple[Shape, ...] = (
        Line(x, 5, x, 25, 1, Tone.INK),
        Line(x + 10, 5, x + 10, 25, 2, Tone.INK),
        Line(x + 15, x, x + 40, x, 1, Tone.INK),
        Rect(x + 45, x, 10.4, 10.4, fill=Tone.INK),
    )
    image = QImage(round(80 * zoom), round(40 * zoom), QImage.Format.Format_RGB32)
    image.fill(QColor(PAPER[Tone.SHEET]))
    image.setDevicePixelRatio(zoom)
    painter = QPainter(image)
    paint(painter, shapes, colours_of(LIGHT), lettering)
    painter.end()
    assert colours_in(pixels_of(image)) == {PAPER[Tone.SHEET], PAPER[Tone.INK]}


def test_without_snapping_a_line_between_two_pixels_is_blurred(lettering: Lettering) -> None:
    image = QImage(40, 40, QImage.Format.Format_RGB32)
    image.fill(QColor(PAPER[Tone.SHEET]))
    painter = QPainter(image)
    paint(painter, (Line(10, 5, 10, 25, 1, Tone.INK),), colours_of(LIGHT), lettering, snap=False)
    painter.end()
    assert PAPER[Tone.INK] not in colours_in(pixels_of(image))


def colours_in(pixels: Pixels) -> set[str]:
    return {f"#{r:02X}{g:02X}{b:02X}" for r, g, b in np.unique(pixels.reshape(-1, 3), axis=0)}


@pytest.mark.parametrize("weight", list(Weight))
def test_qt_sets_text_as_wide_as_it_was_measured(lettering: Lettering, weight: Weight) -> None:
    """Painted ink ends where the measured width says, within a pixel: no kerning, no ligatures."""
    text = "AVAVAVToffifl11117,7.7WAWAWA|"  # one word: words are placed one by one
    image = QImage(600, 40, QImage.Format.Format_RGB32)
    image.fill(QColor(PAPER[Tone.SHEET]))
    painter = QPainter(image)
    paint(painter, (Text(580, 28, text, 20, weight, anchor=Anchor.END),), colours_of(LIGHT), lettering)
    painter.end()
    inked = np.flatnonzero(pixels_of(image).min(axis=(0, 2)) < 128)
    bar = lettering.width("|", 20, weight)
    assert inked[-1] == pytest.approx(580 - bar / 2, abs=1.5)
    assert inked[0] == pytest.approx(580 - lettering.width(text, 20, weight), abs=1.5)


def test_every_theme_colours_what_it_paints(lettering: Lettering) -> None:
    colours: Mapping[Tone, QColor] = dict.fromkeys(Tone, QColor("#123456"))
    image = QImage(20, 20, QImage.Format.Format_RGB32)
    image.fill(QColor("#FFFFFF"))
    painter = QPainter(image)
    paint(painter, (Rect(0, 0, 20, 20, fill=Tone.WASH),), colours, lettering)
    painter.end()
    assert colours_in(pixels_of(image)) == {"#123456"}
