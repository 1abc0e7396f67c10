"""The beginning: a machine that uses no library yet, and the ways to one."""

from PySide6.QtCore import Qt, Signal
from PySide6.QtWidgets import QVBoxLayout

from clinicalc.gui.labels import CommandButton, make_button, make_rule
from clinicalc.gui.practice.sheet_page import SheetPage
from clinicalc.gui.text_link import LINK_PADDING, TextLink
from clinicalc.operations.founding_steps import MachineStands

_SAYS = (
    "A practice keeps the coefficient files it uses in a library: which version is in use, who approved it, and when "
    "it is to be looked at again. This machine uses none yet. Until then files can be opened for trying out; what they "
    "give is marked as not vetted."
)


class StartPage(SheetPage):
    """Two ways side by side in weight, and a third in small letters."""

    found_asked = Signal()
    join_asked = Signal()
    bundle_asked = Signal()

    def __init__(self, stands: MachineStands) -> None:
        super().__init__("No model library yet", _SAYS, leave="&Back" if stands.has_joined else "")
        if stands.has_joined:
            self.title.setText("Use another library")
            self.says.setText(
                f"This machine uses the library in {stands.place}. One that is founded or joined now takes its place "
                "here; the former is left as it is, and other machines go on using it."
            )
        elif stands.place is not None:
            self.title.setText("This machine has not joined its library")
            self.says.setText(
                f"The library {stands.place} is named, but no key is pinned here that speaks for the practice. Join "
                "it: whoever keeps the practice key reads its id aloud."
            )
        for problem in stands.problems:
            self.add_words(problem, semibold=True)
        self.found = self._add_way(
            "&Found a library for this practice",
            "For the first machine of a practice. You make the practice key, a key of your own, and a folder that the "
            "other machines reach too. About ten minutes.",
        )
        self.join = self._add_way(
            "&Join the practice’s library",
            "For every further machine. You need the folder, and somebody who reads the practice key’s id aloud.",
        )
        self.bundle = TextLink("Bring in an exported library, on a machine that does not reach the practice’s folder")
        self.rows.addSpacing(14)
        self.rows.addWidget(self.bundle, 0, Qt.AlignmentFlag.AlignLeft)
        self.bundle.setContentsMargins(LINK_PADDING, 0, 0, 0)
        self.found.clicked.connect(self.found_asked)
        self.join.clicked.connect(self.join_asked)
        self.bundle.clicked.connect(self.bundle_asked)
        waits = stands.place is not None and not stands.has_joined
        self.first = self.join if waits else self.found

    def _add_way(self, name: str, says: str) -> CommandButton:
        button = make_button(name)
        column = QVBoxLayout()
        column.setSpacing(6)
        column.addWidget(make_rule())
        column.addSpacing(4)
        column.addWidget(button, 0, Qt.AlignmentFlag.AlignLeft)
        self.rows.addLayout(column)
        self.add_words(says, soft=True)
        return button
