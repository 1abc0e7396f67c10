"""Figures of several columns as blocks of a print: drawn as wide as the page, with the ruler where the sheet's is."""

from clinicalc.report.columns import Columns
from clinicalc.report.comparison_figure import draw_comparison
from clinicalc.report.contents import ComparisonPart, EffectPart, SharesPart
from clinicalc.report.effect_figure import draw_effect
from clinicalc.report.fonts import Lettering
from clinicalc.report.ruler import RulerSize
from clinicalc.report.shapes import move
from clinicalc.report.shares_figure import draw_shares
from clinicalc.report.strips import BASE, SMALL, WIDTH, Strip

RESULT_LEFT = 192.0
"""Where the ruler and everything about the number begin, in points from the margin."""
FIGURES_END = 176.0
_LANE, _LINE = 21.0, 0.75
_BELOW = 5.0


def ruler_size(lane: float) -> RulerSize:
    """The ruler of a print with lanes of this pitch."""
    return RulerSize(WIDTH - RESULT_LEFT, lane=lane, text=SMALL, line=_LINE)


def set_figure(lettering: Lettering, part: SharesPart | ComparisonPart | EffectPart) -> list[Strip]:
    """The figure as one strip, which no page break parts, held to what is said under it."""
    columns = Columns(ruler_size(_LANE), FIGURES_END, RESULT_LEFT, BASE)
    if isinstance(part, SharesPart):
        figure = draw_shares(part.walk, columns, lettering.width)
    elif isinstance(part, EffectPart):
        figure = draw_effect(part.moves, columns, lettering.width)
    else:
        compared = draw_comparison(part.compared, columns, lettering.width)
        if compared is None:
            return []
        figure = compared
    return [Strip(figure.height + _BELOW, tuple(move(figure.shapes, 0, 0)), keep=True)]
