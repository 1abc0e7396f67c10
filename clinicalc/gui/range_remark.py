"""The remark beside a value that is a drawing: the derivation range with a tick at the value."""

from math import ceil

from clinicalc.gui.figure_view import FigureView, lettering
from clinicalc.report.range_line import HEIGHT, WIDTH, RangeOfValues, draw_range


class RangeRemark(FigureView):
    """Shows a range; all of them are of one width, so that the ends of lines stand under each other."""

    def __init__(self) -> None:
        super().__init__()
        self._asked: tuple[object, ...] = ()
        self.setFixedSize(int(WIDTH), int(HEIGHT) - 1)  # with a line of words under it as high as a row
        self.hide()

    def show_range(self, span: RangeOfValues | None, value: float | None = None, *, inside: bool = True) -> None:
        """Draw the range in the unit on screen, with the value in the same unit where there is one."""
        asked = (span, value, inside)
        if asked == self._asked:
            return
        figure = None if span is None else draw_range(span, value, lettering().width, inside=inside)
        self.show_figure(figure)
        self.setVisible(figure is not None)
        if figure is not None:
            self.setFixedWidth(max(int(WIDTH), ceil(figure.width)))
        self._asked = asked
