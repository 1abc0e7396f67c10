"""A preview opened on an assessment, with a printer that is only recorded."""

from collections.abc import Callable

from PySide6.QtCore import QSize
from PySide6.QtGui import QColor, QImage
from PySide6.QtWidgets import QWidget
from pytestqt.qtbot import QtBot

from clinicalc.assessment.result import Assessment
from clinicalc.errors import PrintRefused
from clinicalc.gui.page_stack import SheetView
from clinicalc.gui.preview_view import PreviewView
from clinicalc.gui.printing import PrintJob
from clinicalc.report.parts import USUAL_PARTS, PrintParts
from clinicalc.settings import Paper
from tests.gui.test_printing import (
    DPI,
    Pixels,
    pixels_of,
)
from tests.report.printing import PRACTICE, with_band


class Job(PrintJob):
    """The real one, with a printer that is only recorded, or that does not take the print."""

    def __init__(self, assessment: Assessment, current: list[bool], refusal: str = "") -> None:
        super().__init__(assessment, lambda: current[0], practice=PRACTICE)
        self.sent: list[tuple[Paper, PrintParts]] = []
        self.current, self.printer_refusal = current, refusal
        self.meanwhile: Callable[[], None] = lambda: None

    def send(self, parent: QWidget | None, paper: Paper, parts: PrintParts) -> bool:
        self.meanwhile()
        self.check()
        if self.printer_refusal:
            raise PrintRefused(self.printer_refusal, do="Choose another printer.")
        self.sent.append((paper, parts))
        return True


def open_preview(
    qtbot: QtBot,
    assessment: Assessment | None = None,
    paper: Paper = Paper.A4,
    size: QSize | None = None,
    refusal: str = "",
) -> tuple[PreviewView, Job]:
    """Shown and exposed; `refusal` is what the printer says to the print."""
    job = Job(assessment or with_band("Ottilie Fenn"), [True], refusal)
    view = PreviewView(None, job, paper=paper, parts=USUAL_PARTS)
    qtbot.addWidget(view)
    view.resize(size or QSize(1024, 640))
    with qtbot.waitExposed(view):
        view.show()
    view.activateWindow()
    return view, job


def picture_of(sheet: SheetView, dpi: float = DPI) -> Pixels:
    """What the window paints of a page on a screen that is sharper than usual, so that there are `dpi` to the inch."""
    ratio = dpi / 72 / sheet.scale
    image = QImage(round(sheet.page.width * dpi / 72), round(sheet.page.height * dpi / 72), QImage.Format.Format_RGB32)
    image.setDevicePixelRatio(ratio)
    image.fill(QColor("magenta"))
    sheet.render(image)
    return pixels_of(image)
