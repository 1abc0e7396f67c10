"""The pages of a print under each other on the ground, painted as the PDF has them, at a size that can be chosen."""

from collections.abc import Callable
from enum import Enum

from PySide6.QtCore import QEvent, QObject, QRectF, Qt, Signal
from PySide6.QtGui import QColor, QPainter, QPaintEvent, QPen
from PySide6.QtWidgets import QAbstractSlider, QScrollArea, QVBoxLayout, QWidget

from clinicalc.gui import theme
from clinicalc.gui.exceptions import explain
from clinicalc.gui.labels import make_line
from clinicalc.gui.painting import paint
from clinicalc.gui.tokens import RING
from clinicalc.gui.typeface import CAPTION
from clinicalc.report.document import Document
from clinicalc.report.palette import PAPER
from clinicalc.report.shapes import Text, Tone

_POINTS_PER_INCH = 72.0
_MARGIN = 16
_COLOURS = {tone: QColor(colour) for tone, colour in PAPER.items()}
"""Paper is light in every theme: the preview shows what will lie on the table."""


class Zoom(Enum):
    """How large the pages are: as wide as the window, as large as on paper, or twice that."""

    FIT = "fit"
    FULL = "full"
    DOUBLE = "double"


class SheetView(QWidget):
    """One page; it asks `may_show` before every painting and stays empty after a no.

    A screen reader gets the texts of the page in the order of the print.
    """

    failed = Signal(str)
    """The page could not be painted; why, in words. The exception itself goes on its way."""

    def __init__(self, document: Document, place: int, may_show: Callable[[], bool]) -> None:
        super().__init__()
        self.page = document.pages[place]
        self.texts = tuple(shape.text for shape in self.page.shapes if isinstance(shape, Text))
        self._lettering, self._may_show = document.lettering, may_show
        self._scale = 0.0  # no size yet
        self.caption = make_line(f"Page {place + 1} of {len(document.pages)}", CAPTION, soft=True)
        self.setAccessibleName(self.caption.text())
        self.setAccessibleDescription(" ".join(self.texts))

    @property
    def scale(self) -> float:
        """Pixels of the window to one point of paper."""
        return self._scale

    def take_scale(self, scale: float) -> None:
        """Be as large as the page is at so many pixels to a point, and the caption as wide."""
        self._scale = scale
        self.setFixedSize(round(self.page.width * scale), round(self.page.height * scale))
        self.caption.setFixedWidth(self.width())
        self.update()

    def paintEvent(self, event: QPaintEvent) -> None:
        """The sheet and what is printed on it, all or nothing."""
        painter = QPainter(self)
        try:
            if self._may_show():
                painter.fillRect(self.rect(), _COLOURS[Tone.SHEET])
                paint(painter, self.page.shapes, _COLOURS, self._lettering, scale=self._scale, snap=True)
        except Exception as error:
            painter.fillRect(self.rect(), _COLOURS[Tone.SHEET])
            self.failed.emit(explain(error))
            raise
        finally:
            painter.end()


class _Ground(QWidget):
    """What the sheets lie on; a thin edge round each, which takes nothing from the page."""

    def __init__(self) -> None:
        super().__init__()
        self.setObjectName("ground")

    def paintEvent(self, event: QPaintEvent) -> None:
        painter = QPainter(self)
        painter.fillRect(event.rect(), QColor(theme.tokens().ground))
        painter.setPen(QPen(QColor(theme.tokens().edge), 1))
        for sheet in self.findChildren(SheetView):
            painter.drawRect(sheet.geometry().adjusted(-1, -1, 0, 0))
        painter.end()


