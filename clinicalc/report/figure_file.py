"""A figure on a page of its own size, as the bytes of a PDF: lines and letters, to be set into a paper or a slide."""

from io import BytesIO
from typing import Any

from clinicalc.report.fonts import Lettering
from clinicalc.report.painter import paint_shapes
from clinicalc.report.shapes import Figure, move
from clinicalc.report.typefaces import Weight, make_known

_MARGIN = 6.0


def write_figure(figure: Figure, lettering: Lettering, title: str) -> bytes:
    """The PDF (1.7), fonts embedded, the figure's sentence as subject. The same figure gives the same bytes."""
    from reportlab.pdfgen.canvas import Canvas

    target = BytesIO()
    make_known(Weight.REGULAR.value)
    wide, high = figure.width + 2 * _MARGIN, figure.height + 2 * _MARGIN
    canvas: Any = Canvas(
        target,
        pagesize=(wide, high),
        invariant=1,
        pageCompression=1,
        pdfVersion=(1, 7),
        initialFontName=Weight.REGULAR.value,  # else a standard font is referenced without being embedded
        lang="en-GB",
    )
    canvas.setTitle(title)
    canvas.setSubject(figure.sentence)
    paint_shapes(canvas, lettering, move(figure.shapes, _MARGIN, _MARGIN), high)
    canvas.showPage()
    canvas.save()
    return target.getvalue()
