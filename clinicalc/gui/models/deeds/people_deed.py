"""The people of the practice: who may approve, with which key, and what the practice allows; changed by its own key."""

from PySide6.QtWidgets import QHBoxLayout, QVBoxLayout, QWidget

from clinicalc.coefficients.fingerprint import group_fingerprint
from clinicalc.errors import UsageError
from clinicalc.gui.deedlike import Deedlike
from clinicalc.gui.errands import Errands
from clinicalc.gui.file_choosing import ChooseOpen
from clinicalc.gui.form import Form
from clinicalc.gui.form_deed import FormDeed, refuse_at
from clinicalc.gui.labels import make_button
from clinicalc.gui.models.deeds.entry_list import EntryList
from clinicalc.gui.models.deeds.given import LastKey
from clinicalc.gui.models.deeds.history_entries import HistoryEntry
from clinicalc.gui.models.deeds.people_forms import AppointForm, DismissForm, PeopleForm, PolicyForm, RevokeForm
from clinicalc.gui.typeface import UNIT
from clinicalc.library.keys import decode_public, key_id
from clinicalc.library.records import Approver
from clinicalc.operations.library_view import LibraryView
from clinicalc.operations.practice_desk import PeopleAfter
from clinicalc.operations.vetting_desk import VettingDesk

_LIST_HEIGHT = 250


class PeopleDeed(Deedlike):
    """The list of approvers, and in its place the form of what is changed; then the list again, with what was done."""

    def __init__(self, desk: VettingDesk, errands: Errands, choose: ChooseOpen, last_key: LastKey) -> None:
        super().__init__()
        self._desk, self._errands, self._choose, self._last = desk, errands, choose, last_key
        self.listed = _ListedPeople(desk, errands)
        self.form: PeopleForm | None = None
        self._room = QVBoxLayout(self)
        self._room.setContentsMargins(0, 0, 0, 0)
        self._room.addWidget(self.listed)
        self.listed.left.connect(self.left)
        self.listed.form.asked.disconnect()
        self.listed.form.asked.connect(self._appoint)
        self.listed.dismiss.clicked.connect(self._dismiss)
        self.listed.revoke.clicked.connect(self._revoke)
        self.listed.policy.clicked.connect(self._change_policy)

    def focus_first(self) -> None:
        """The focus to the form, or to the list, which is read now."""
        (self.form or self.listed).focus_first()

    def forget(self) -> None:
        """Empty every passphrase."""
        if self.form is not None:
            self.form.forget()

    def _appoint(self) -> None:
        self._open(AppointForm(self._desk, self._errands, self._choose, self._last))

    def _dismiss(self) -> None:
        chosen = self.listed.chosen()
        if chosen is not None:
            self._open(DismissForm(chosen, self._desk, self._errands, self._choose, self._last))

    def _revoke(self) -> None:
        chosen, view = self.listed.chosen(), self.listed.view
        if chosen is not None and view is not None:
            self._open(RevokeForm(chosen, view, self._desk, self._errands, self._choose, self._last))

    def _change_policy(self) -> None:
        view = self.listed.view
        if view is not None:
            self._open(PolicyForm(view.policy, self._desk, self._errands, self._choose, self._last))

    def _open(self, form: PeopleForm) -> None:
        self._drop()  # a key that was pressed just before may ask a second time
        self.form = form
        self.listed.hide()
        self._room.addWidget(form)
        form.show()
        form.left.connect(self._close)
        form.done.connect(self._take)
        form.focus_first()

    def _take(self, after: PeopleAfter) -> None:
        self._close()
        self.listed.take(after.view, " ".join(after.says))
        self.written.emit()

    def _drop(self) -> None:
        form, self.form = self.form, None
        if form is not None:
            form.forget()
            self._room.removeWidget(form)
            form.hide()
            form.deleteLater()

    def _close(self) -> None:
        self._drop()
        self.listed.show()
        self.listed.entries.setFocus()


class _ListedPeople(FormDeed):
    """The approvers in force, the policy, and what can be done about them."""

    def __init__(self, desk: VettingDesk, errands: Errands) -> None:
        form = Form(
            "People of the practice",
            "Who may install, approve and withdraw models. Only the practice key changes this.",
            "&Appoint…",
        )
        self.said = form.add_words("", semibold=True)
        self.said.hide()
        form.add_heading("Approvers")
        self.entries = EntryList("Approvers")
        self.entries.setFixedHeight(_LIST_HEIGHT)
        form.add_widget(self.entries)
        self.dismiss = make_button("&Dismiss…", pixels=UNIT)
        self.revoke = make_button("Revoke the &key…", pixels=UNIT)
        self.policy = make_button("Change the p&olicy…", pixels=UNIT)
        form.add_widget(_side_by_side(self.dismiss, self.revoke))
        form.add_heading("Policy")
        self.allowed = form.add_words("")
        form.add_widget(_side_by_side(self.policy))
        super().__init__(form, errands)
        self._desk = desk
        self.view: LibraryView | None = None

    def focus_first(self) -> None:
        """The focus to the list; who is in it is read now."""
        self.entries.setFocus()
        if self.view is None and not self._is_working:
            self.work("Reading the library", self._desk.read, self.take)

    def begin(self) -> None:
        """Appointing begins with a form of its own."""
        refuse_at(UsageError("nobody is named yet."), self.form.deed)

    def take(self, view: LibraryView, said: str = "") -> None:
        """Show who is in force, and what was done."""
        self.view = view
        self.said.setText(said)
        self.said.setVisible(bool(said))
        self.entries.show_entries([_entry(approver) for approver in view.approvers])
        may = "may" if view.policy.author_may_approve else "may not"
        self.allowed.setText(
            f"Who made or brought a file {may} approve it. Without the library, a machine works on for"
            f" {view.policy.offline_hours} hours."
        )
        for button in (self.dismiss, self.revoke):
            button.setEnabled(bool(view.approvers))

    def chosen(self) -> Approver | None:
        """The approver chosen in the list."""
        place = self.entries.place
        return self.view.approvers[place] if self.view is not None and 0 <= place < len(self.view.approvers) else None


def _entry(approver: Approver) -> HistoryEntry:
    grouped = group_fingerprint(key_id(decode_public(approver.key)), 3)
    return HistoryEntry(approver.name, "", (approver.role, f"Key {grouped}…"))


def _side_by_side(*widgets: QWidget) -> QWidget:
    room = QWidget()
    row = QHBoxLayout(room)
    row.setContentsMargins(0, 4, 0, 0)
    row.setSpacing(8)
    for widget in widgets:
        row.addWidget(widget)
    row.addStretch(1)
    return room
