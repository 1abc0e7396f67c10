"""Paints shapes into a PDF: the only place that talks to the PDF library's canvas about drawing."""

from collections.abc import Sequence
from typing import Any, assert_never

from clinicalc.report.fonts import Lettering
from clinicalc.report.pages import PAGE_HEIGHT, Page
from clinicalc.report.shapes import Line, Rect, Shape, Text, Tone


def paint_pages(canvas: Any, lettering: Lettering, pages: Sequence[Page]) -> None:
    """Every page, in order, shapes in the order in which they are to be read."""
    for page in pages:
        for shape in page.shapes:
            _paint(canvas, lettering, shape)
        canvas.showPage()


def _paint(canvas: Any, lettering: Lettering, shape: Shape) -> None:
    match shape:
        case Text():
            canvas.setFillColor(_colour(shape.tone))
            _write(canvas, lettering, shape)
        case Line():
            canvas.setStrokeColor(_colour(shape.tone))
            canvas.setLineWidth(shape.width)
            canvas.line(shape.x, PAGE_HEIGHT - shape.y, shape.to_x, PAGE_HEIGHT - shape.to_y)
        case Rect():
            if shape.fill is not None:
                canvas.setFillColor(_colour(shape.fill))
            if shape.outline is not None:
                canvas.setStrokeColor(_colour(shape.outline))
                canvas.setLineWidth(shape.line)
            bottom = PAGE_HEIGHT - shape.y - shape.height
            filled, stroked = int(shape.fill is not None), int(shape.outline is not None)
            canvas.rect(shape.x, bottom, shape.width, shape.height, fill=filled, stroke=stroked)
        case _:
            assert_never(shape)


def _write(canvas: Any, lettering: Lettering, text: Text) -> None:
    """One text object for the whole line, so that it is read back as one; accents set over their letters."""
    pieces = list(lettering.pieces(text.text, text.weight))
    if not pieces:
        return
    font = pieces[0].font
    canvas.setFont(font.name, text.size * font.scale)
    written = canvas.beginText(text.x, PAGE_HEIGHT - text.y)
    space = rise = 0.0
    for piece in pieces:
        if piece.font is not font:
            written.setFont(piece.font.name, text.size * piece.font.scale)
        if piece.space != space:
            written.setCharSpace(piece.space * text.size / 1000.0)
        if piece.rise != rise:
            written.setRise(piece.rise * text.size / 1000.0)
        font, space, rise = piece.font, piece.space, piece.rise
        written.textOut(piece.text)
    if space:
        written.setCharSpace(0)  # both would hold for the next text
    if rise:
        written.setRise(0)
    canvas.drawText(written)


def _colour(tone: Tone) -> Any:
    from reportlab.lib.colors import HexColor

    return HexColor(tone.value)
