"""The history of one model or of the whole library, and which models answered on a day that is past."""

from collections.abc import Callable
from pathlib import Path

from clinicalc.errors import ClinicalcError
from clinicalc.gui.errands import Errands
from clinicalc.gui.file_choosing import ChooseSave, Wanted
from clinicalc.gui.form_deed import WorkingDeed
from clinicalc.gui.models.deeds.history_entries import HistoryEntry, entries_of_day, entries_of_history
from clinicalc.gui.models.deeds.history_pane import HistoryPane
from clinicalc.library.as_of import DATES_ARE_THE_WRITERS_OWN, AsOf
from clinicalc.library.history import History
from clinicalc.library.history_table import NOT_PROVED, write_history_csv
from clinicalc.library.written_files import put_file
from clinicalc.operations.course import Course
from clinicalc.operations.model_card import ModelCard
from clinicalc.operations.vetting_desk import VettingDesk
from clinicalc.report.phrases import count_words
from clinicalc.units.days import day_words

_TO_LOOK_BACK = "A day beside “As of” shows which models answered at its end."


class HistoryDeed(WorkingDeed):
    """Reads the library when it is first shown. What is saved is what is shown: the records, or the day."""

    def __init__(self, card: ModelCard | None, desk: VettingDesk, errands: Errands, choose_save: ChooseSave) -> None:
        about = "the library" if card is None else f"{card.title} {card.version}"
        self.pane = HistoryPane(f"History of {about}")
        super().__init__(self.pane, self.pane, errands)
        self._card, self._desk, self._choose = card, desk, choose_save
        self._history: History | None = None
        self._day: AsOf | None = None
        self.pane.left.connect(self.leave)
        self.pane.day_asked.connect(self._look_back)
        self.pane.all_asked.connect(self._show_all)
        self.pane.csv_asked.connect(self._save_csv)
        self.pane.pdf_asked.connect(self._save_pdf)
        self.pane.csv.setEnabled(False)
        self.pane.pdf.setEnabled(False)

    def focus_first(self) -> None:
        """The focus to the entries; what they are is read now."""
        super().focus_first()
        if self._history is None and not self._is_working:
            self._read()

    def _read(self) -> None:
        desk = self._desk
        fingerprint = None if self._card is None else self._card.fingerprint
        self.work("Reading the history", lambda course: desk.history(fingerprint, course), self._take)

    def _take(self, history: History) -> None:
        self._history, self._day = history, None
        self._show(
            entries_of_history(history), f"{count_words(len(history.rows), 'record')}. {NOT_PROVED} {_TO_LOOK_BACK}"
        )

    def _show_all(self) -> None:
        self.pane.settle()
        self.pane.day.edit.clear()
        if self._history is None:
            self._read()
        else:
            self._take(self._history)

    def _look_back(self) -> None:
        desk = self._desk
        self.pane.settle()
        try:
            day = self.pane.day.day()
        except ClinicalcError as error:
            self.pane.refuse(error, self.pane.day.edit)
            return
        self.work(
            "Looking back",
            lambda course: desk.as_of(day, course),
            self._take_day,
            lambda _: self.pane.day.edit,
        )

    def _take_day(self, found: AsOf) -> None:
        self._day = found
        self._show(entries_of_day(found), say_day(found))

    def _show(self, entries: tuple[HistoryEntry, ...], says: str) -> None:
        self.pane.says.setText(says)
        self.pane.entries.show_entries(entries)
        self.pane.csv.setEnabled(self._day is None)
        self.pane.entries.setFocus()

    def _save_csv(self) -> None:
        history = self._history
        if history is None or self._day is not None:
            return
        path = self._choose(self, Wanted.CSV, f"{self._name()}.csv")
        if path is not None:
            self._save(path, lambda _: put_file(path, write_history_csv(history), "the history", may_replace=True))

    def _save_pdf(self) -> None:
        from clinicalc.operations.vetting_prints import write_as_of_pdf, write_history_pdf

        history, day, about = self._history, self._day, "" if self._card is None else self._named(self._card)
        if history is None and day is None:
            return
        path = self._choose(self, Wanted.PDF, f"{self._name()}.pdf")
        if path is None:
            return

        desk = self._desk

        def write(course: Course) -> None:
            opened = desk.opened(course)
            course.say("Writing the pages")
            # the dialog asked before a file is replaced
            if day is not None:
                write_as_of_pdf(path, opened, day, replace=True)
            elif history is not None:
                write_history_pdf(path, opened, history, about, replace=True)

        self._save(path, write)

    def _save(self, path: Path, write: Callable[[Course], None]) -> None:
        def say(_: None) -> None:
            self.pane.csv.setEnabled(self._day is None)
            self.pane.tell(f"Saved as {path.name}.")

        self.work("Saving", write, say)

    def _name(self) -> str:
        what = "library" if self._card is None else f"{self._card.id}-{self._card.version}"
        if self._day is not None:
            return f"as-of-{self._day.day.isoformat()}"
        return f"history-{what}-{self._desk.clock().date().isoformat()}"

    @staticmethod
    def _named(card: ModelCard) -> str:
        return f"{card.title} {card.version}"


def say_day(found: AsOf) -> str:
    """What was so at the end of the day, in a sentence, and what its dates are worth."""
    day = day_words(found.day)
    if not found.founded:
        said = f"At the end of {day} there was no library yet."
    elif not found.models:
        said = f"At the end of {day} no model had been installed."
    else:
        answered = sum(one.answered for one in found.models)
        said = f"At the end of {day}, {answered} of {count_words(len(found.models), 'model')} answered."
    return f"{said} {DATES_ARE_THE_WRITERS_OWN}"
