"""What of the settings file could not be taken, line by line, and the leave to write it anew."""

from PySide6.QtCore import Qt, Signal
from PySide6.QtWidgets import QFrame, QVBoxLayout

from clinicalc.gui.labels import make_button, make_label
from clinicalc.report.phrases import count_words

_UNTIL = (
    "The file is left as it is, so what is changed here holds until the program is closed. Mend the lines and open"
    " this page again; or let the file be written anew with what is in force now. What stands in it is then kept"
    " beside it, as settings-1.toml or the next number that is free."
)


class FileProblems(QFrame):
    """In a heavy frame over the settings, where there is something to say."""

    agreed = Signal()
    """The file may be written anew."""

    def __init__(self) -> None:
        super().__init__()
        self.setObjectName("stop")
        self.title = make_label("", semibold=True)
        self.lines = make_label("")
        self.agree = make_button("Keep a cop&y and write the file anew")
        column = QVBoxLayout(self)
        column.setContentsMargins(14, 10, 14, 12)
        column.setSpacing(8)
        for label in (self.title, self.lines, make_label(_UNTIL)):
            column.addWidget(label)
        column.addWidget(self.agree, 0, Qt.AlignmentFlag.AlignLeft)
        self.agree.clicked.connect(self.agreed)
        self.hide()

    def show_problems(self, problems: tuple[str, ...]) -> None:
        """One line for each; nothing is shown where there are none."""
        said = count_words(len(problems), "thing")
        self.title.setText(f"{said} in the settings file could not be taken")
        self.lines.setText("\n".join(problems))
        self.setVisible(bool(problems))
