"""The publishers trusted on this machine: a list, with the forms that add to it and revoke from it."""

from PySide6.QtCore import QTimer
from PySide6.QtWidgets import QHBoxLayout, QVBoxLayout, QWidget

from clinicalc.coefficients.fingerprint import group_fingerprint
from clinicalc.errors import ClinicalcError
from clinicalc.gui.access_keys import show_ampersands
from clinicalc.gui.deedlike import Deedlike
from clinicalc.gui.errands import Errands
from clinicalc.gui.file_choosing import ChooseOpen
from clinicalc.gui.labels import make_button, make_label, make_rule
from clinicalc.gui.practice.errand_in_turn import run_in_turn
from clinicalc.gui.practice.publisher_forms import RevokePublisherForm, TrustPublisherForm
from clinicalc.gui.practice.sheet_page import SheetPage, exchange
from clinicalc.gui.typeface import UNIT
from clinicalc.gui.window_words import sentence_of
from clinicalc.library.trust_store import Publisher
from clinicalc.operations.practice_founding import publishers
from clinicalc.units.days import day_words

_SAYS = (
    "Whoever is on this list can sign coefficient files, and a valid signature stands in for the fingerprint that "
    "would otherwise be typed. The list is this machine’s own."
)


class PublishersForm(Deedlike):
    """`left` comes from the list; `written` after every change of it."""

    def __init__(self, errands: Errands, choose_open: ChooseOpen) -> None:
        super().__init__()
        self._errands, self._choose = errands, choose_open
        self.page: SheetPage | Deedlike | None = None
        """What is shown now: the list, or one of its forms."""
        self._column = QVBoxLayout(self)
        self._column.setContentsMargins(0, 0, 0, 0)
        self.show_list()

    def focus_first(self) -> None:
        """The focus to the first thing that can be done."""
        if self.page is not None:
            self.page.focus_first()

    def forget(self) -> None:
        """No passphrase is asked for here."""

    def show_list(self) -> None:
        """Read the list and show it."""
        page = SheetPage("Publishers trusted on this machine", _SAYS, leave="&Back")
        page.left.connect(self.left)
        add = make_button("&Trust another publisher…", name="primary")
        add.clicked.connect(self.show_trusting)
        page.foot.addWidget(add)
        page.first = add
        self._show(page)
        waiting = page.add_words("Reading the list…", soft=True)

        def show(found: tuple[Publisher, ...]) -> None:
            waiting.setText("" if found else "No publisher is trusted on this machine yet.")
            waiting.setVisible(not found)
            for place, publisher in enumerate(found):
                page.rows.addWidget(self._tell(publisher, place + 1))

        def fail(error: ClinicalcError) -> None:
            waiting.setText(sentence_of(error))

        run_in_turn(self._errands, page, "Reading the list of publishers", lambda _: publishers(), show, fail)

    def show_trusting(self) -> None:
        """The form that adds to the list."""
        self._show_form(TrustPublisherForm(self._errands, self._choose))

    def show_revoking(self, publisher: Publisher) -> None:
        """The form that takes somebody's trust away."""
        self._show_form(RevokePublisherForm(self._errands, publisher))

    def _tell(self, publisher: Publisher, number: int) -> QWidget:
        told = QWidget()
        words = QVBoxLayout()
        words.setSpacing(1)
        is_trusted = publisher.revoked is None
        words.addWidget(make_label(publisher.card.name, semibold=is_trusted, soft=not is_trusted))
        words.addWidget(make_label(group_fingerprint(publisher.card.id), UNIT, soft=True))
        since = f"Trusted since {day_words(publisher.added.astimezone().date())}"
        if publisher.revoked is not None:
            since = f"Revoked {day_words(publisher.revoked.astimezone().date())}: its signatures do not count here"
        words.addWidget(make_label(since, UNIT, soft=is_trusted))
        row = QHBoxLayout()
        row.setSpacing(14)
        row.addLayout(words, 1)
        if is_trusted:
            button = make_button(f"&{number} Revoke…")
            button.setAccessibleName(f"Revoke {show_ampersands(publisher.card.name)}")
            button.clicked.connect(lambda: self.show_revoking(publisher))
            row.addWidget(button)
        whole = QVBoxLayout(told)
        whole.setContentsMargins(0, 0, 0, 0)
        whole.setSpacing(8)
        whole.addWidget(make_rule())
        whole.addLayout(row)
        return told

    def _show_form(self, form: Deedlike) -> None:
        form.left.connect(self.show_list)
        form.done.connect(self._take_change)
        self._show(form)

    def _take_change(self, _: object) -> None:
        QTimer.singleShot(0, self, self.show_list)  # it begins an errand, and the one before ends after this
        self.written.emit()

    def _show(self, page: SheetPage | Deedlike) -> None:
        before, self.page = self.page, page
        exchange(self._column, before, page)
        if self.isVisible():
            self.focus_first()
