"""One figure that a file calls unconfirmed: its digits, why, what to compare it with, and who compared it."""

from PySide6.QtCore import Qt, Signal
from PySide6.QtWidgets import QHBoxLayout, QLineEdit, QSizePolicy, QVBoxLayout

from clinicalc.gui.frames import FieldFrame
from clinicalc.gui.held_layouts import Block
from clinicalc.gui.labels import make_field_label, make_label, make_rule
from clinicalc.gui.models.named_lines import with_minus
from clinicalc.gui.text_link import OpenedText, TextLink
from clinicalc.gui.tokens import RING
from clinicalc.gui.typeface import BASE, UNIT, face
from clinicalc.operations.open_figures import MOST_SAID, OpenFigure
from clinicalc.report.phrases import count_words

COMPARED_BY = "Compared by"
NOBODY = "Compared by nobody"
_LONGEST_NAME = 120
"""What a record takes for a name."""
_FIELD, _LEAST_FIELD, _LABEL = 240, 120, 96


class UnconfirmedRow(Block):
    """The figure with a field for a name; without one, where nothing is to be approved, who compared it in words."""

    named = Signal(str)
    """Another name was typed; "" takes the tick off."""
    entered = Signal()
    """Enter was pressed in the field: on to the next figure."""
    same_asked = Signal()
    """The name is to hold for all figures below that have none."""

    def __init__(self, figure: OpenFigure, name: str, *, asks: bool) -> None:
        super().__init__()
        self.figure = figure
        self.what = make_label(f"{figure.what}: {with_minus(figure.figure)}", semibold=True)
        self.why = make_label(figure.why, UNIT)
        self.against = make_label(f"Compare with {figure.check_against}", UNIT)
        for label in (self.what, self.why, self.against):
            label.setTextInteractionFlags(Qt.TextInteractionFlag.TextSelectableByMouse)
        self.parts: TextLink | None = None
        self.edit: QLineEdit | None = None
        self.same = TextLink("Same for all below")
        self.said = make_label(f"{COMPARED_BY} {name}" if name else NOBODY, UNIT, semibold=True)
        column = QVBoxLayout(self)
        column.setContentsMargins(0, 2, 0, 0)
        column.setSpacing(1)
        column.addWidget(self.what)
        if len(figure.parts) > MOST_SAID:  # fewer stand in the first line
            self._offer_parts(column)
        column.addWidget(self.why)
        column.addWidget(self.against)
        if asks:
            column.addLayout(self._make_field(name))
            self.said.setParent(self)
            self.said.hide()
        else:
            column.addWidget(self.said)
            self.same.setParent(self)
        self.same.hide()
        column.addSpacing(3)
        column.addWidget(make_rule())

    def fill(self, name: str) -> None:
        """Show a name that was stated elsewhere, without telling anybody."""
        if self.edit is not None:
            blocked = self.edit.blockSignals(True)
            self.edit.setText(name)
            self.edit.blockSignals(blocked)

    def offer_same(self, name: str, open_below: int) -> None:
        """Offer to write this name into those below that have none; "" offers nothing. Nothing moves by it."""
        if name and open_below:
            self.same.say(f"Same for {open_below} below")
            figures = count_words(open_below, "open figure")
            self.same.setAccessibleName(f"Same name, {name}, for {figures} below")
        self.same.setVisible(bool(name and open_below))

    def _make_field(self, name: str) -> QHBoxLayout:
        self.edit = QLineEdit(name)
        self.edit.setFont(face(BASE))
        self.edit.setMaxLength(_LONGEST_NAME)
        self.edit.setSizePolicy(QSizePolicy.Policy.Expanding, QSizePolicy.Policy.Expanding)
        spoken = f"{COMPARED_BY}, {self.figure.what}"
        self.edit.setAccessibleName(spoken)
        self.edit.setAccessibleDescription(
            f"{self.figure.figure}. {self.figure.why} Compare with {self.figure.check_against}"
        )
        frame = FieldFrame(_FIELD)
        frame.setMinimumWidth(_LEAST_FIELD)
        frame.watch(self.edit)
        inside = QHBoxLayout(frame)
        inside.setContentsMargins(RING + 8, RING + 1, RING + 6, RING + 1)
        inside.addWidget(self.edit)
        label = make_field_label(COMPARED_BY, spoken, self.edit)
        label.setFixedWidth(_LABEL)
        policy = self.same.sizePolicy()
        policy.setRetainSizeWhenHidden(True)
        self.same.setSizePolicy(policy)
        row = QHBoxLayout()
        row.setSpacing(0)
        row.addWidget(label)
        row.addWidget(frame, 1)
        row.addSpacing(8)
        row.addWidget(self.same)
        row.addStretch(0)
        self.edit.textChanged.connect(lambda text: self.named.emit(text.strip()))
        self.edit.returnPressed.connect(self.entered)
        self.same.clicked.connect(self.same_asked)
        return row

    def _offer_parts(self, column: QVBoxLayout) -> None:
        """Several statements stand behind one entry: each with its digits, for those who compare."""
        words = f"Show the {len(self.figure.parts)} figures"
        link = self.parts = TextLink(words)
        text = OpenedText(f"Figures of {self.figure.what}")

        def toggle() -> None:
            opens = text.isHidden()
            text.setVisible(opens)
            link.say("Close the figures" if opens else words)
            text.show_lines([with_minus(": ".join(filter(None, part))) for part in self.figure.parts] if opens else [])

        link.clicked.connect(toggle)
        column.addWidget(link, 0, Qt.AlignmentFlag.AlignLeft)
        column.addWidget(text)
        self.text = text

    def tab_stops(self) -> tuple[QLineEdit | TextLink | OpenedText, ...]:
        """Link and text of the figures behind it, the field, the offer."""
        parts = () if self.parts is None else (self.parts, self.text)
        return (*parts, *(() if self.edit is None else (self.edit, self.same)))