class PageStack(QWidget):
    """Scrolls by the arrow and page keys; the ring round it says that it has the focus."""

    failed = Signal(str)

    def __init__(self, may_show: Callable[[], bool]) -> None:
        super().__init__()
        self._may_show = may_show
        self._zoom = Zoom.FIT
        self.sheets: tuple[SheetView, ...] = ()
        self.area = QScrollArea()
        self.area.setWidgetResizable(True)
        self.area.setVerticalScrollBarPolicy(Qt.ScrollBarPolicy.ScrollBarAlwaysOn)  # the width to fit stays the same
        self.area.setFocusPolicy(Qt.FocusPolicy.StrongFocus)
        self.area.setCornerWidget(QWidget())  # empty: Qt would draw a frame between the two scroll bars
        self.area.setAccessibleName("Pages")
        self.area.installEventFilter(self)
        self.area.viewport().installEventFilter(self)
        self.setFocusProxy(self.area)
        column = QVBoxLayout(self)
        column.setContentsMargins(RING, RING, RING, RING)
        column.addWidget(self.area)

    @property
    def zoom(self) -> Zoom:
        """How large the pages are."""
        return self._zoom

    def show_document(self, document: Document) -> None:
        """Show these pages from the first one on."""
        ground = _Ground()
        column = QVBoxLayout(ground)
        column.setContentsMargins(_MARGIN, 8, _MARGIN, _MARGIN)
        column.setSpacing(4)
        self.sheets = tuple(SheetView(document, place, self._may_show) for place in range(len(document.pages)))
        for sheet in self.sheets:
            column.addWidget(sheet.caption, 0, Qt.AlignmentFlag.AlignHCenter)
            column.addWidget(sheet, 0, Qt.AlignmentFlag.AlignHCenter)
            column.addSpacing(8)
            sheet.failed.connect(self.failed, Qt.ConnectionType.QueuedConnection)  # not from within a paint
        column.addStretch(1)
        self.area.setWidget(ground)
        self._fit()
        self.area.verticalScrollBar().setValue(0)

    def clear(self) -> None:
        """Show nothing, and keep nothing that could be shown or read out."""
        self.sheets = ()
        ground = self.area.takeWidget()
        if ground is not None:
            ground.deleteLater()

    def take_zoom(self, zoom: Zoom) -> None:
        """Show the pages in this size, with the same place of the print in view."""
        self._zoom = zoom
        self._fit()

    def step_zoom(self, by: int) -> Zoom:
        """Take the next larger size (1) or the next smaller one (-1), if there is one; what it is now."""
        now = self._scale_of(self._zoom)
        others = [zoom for zoom in Zoom if (self._scale_of(zoom) - now) * by > 0]
        if others:
            self.take_zoom(min(others, key=lambda zoom: abs(self._scale_of(zoom) - now)))
        return self._zoom

    def turn(self, by: int) -> None:
        """Go on by one view (1), or back (-1)."""
        steps = QAbstractSlider.SliderAction
        self.area.verticalScrollBar().triggerAction(steps.SliderPageStepAdd if by > 0 else steps.SliderPageStepSub)

    def eventFilter(self, watched: QObject, event: QEvent) -> bool:
        """Qt hands every event of the scrolled area here first; the pages stay as wide as it, where that was chosen."""
        if event.type() in (QEvent.Type.FocusIn, QEvent.Type.FocusOut):
            self.update()
        elif event.type() == QEvent.Type.Resize and watched is self.area.viewport():
            self._fit()
        return False

    def paintEvent(self, event: QPaintEvent) -> None:
        """The ring of the focus."""
        painter = QPainter(self)
        painter.fillRect(self.rect(), QColor(theme.tokens().ground))
        if self.area.hasFocus():
            painter.setPen(QPen(QColor(theme.tokens().accent), 2))
            painter.drawRect(QRectF(self.rect()).adjusted(1, 1, -1, -1))
        painter.end()

    def _scale_of(self, zoom: Zoom) -> float:
        if zoom is Zoom.FIT and self.sheets:
            return max(0.1, (self.area.viewport().width() - 2 * _MARGIN) / self.sheets[0].page.width)
        return self.logicalDpiY() / _POINTS_PER_INCH * (2.0 if zoom is Zoom.DOUBLE else 1.0)

    def _fit(self) -> None:
        ground = self.area.widget()
        if ground is None:
            return
        scale, bar = self._scale_of(self._zoom), self.area.verticalScrollBar()
        if self.sheets and self.sheets[0].scale == scale:
            return
        place = bar.value() / max(1, bar.maximum())
        for sheet in self.sheets:
            sheet.take_scale(scale)
        ground.resize(ground.sizeHint().expandedTo(self.area.viewport().size()))  # now: the bar then knows its length
        bar.setValue(round(place * bar.maximum()))
