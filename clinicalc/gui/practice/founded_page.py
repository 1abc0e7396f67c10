"""After the founding: the id that other machines have to hear, what to do with the practice key, and what is next."""

from PySide6.QtCore import Qt, Signal

from clinicalc.gui.labels import make_button
from clinicalc.gui.practice.key_plate import KeyPlate
from clinicalc.gui.practice.sheet_page import SheetPage
from clinicalc.operations.practice_founding import Founded

NEXT = (
    ("Now", "Copy the practice key’s file to a second stick and put it into the safe with its passphrase on paper."),
    (
        "Then",
        "Take the practice key off this machine. It is needed to appoint or dismiss people, and to change the rule.",
    ),
    (
        "On every other machine",
        "Models, “Join the practice’s library”: choose the folder, and read these sixteen groups aloud, over the "
        "telephone or side by side. Sent along with the folder they would prove nothing.",
    ),
)


class FoundedPage(SheetPage):
    """The plate is shown once more in Settings, so that nobody has to copy it down."""

    next_asked = Signal()
    """A first file is to be installed."""

    def __init__(self, founded: Founded) -> None:
        super().__init__(
            f"The library of {founded.practice} is founded", f"It lies in {founded.place}, and this machine uses it."
        )
        self.plate = KeyPlate(founded.practice_key, f"Id of the practice key of {founded.practice}")
        self.rows.addWidget(self.plate, 0, Qt.AlignmentFlag.AlignLeft)
        for when, what in NEXT:
            self.add_words(when, semibold=True)
            self.add_words(what)
        self.go_on = make_button("&Install a first file", name="primary")
        self.foot.addWidget(self.go_on)
        self.go_on.clicked.connect(self.next_asked)
        self.first = self.go_on
