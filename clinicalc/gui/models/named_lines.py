"""Lines of two columns: what it is in soft ink, and what is said of it."""

import re
from collections.abc import Sequence
from dataclasses import dataclass

from PySide6.QtCore import Qt
from PySide6.QtGui import QResizeEvent
from PySide6.QtWidgets import QGridLayout, QLabel

from clinicalc.assessment.numerals import MINUS
from clinicalc.gui.held_layouts import Block
from clinicalc.gui.labels import make_label
from clinicalc.operations.model_card import Check

NAME_WIDTH = 128
_LEAST_NAME, _NAME_PART = 116, 0.34
CAUTION = "Caution"


@dataclass(frozen=True, slots=True)
class NamedLine:
    """One line. `is_marked` is what a reader must not pass over: name and text are then in semibold ink."""

    name: str
    says: str
    is_marked: bool = False


_IN_BRACKETS = re.compile(r"\([^)]*\)")
_HYPHEN = re.compile(r"(?<![\w.\-])-(?=\d)")


def with_minus(text: str) -> str:
    """A text with figures of a file, which have a hyphen for a minus, as people write them."""
    return _HYPHEN.sub(MINUS, text)


def check_lines(checks: Sequence[Check]) -> tuple[NamedLine, ...]:
    """What was checked; where something is not as it should be, the word of the grade stands before it."""
    return tuple(
        NamedLine(check.name, _short(check) if check.ok else f"{CAUTION}: {check.says}", not check.ok)
        for check in checks
    )


def _short(check: Check) -> str:
    """The documentation's items stand further down with their texts: here how many there are.

    Where the figures of the examples come from stays in one line, which "(8" at the end of another is not.
    """
    if check.name == "Worked examples":
        return _IN_BRACKETS.sub(lambda found: found[0].replace(" ", "\u00a0"), check.says)
    return check.says.partition(":")[0] if check.name == "Documentation" else check.says


class NamedLines(Block):
    """The lines from top to bottom; long texts wrap."""

    def __init__(self, lines: Sequence[NamedLine], *, name_width: int = NAME_WIDTH) -> None:
        super().__init__()
        self.rows: list[tuple[QLabel, QLabel]] = []
        self._name_width = self._width_now = name_width
        grid = self._grid = QGridLayout(self)
        grid.setContentsMargins(0, 0, 0, 0)
        grid.setHorizontalSpacing(0)
        grid.setVerticalSpacing(5)
        grid.setColumnMinimumWidth(0, name_width)
        grid.setColumnStretch(1, 1)
        top = Qt.AlignmentFlag.AlignTop
        for place, line in enumerate(lines):
            name = make_label(line.name, semibold=line.is_marked, soft=not line.is_marked)
            name.setFixedWidth(name_width - 8)
            says = make_label(line.says, semibold=line.is_marked)
            says.setTextInteractionFlags(Qt.TextInteractionFlag.TextSelectableByMouse)
            says.setAccessibleName(f"{line.name}: {line.says}")
            grid.addWidget(name, place, 0, top)
            grid.addWidget(says, place, 1)
            self.rows.append((name, says))
        grid.setRowStretch(len(lines), 1)

    def resizeEvent(self, event: QResizeEvent) -> None:
        """Where there is little room the names take less of it."""
        super().resizeEvent(event)
        width = min(self._name_width, max(_LEAST_NAME, round(_NAME_PART * event.size().width())))
        if width == self._width_now:
            return
        self._width_now = width
        self._grid.setColumnMinimumWidth(0, width)
        for name, _ in self.rows:
            name.setFixedWidth(width - 8)
