"""The right side of a step: a title, and under it whatever is added, in a scroll area; made anew with its contents."""

from collections.abc import Sequence

from PySide6.QtCore import QPoint, Qt, Signal
from PySide6.QtWidgets import QHBoxLayout, QLabel, QPushButton, QVBoxLayout, QWidget

from clinicalc.gui.labels import Heading, make_button, make_label
from clinicalc.gui.models.named_lines import NamedLine, NamedLines
from clinicalc.gui.scroller import Scroller
from clinicalc.gui.study.fact_rows import Fact, FactColumn, FactRows
from clinicalc.gui.study.fact_table import FactTable
from clinicalc.gui.study.problem_list import ProblemList, Stated
from clinicalc.gui.study.steps import Ask
from clinicalc.gui.tokens import SHEET_MARGIN, SHEET_MARGIN_RIGHT
from clinicalc.gui.typeface import TITLE, UNIT

_NAMES = 190


class StepSheet(Scroller):
    """Parts are added from top to bottom, which is the order of the tab key too. The arrow keys scroll it."""

    asked = Signal(object, int)
    """An Ask, and the place in the table that it is about, −1 for none."""

    def __init__(self, title: str, says: str = "") -> None:
        super().__init__()
        self.setObjectName("sheet_scroll")
        self.setAccessibleName(title)
        self.setWidgetResizable(True)
        self.setFocusPolicy(Qt.FocusPolicy.StrongFocus)
        self.setHorizontalScrollBarPolicy(Qt.ScrollBarPolicy.ScrollBarAlwaysOff)
        self.title = make_label(title, TITLE, semibold=True)
        self.tables: list[FactTable] = []
        self.buttons: dict[Ask, QPushButton] = {}
        self.texts: list[QLabel] = []
        self._inside = QWidget()
        self._inside.setObjectName("sheet")
        column = QVBoxLayout(self._inside)
        column.setContentsMargins(SHEET_MARGIN, 18, SHEET_MARGIN_RIGHT, 20)
        column.setSpacing(0)
        self._rows = QVBoxLayout()
        self._rows.setSpacing(8)
        self._rows.addWidget(self.title)
        column.addLayout(self._rows)
        column.addStretch(1)
        self.setWidget(self._inside)
        if says:
            self.add_words(says, soft=True)

    @property
    def words(self) -> str:
        """Everything that stands in it as text, for whoever reads rather than sees."""
        said = [label.text() for label in self._inside.findChildren(QLabel)]
        tables = self._inside.findChildren(FactTable)
        cells = [cell for table in tables for fact in table.rows.facts for cell in (*fact.cells, fact.note)]
        return "\n".join((*said, *cells))

    def add_heading(self, words: str) -> None:
        """A heading over what follows."""
        self._rows.addSpacing(8)
        self._rows.addWidget(Heading(words))

    def add_words(self, words: str, *, soft: bool = False, semibold: bool = False) -> QLabel:
        """A sentence over the whole width."""
        label = make_label(words, UNIT if soft else 15, soft=soft, semibold=semibold)
        label.setTextInteractionFlags(Qt.TextInteractionFlag.TextSelectableByMouse)
        self._rows.addWidget(label)
        self.texts.append(label)
        return label

    def add_lines(self, lines: Sequence[tuple[str, str]]) -> None:
        """Names, and what is said of each."""
        self._rows.addWidget(NamedLines([NamedLine(name, says) for name, says in lines], name_width=_NAMES))

    def add_stated(self, stated: Sequence[Stated]) -> ProblemList:
        """Graded sentences as footnotes."""
        listed = ProblemList(stated)
        self._rows.addWidget(listed)
        return listed

    def add_table(self, name: str, columns: Sequence[FactColumn], facts: Sequence[Fact]) -> FactTable:
        """A table of facts."""
        table = FactTable(FactRows(columns, facts), name)
        self.watch_table(table)
        self.tables.append(table)
        self._rows.addWidget(table)
        return table

    def watch_table(self, table: FactTable) -> None:
        """A table within a part that is added: its rows are kept in sight too."""
        table.row_reached.connect(lambda top, high: self._follow(table, top, high))

    def add_asks(self, asks: Sequence[tuple[str, Ask]], table: FactTable | None = None, place: int = -1) -> None:
        """Buttons beside each other that ask for something; about the row of the table that was gone to, or `place`."""
        holder = QWidget()
        row = QHBoxLayout(holder)
        row.setContentsMargins(0, 2, 0, 2)
        row.setSpacing(10)
        for words, ask in asks:
            button = make_button(words, pixels=UNIT)
            button.clicked.connect(
                lambda _=False, ask=ask: self.asked.emit(ask, place if table is None else table.place)
            )
            row.addWidget(button)
            self.buttons.setdefault(ask, button)
        row.addStretch(1)
        self._rows.addWidget(holder)

    def add_widget(self, widget: QWidget) -> None:
        """Anything else."""
        self._rows.addWidget(widget)

    def focus_first(self) -> None:
        """The focus to the sheet, where the arrow keys scroll."""
        self.setFocus(Qt.FocusReason.ShortcutFocusReason)

    def _follow(self, table: FactTable, top: int, high: int) -> None:
        """Keep the row in sight that an arrow key led to."""
        middle = table.mapTo(self._inside, QPoint(0, 0)).y() + top + high // 2
        self.ensureVisible(0, middle, 0, high // 2 + 12)
