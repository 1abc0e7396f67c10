"""The place of the trust forms: one stands in for the settings until it is left or done."""

from __future__ import annotations

from typing import TYPE_CHECKING

from PySide6.QtWidgets import QStackedWidget

from clinicalc.gui.errands import Errands
from clinicalc.gui.practice.library_group import TrustForm

if TYPE_CHECKING:
    from collections.abc import Callable

    from clinicalc.gui.deedlike import Deedlike
    from clinicalc.gui.file_choosing import FileChoices

_PATIENCE = 2.0
"""Seconds that a closing window waits for a key that is being made."""


class TrustPlace:
    """Forms are loaded when they are first asked for. `returned` is called when one was left or done."""

    def __init__(self, stack: QStackedWidget, choices: FileChoices | None, returned: Callable[[], None]) -> None:
        """`choices` are the dialogs for files; those of the system where it is None."""
        self._stack, self._choices, self._returned = stack, choices, returned
        self.errands = Errands()
        self.form: Deedlike | None = None

    def show(self, wanted: TrustForm) -> None:
        """Show a form in the place of the settings."""
        self.close()
        form = self.form = self._make(wanted)
        form.left.connect(self._end)
        form.done.connect(lambda _: self._end())
        self._stack.addWidget(form)
        self._stack.setCurrentWidget(form)
        form.focus_first()

    def close(self) -> None:
        """Take the form away, its passphrases first."""
        form, self.form = self.form, None
        if form is not None:
            form.forget()
            self._stack.setCurrentIndex(0)
            self._stack.removeWidget(form)
            form.hide()
            form.deleteLater()

    def leave(self) -> None:
        """The window closes."""
        self.close()
        self.errands.leave()
        self.errands.wait(_PATIENCE)

    def _end(self) -> None:
        self.close()
        self._returned()

    def _make(self, wanted: TrustForm) -> Deedlike:
        from clinicalc.gui.file_choosing import FileChoices

        choices = self._choices or FileChoices()
        if wanted is TrustForm.PUBLISHERS:
            from clinicalc.gui.practice.publishers_form import PublishersForm

            return PublishersForm(self.errands, choices.which)
        if wanted is TrustForm.MAKE_KEY:
            from clinicalc.gui.practice.make_key_form import MakeKeyForm

            return MakeKeyForm(self.errands, choices.where)
        from clinicalc.gui.practice.change_passphrase_form import ChangePassphraseForm

        return ChangePassphraseForm(self.errands, choices.which)
