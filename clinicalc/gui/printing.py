"""The print on paper and its preview: the pages of the PDF, painted on a printer.

The pages are laid out once, from the assessment that was on screen when the preview was opened. If a value has changed
since, nothing is painted any more: not in the preview, not on the printer.
"""

from collections.abc import Callable
from datetime import datetime

from PySide6.QtCore import QMarginsF, Qt
from PySide6.QtGui import QColor, QPageLayout, QPageSize, QPainter
from PySide6.QtPrintSupport import QPrintDialog, QPrinter
from PySide6.QtWidgets import QMessageBox, QWidget

from clinicalc.assessment.result import Assessment
from clinicalc.errors import PrintRefused
from clinicalc.gui.painting import paint
from clinicalc.gui.preview_view import PreviewView
from clinicalc.operations.documents import lay_out_print, suggest_pdf_name
from clinicalc.report.document import Document
from clinicalc.report.palette import PAPER
from clinicalc.report.parts import USUAL_PARTS, PrintParts, offered_parts
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
        colours = {tone: QColor(colour) for tone, colour in PAPER.items()}
        for place, page in enumerate(document.pages):
            if place and not printer.newPage():
                raise _unwilling()
            sheet = printer.pageLayout().fullRect(QPageLayout.Unit.Point)
            dots = printer.resolution() / POINTS_PER_INCH
            fits = min(1.0, (sheet.width() + 1) / page.width, (sheet.height() + 1) / page.height)
            paint(painter, page.shapes, colours, document.lettering, scale=dots * fits, snap=False)
    finally:
        painter.end()


def choose_printer(printer: QPrinter, parent: QWidget | None) -> bool:
    """The system's dialog: which printer, which paper, how many copies. Whether one was chosen."""
    dialog = QPrintDialog(printer, parent)
    dialog.setOption(QPrintDialog.PrintDialogOption.PrintPageRange, False)  # a print goes out whole
    try:
        return bool(dialog.exec())
    finally:
        dialog.deleteLater()


def _do_nothing() -> None:
    """A file that is tried out is read again from nowhere."""


class PrintJob:
    """One assessment on its way to paper: its pages, laid out once a sheet, for the preview and for a printer.

    `offered` are the parts of which there is something to print.

    `still_current` says whether the values on screen are still those of the assessment. `choose` lets a printer be
    chosen and says whether one was. `read_again` is called before anything goes to a printer.
    """

    def __init__(
        self,
        assessment: Assessment,
        still_current: Callable[[], bool],
        *,
        practice: str = "",
        letterhead: tuple[str, ...] = (),
        choose: Callable[[QPrinter, QWidget | None], bool] = choose_printer,
        read_again: Callable[[], None] = _do_nothing,
    ) -> None:
        self.printed_at = datetime.now().astimezone()
        self.name = suggest_pdf_name(assessment).removesuffix(".pdf")
        self.offered = offered_parts(assessment)
        self._assessment, self._practice, self._letterhead = assessment, practice, letterhead
        self._still_current, self._choose, self._read_again = still_current, choose, read_again
        self._documents: dict[tuple[Paper, PrintParts], Document] = {}

    def check(self) -> None:
        """Raises PrintRefused once the values on screen have changed."""
        if not self._still_current():
            raise PrintRefused(
                "nothing was printed: the values on screen have changed since this preview was opened.",
                do="Open the print again; it then shows the values as they are now.",
            )

    def lay_out(self, paper: Paper, parts: PrintParts) -> Document:
        """The pages on this paper. Raises PrintRefused for a text that could only be printed wrongly."""
        wanted = (paper, parts)
        if wanted not in self._documents:
            self._documents[wanted] = lay_out_print(
                self._assessment,
                practice=self._practice,
                parts=parts,
                paper=paper,
                printed_at=self.printed_at,
                letterhead=self._letterhead,
            )
        return self._documents[wanted]

    def send(self, parent: QWidget | None, paper: Paper, parts: PrintParts) -> bool:
        """Let a printer be chosen and paint the pages on it; False where none was chosen.

        A printer set to the other paper gets the pages laid out for that. Raises PrintRefused where the printer does
        not take them, or where a value was changed before they were painted.
        """
        printer = make_printer(paper, self.name)
        if not self._choose(printer, parent):
            return False
        self._read_again()
        self.check()
        paint_document(printer, self.lay_out(_paper_of(printer), parts))
        return True


def preview(
    parent: QWidget | None,
    assessment: Assessment,
    still_current: Callable[[], bool],
    *,
    practice: str = "",
    letterhead: tuple[str, ...] = (),
    paper: Paper = Paper.A4,
    parts: PrintParts = USUAL_PARTS,
    explain: Callable[[QWidget | None, str], None] | None = None,
    read_again: Callable[[], None] = _do_nothing,
) -> bool:
    """Show the print of an assessment and let it be printed; False where it was refused, which is said in a sentence.

    `still_current` says whether the values on screen are still those of the assessment; it is asked before every
    painting. `explain` shows a sentence, in a message box where it is left out. `read_again` is called before anything
    goes to a printer. Raises PrintRefused for a text that could only be printed wrongly.
    """
    job = PrintJob(assessment, still_current, practice=practice, letterhead=letterhead, read_again=read_again)
    job.lay_out(paper, parts)  # refused here, the preview does not even open
    refusal = _show(parent, job, paper, parts)
    if refusal:
        (explain or _explain)(parent, refusal)
    return not refusal


def _show(parent: QWidget | None, job: PrintJob, paper: Paper, parts: PrintParts) -> str:
    """Show the preview until it is closed; why nothing was printed, "" where nothing was refused."""
    try:
        job.check()
    except PrintRefused as error:
        words = str(error)
        return words[:1].upper() + words[1:]
    dialog = PreviewView(parent, job, paper=paper, parts=parts)
    try:
        dialog.exec()
        return dialog.refusal
    finally:
        dialog.deleteLater()


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
