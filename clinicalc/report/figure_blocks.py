"""Figures of several columns as blocks of a print: drawn as wide as the page, with the ruler where the sheet's is."""

from clinicalc.report.calibration_figure import draw_calibration
from clinicalc.report.columns import Columns
from clinicalc.report.comparison_figure import draw_comparison
from clinicalc.report.contents import (
    CalibrationPart,
    ComparisonPart,
    EffectPart,
    FigurePart,
    FlowPart,
    GroupsPart,
    KeyFiguresPart,
    NetBenefitPart,
    SharesPart,
    SpreadPart,
    StudyPart,
)
from clinicalc.report.effect_figure import draw_effect
from clinicalc.report.flow_figure import FlowSize, draw_flow
from clinicalc.report.fonts import Lettering
from clinicalc.report.group_figure import draw_groups
from clinicalc.report.key_figures import draw_key_figures
from clinicalc.report.net_benefit_figure import draw_net_benefit
from clinicalc.report.plot_frame import PlotSize
from clinicalc.report.ruler import RulerSize
from clinicalc.report.shapes import Figure, move
from clinicalc.report.shares_figure import draw_shares
from clinicalc.report.spread_figure import draw_spread
from clinicalc.report.strips import BASE, SMALL, WIDTH, Strip

RESULT_LEFT = 192.0
"""Where the ruler and everything about the number begin, in points from the margin."""
FIGURES_END = 176.0
_LANE, _LINE = 21.0, 0.75
_BELOW = 5.0


def ruler_size(lane: float) -> RulerSize:
    """The ruler of a print with lanes of this pitch."""
    return RulerSize(WIDTH - RESULT_LEFT, lane=lane, text=SMALL, line=_LINE)


def set_figure(lettering: Lettering, part: FigurePart) -> list[Strip]:
    """The figure as one strip, which no page break parts; one of a patient is held to what is said under it."""
    figure = _draw(lettering, part)
    if figure is None:
        return []
    alone = isinstance(part, StudyPart)
    return [Strip(figure.height + _BELOW, tuple(move(figure.shapes, 0, 0)), keep=not alone)]


def _draw(lettering: Lettering, part: FigurePart) -> Figure | None:
    if isinstance(part, StudyPart):
        return draw_figure_alone(lettering, part)
    columns = Columns(ruler_size(_LANE), FIGURES_END, RESULT_LEFT, BASE)
    match part:
        case SharesPart():
            return draw_shares(part.walk, columns, lettering.width)
        case EffectPart():
            return draw_effect(part.moves, columns, lettering.width)
        case ComparisonPart():
            return draw_comparison(part.compared, columns, lettering.width)


def draw_figure_alone(lettering: Lettering, part: StudyPart) -> Figure:
    """A figure of people as it stands in a print, for a page of its own."""
    return draw_study_part(lettering, part, PlotSize(WIDTH, SMALL, _LINE))


def draw_study_part(lettering: Lettering, part: StudyPart, plot: PlotSize) -> Figure:
    """A figure of people as wide as `plot` says."""
    match part:
        case FlowPart():
            return draw_flow(part.flow, FlowSize(plot.width, plot.text + 0.5, plot.line), lettering.width)
        case CalibrationPart():
            return draw_calibration(part.shown, plot, lettering.width)
        case SpreadPart():
            return draw_spread(part.shown, plot, lettering.width)
        case KeyFiguresPart():
            return draw_key_figures(part.shown, plot, lettering.width)
        case NetBenefitPart():
            return draw_net_benefit(part.shown, plot, lettering.width)
        case GroupsPart():
            return draw_groups(part.shown, plot, lettering.width)
