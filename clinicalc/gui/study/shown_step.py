"""The sheet of the step that is shown: made anew when the study changes, what was in sight and the focus kept."""

from collections.abc import Callable

from PySide6.QtCore import QCoreApplication, QEvent, Qt

from clinicalc.gui.right_stack import RightStack
from clinicalc.gui.study.data_sheet import make_data_sheet
from clinicalc.gui.study.fit_sheet import make_fit_sheet
from clinicalc.gui.study.model_sheet import make_model_sheet
from clinicalc.gui.study.package_sheet import make_package_sheet
from clinicalc.gui.study.step_sheet import StepSheet
from clinicalc.gui.study.steps import Ask, Step
from clinicalc.gui.study.study_state import StudyState
from clinicalc.gui.study.update_sheet import make_update_sheet
from clinicalc.gui.study.validation_sheet import make_validation_sheet

_ROUNDS = 3
"""What is inside may ask for more room once it knows its own."""
_SHEETS: dict[Step, Callable[[StudyState], StepSheet]] = {
    Step.DATA: make_data_sheet,
    Step.MODEL: make_model_sheet,
    Step.FIT: make_fit_sheet,
    Step.VALIDATION: make_validation_sheet,
    Step.UPDATE: make_update_sheet,
    Step.PACKAGE: make_package_sheet,
}


class ShownStep:
    """`sheet` stands at the base of `right`, another one after each `show`; `ask` answers what is asked on it."""

    def __init__(self, right: RightStack, state: StudyState, ask: Callable[[Ask, int], None]) -> None:
        self._right = right
        self._ask = ask
        self.sheet = make_data_sheet(state)
        right.show_base(self.sheet)

    def show(self, step: Step, state: StudyState) -> None:
        """Show the study in a step; where it was shown before, what was in sight stays so."""
        before, focused = self.sheet, self._right.window().focusWidget()
        had_focus = focused is not None and before.isAncestorOf(focused)
        scrolled = before.verticalScrollBar().value() if before.title.text() == step.title else 0
        self.sheet = _SHEETS[step](state)
        self.sheet.asked.connect(self._ask)
        self._right.show_base(self.sheet)
        self._right.removeWidget(before)
        before.hide()
        before.deleteLater()
        if had_focus:
            self.sheet.focus_first()
        if scrolled:
            for _ in range(_ROUNDS):
                QCoreApplication.sendPostedEvents(None, QEvent.Type.LayoutRequest.value)
            self.sheet.verticalScrollBar().setValue(scrolled)

    def go_back(self, ask: Ask | None, place: int) -> None:
        """The focus to where something was asked for: the row of a column, else the button; None for the sheet."""
        if ask is Ask.COLUMN and self.sheet.tables:
            self.sheet.tables[0].go_to(place)
            self.sheet.tables[0].setFocus(Qt.FocusReason.OtherFocusReason)
        elif ask is not None and ask in self.sheet.buttons:
            self.sheet.buttons[ask].setFocus(Qt.FocusReason.OtherFocusReason)
        else:
            self.sheet.focus_first()
