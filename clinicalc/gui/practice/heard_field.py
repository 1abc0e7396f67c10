"""The field for an id that is read aloud, with a verdict that runs along and shows no digit."""

from PySide6.QtCore import Qt
from PySide6.QtGui import QAccessible, QAccessibleAnnouncementEvent

from clinicalc.errors import KeyRefused, UsageError
from clinicalc.gui.form import Form
from clinicalc.gui.form_deed import refuse_at
from clinicalc.operations.read_aloud import Heard, KeyToHear

_LONGEST = 400
_WIDTH = 590
"""In which all sixteen groups are in sight."""
NOT_LOOKED_AT = "What it says of itself stands here once it is named above."
UNPROVED = "This is what it says of itself. Nothing of it is proved until all 64 digits agree."


class HeardField:
    """Field and verdict in a form; `expect` says with which key what is typed is compared."""

    def __init__(self, form: Form, name: str) -> None:
        self.field = form.add_text(
            name,
            says="Sixteen groups of four, as the person who keeps the key reads them.",
            width=_WIDTH,
            longest=_LONGEST,
        )
        self.edit = self.field.edit
        self.edit.setInputMethodHints(Qt.InputMethodHint.ImhNoPredictiveText | Qt.InputMethodHint.ImhNoAutoUppercase)
        self.verdict = form.add_words("", semibold=True)
        # a verdict that comes with the first key moves nothing
        self.verdict.setMinimumHeight(self.verdict.fontMetrics().height())
        self._key: KeyToHear | None = None
        self.edit.textChanged.connect(self._judge)

    def expect(self, key: KeyToHear | None) -> None:
        """Compare with this key from now on; None while it is not known."""
        self._key = key
        self._judge()

    def heard(self) -> str:
        """What was typed, once all of it agrees. Refuses at the field otherwise."""
        text = self.field.text
        if not text:
            nothing = UsageError("no id is typed.", do="Have all sixteen groups of four read aloud.")
            refuse_at(nothing, self.edit)
        if self._key is not None:
            heard = self._key.judge(text)
            if not heard.whole:
                what = "the id does not agree." if heard.differs_in else "the id is not whole yet."
                why = heard.says
                refuse_at(KeyRefused(what, why=why, do="Nothing was changed."), self.edit)
        return text

    @property
    def is_whole(self) -> bool:
        """Whether all digits agree."""
        return self._key is not None and self._key.judge(self.field.text).whole

    def _judge(self) -> None:
        heard = Heard("") if self._key is None else self._key.judge(self.field.text)
        if heard.says == self.verdict.text():
            return
        self.verdict.setText(heard.says)
        self.edit.setAccessibleDescription(heard.says)
        if heard.whole or heard.differs_in:
            QAccessible.updateAccessibility(QAccessibleAnnouncementEvent(self.edit, heard.says))
