"""The print on paper and its preview: the pages of the PDF, painted on a printer.

The pages are laid out once, from the assessment that was on screen when the preview was opened. If a value has changed
since, nothing is painted any more: not in the preview, not on the printer.
"""

from collections.abc import Callable
from datetime import datetime

from PySide6.QtCore import QMarginsF, QMetaObject, Qt
from PySide6.QtGui import QPageLayout, QPageSize, QPainter
from PySide6.QtPrintSupport import QPrinter, QPrintPreviewDialog
from PySide6.QtWidgets import QMessageBox, QWidget

from clinicalc.assessment.result import Assessment
from clinicalc.errors import ClinicalcError, PrintRefused
from clinicalc.gui.painting import colours_of, paint
from clinicalc.gui.tokens import LIGHT
from clinicalc.operations.documents import lay_out_print, suggest_pdf_name
from clinicalc.report import Document
from clinicalc.settings import Paper

POINTS_PER_INCH = 72.0
_DOTS_PER_INCH = 1200
_SIZES = {Paper.A4: QPageSize.PageSizeId.A4, Paper.LETTER: QPageSize.PageSizeId.Letter}


def make_printer(paper: Paper, title: str) -> QPrinter:
    """A printer for whole sheets of `paper`; `title` names the job, so it says nothing about the patient."""
    printer = QPrinter(QPrinter.PrinterMode.HighResolution)
    printer.setResolution(_DOTS_PER_INCH)
    printer.setFullPage(True)
    printer.setPageSize(QPageSize(_SIZES[paper]))
    printer.setPageOrientation(QPageLayout.Orientation.Portrait)
    printer.setPageMargins(QMarginsF(0, 0, 0, 0), QPageLayout.Unit.Point)
    printer.setFontEmbeddingEnabled(True)
    printer.setDocName(title)
    return printer


def paint_document(printer: QPrinter, document: Document) -> None:
    """Paint every page on a printer, vectors and letters, in the colours of paper.

    A sheet of another size takes the pages whole, made smaller if need be. Raises PrintRefused when the printer does
    not begin or does not take a page.
    """
    painter = QPainter()
    if not painter.begin(printer):
        raise _unwilling()
    try:
        colours = colours_of(LIGHT)
        for place, page in enumerate(document.pages):
            if place and not printer.newPage():
                raise _unwilling()
            sheet = printer.pageLayout().fullRect(QPageLayout.Unit.Point)
            dots = printer.resolution() / POINTS_PER_INCH
            fits = min(1.0, (sheet.width() + 1) / page.width, (sheet.height() + 1) / page.height)
            paint(painter, page.shapes, colours, document.lettering, scale=dots * fits, snap=False)
    finally:
        painter.end()


class PrintPreview(QPrintPreviewDialog):
    """The preview of one assessment; it refuses to show or print once `still_current` says no."""

    def __init__(
        self,
        parent: QWidget | None,
        assessment: Assessment,
        still_current: Callable[[], bool],
        *,
        practice: str = "",
        paper: Paper = Paper.A4,
        patient_page: bool = True,
    ) -> None:
        self.printed_at = datetime.now().astimezone()
        self._documents = {
            size: lay_out_print(
                assessment, practice=practice, patient_page=patient_page, paper=size, printed_at=self.printed_at
            )
            for size in Paper
        }
        self._still_current = still_current
        self.refusal = ""
        self.printer_in_use = make_printer(paper, suggest_pdf_name(assessment).removesuffix(".pdf"))
        super().__init__(self.printer_in_use, parent)
        self.setWindowTitle("Print preview")
        self.paintRequested.connect(self.paint_on)

    def paint_on(self, printer: QPrinter) -> None:
        """Paint the pages on this printer, which is the preview's or the real one; or nothing, and close."""
        try:
            if not self._still_current():
                raise PrintRefused(
                    "nothing was printed: the values on screen have changed since this preview was opened.",
                    do="Open the print again; it then shows the values as they are now.",
                )
            paint_document(printer, self._documents[_paper_of(printer)])
        except ClinicalcError as error:
            said = str(error)
            self.refusal = said[:1].upper() + said[1:]
            # not from within the signal: the preview still stands on its way through the pages
            QMetaObject.invokeMethod(self, "reject", Qt.ConnectionType.QueuedConnection)


def preview(
    parent: QWidget | None,
    assessment: Assessment,
    still_current: Callable[[], bool],
    *,
    practice: str = "",
    paper: Paper = Paper.A4,
    patient_page: bool = True,
    explain: Callable[[QWidget | None, str], None] | None = None,
) -> bool:
    """Show the print of an assessment and let it be printed; False where it was refused, which is said in a sentence.

    `still_current` says whether the values on screen are still those of the assessment; it is asked before every
    painting. `explain` shows a sentence, in a message box where it is left out. Raises PrintRefused for a text that
    could only be printed wrongly.
    """
    dialog = PrintPreview(parent, assessment, still_current, practice=practice, paper=paper, patient_page=patient_page)
    try:
        dialog.exec()
        refusal = dialog.refusal
    finally:
        dialog.deleteLater()
    if refusal:
        (explain or _explain)(parent, refusal)
    return not refusal


def _paper_of(printer: QPrinter) -> Paper:
    """Which of the two layouts suits the sheet that the printer has: the one whose height is nearer to it."""
    height = printer.pageLayout().pageSize().size(QPageSize.Unit.Point).height()
    sizes = {paper: QPageSize(size).size(QPageSize.Unit.Point).height() for paper, size in _SIZES.items()}
    return min(sizes, key=lambda paper: abs(sizes[paper] - height))


def _unwilling() -> PrintRefused:
    return PrintRefused(
        "the printer does not take the print.", do="Choose another printer, or save the PDF and print that."
    )


def _explain(parent: QWidget | None, sentence: str) -> None:
    box = QMessageBox(QMessageBox.Icon.NoIcon, "Not printed", sentence, QMessageBox.StandardButton.Close, parent)
    box.setTextFormat(Qt.TextFormat.PlainText)
    box.exec()
