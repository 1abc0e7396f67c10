"""The founding as a list of steps, each with one line that says how far it is."""

from PySide6.QtCore import Qt, Signal
from PySide6.QtWidgets import QGridLayout

from clinicalc.coefficients.fingerprint import group_fingerprint
from clinicalc.gui.labels import CommandButton, make_button, make_label, make_line, make_rule
from clinicalc.gui.practice.sheet_page import SheetPage
from clinicalc.gui.typeface import HEADLINE, UNIT
from clinicalc.library.keys import decode_public, key_id
from clinicalc.operations.founding_steps import FoundingPlan

STEPS = ("Practice and folder", "Your own key", "Who may approve what", "Practice key")
_VERBS = ("Name t&hem", "&Make it", "&Choose", "Make it and &found")
_SAYS = (
    "Four steps, in this order; each can be left and taken up again. Nothing is founded before the last. A key that "
    "was made stays: if the window is closed in between, name its file again and go on."
)


class StepsPage(SheetPage):
    """What is settled can be changed until the founding; a step whose turn has not come cannot be begun."""

    asked = Signal(int)
    """The step that is to be begun or changed, from 0."""

    def __init__(self, plan: FoundingPlan) -> None:
        super().__init__("Found a library for this practice", _SAYS, leave="&Back")
        self.states = _states(plan)
        due = next((place for place, state in enumerate(self.states) if not state), len(STEPS))
        grid = QGridLayout()
        grid.setHorizontalSpacing(14)
        grid.setVerticalSpacing(2)
        grid.setColumnStretch(1, 1)
        self.buttons: list[CommandButton] = []
        for place, name in enumerate(STEPS):
            row = 3 * place
            grid.addWidget(make_rule(), row, 0, 1, 3)
            grid.addWidget(make_line(str(place + 1), HEADLINE, semibold=True), row + 1, 0)
            grid.addWidget(make_label(name, semibold=True, soft=place > due), row + 1, 1)
            state = self.states[place] or ("To do now" if place == due else "After the step before it")
            grid.addWidget(make_label(state, UNIT, soft=place != due), row + 2, 1)
            button = make_button(_VERBS[place] if place >= due else f"Change &{place + 1}")
            button.setObjectName("primary" if place == due else "")
            button.setEnabled(place <= due)
            button.setAccessibleName(f"{name}: {button.text().replace('&', '')}")
            button.setAccessibleDescription(state)
            button.clicked.connect(lambda _=False, step=place: self.asked.emit(step))
            self.buttons.append(button)
            grid.addWidget(button, row + 1, 2, 2, 1, Qt.AlignmentFlag.AlignVCenter)
        self.rows.addLayout(grid)
        self.first = self.buttons[min(due, len(STEPS) - 1)]


def _states(plan: FoundingPlan) -> tuple[str, str, str, str]:
    """One line a step, "" where it is still to be done; the last is always, since it ends the list."""
    place = f"{plan.practice}, in {plan.place}" if plan.place is not None else ""
    own = ""
    if plan.approver is not None:
        id = group_fingerprint(key_id(decode_public(plan.approver.key)), 3)
        own = f"{plan.approver.name} ({plan.approver.role}), key {id}…"
    rule = ""
    if plan.author_may_approve is not None:
        rule = (
            "Whoever made or brought a file may approve it too"
            if plan.author_may_approve
            else "Somebody else than who made or brought a file must approve it"
        )
    return place, own, rule, ""
