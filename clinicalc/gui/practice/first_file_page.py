"""The first file of a library: what ships with the program, plainly told, or a file of the practice's own."""

from pathlib import Path

from PySide6.QtCore import Qt, Signal
from PySide6.QtWidgets import QHBoxLayout, QVBoxLayout, QWidget

from clinicalc.errors import ClinicalcError
from clinicalc.gui.access_keys import show_ampersands
from clinicalc.gui.errands import Errands
from clinicalc.gui.file_choosing import ChooseOpen, Wanted
from clinicalc.gui.labels import CommandButton, make_button, make_label, make_rule
from clinicalc.gui.practice.errand_in_turn import run_in_turn
from clinicalc.gui.practice.sheet_page import WIDEST, SheetPage
from clinicalc.gui.typeface import UNIT
from clinicalc.gui.window_words import sentence_of
from clinicalc.operations.shipped_models import ShippedModel, list_shipped_models

_SAYS = (
    "The library holds no file yet. Choose one to see its card: its worked examples are recomputed, and it is "
    "installed and approved from there. Unconfirmed figures are to be compared with the source first. Whether a "
    "model suits your patients is for the practice to judge."
)


class FirstFilePage(SheetPage):
    """The shipped files are read in an errand; each is told with its source and what nobody compared with it."""

    chosen = Signal(Path)
    """The file that is to be looked at."""

    def __init__(self, errands: Errands, choose_open: ChooseOpen) -> None:
        super().__init__("Install a first file", _SAYS)
        self._choose = choose_open
        self.buttons: list[CommandButton] = []
        self.waiting = self.add_words("Reading the files that came with the program…", soft=True)
        self.own = make_button("A file of your &own…")
        self.foot.addWidget(self.own)
        self.own.clicked.connect(self._ask)
        self.first = self.own
        run_in_turn(errands, self, "Reading the example files", list_shipped_models, self._show, self._refuse)

    def _show(self, models: tuple[ShippedModel, ...]) -> None:
        self.waiting.hide()
        had_focus = self.own.hasFocus()
        self.rows.addWidget(make_label("Files that came with the program", semibold=True))
        for place, model in enumerate(models):
            self.rows.addWidget(self._tell(model, place + 1))
        self.first = self.buttons[0] if self.buttons else self.own
        if had_focus:
            self.focus_first()

    def _refuse(self, error: ClinicalcError) -> None:
        self.waiting.setText(sentence_of(error))

    def _tell(self, model: ShippedModel, number: int) -> QWidget:
        told = QWidget()
        words = QVBoxLayout()
        words.setSpacing(2)
        for label in (
            make_label(f"{model.title}  {model.version}", semibold=True),
            make_label(model.outcome, UNIT),
            make_label(f"From: {model.source}", UNIT, soft=True),
            make_label(_say_unconfirmed(model.unconfirmed), UNIT, semibold=model.unconfirmed > 0),
        ):
            label.setMaximumWidth(WIDEST)
            words.addWidget(label)
        button = make_button(f"&{number} Look at it")
        button.setAccessibleName(f"Look at {show_ampersands(model.title)} {model.version}")
        button.setAccessibleDescription(_say_unconfirmed(model.unconfirmed))
        button.clicked.connect(lambda: self.chosen.emit(model.path))
        row = QHBoxLayout()
        row.setSpacing(16)
        row.addLayout(words, 1)
        row.addWidget(button, 0, Qt.AlignmentFlag.AlignTop)
        whole = QVBoxLayout(told)
        whole.setContentsMargins(0, 0, 0, 0)
        whole.setSpacing(6)
        whole.addWidget(make_rule())
        whole.addLayout(row)
        self.buttons.append(button)
        return told

    def _ask(self) -> None:
        path = self._choose(self, Wanted.COEFFICIENT_FILE)
        if path is not None:
            self.chosen.emit(path)


def _say_unconfirmed(count: int) -> str:
    if not count:
        return "No figure in it is called unconfirmed."
    return (
        f"{count} unconfirmed {'entry' if count == 1 else 'entries'}: figures that nobody has compared with the source "
        "yet."
    )
