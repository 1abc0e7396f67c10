"""What the field of a place names, looked at once: as soon as the field is left, or before the deed."""

from collections.abc import Callable
from pathlib import Path
from typing import Generic, TypeVar

from PySide6.QtCore import QTimer

from clinicalc.errors import ClinicalcError
from clinicalc.gui.form_fields import PlaceField
from clinicalc.gui.practice.looking_form import LookingForm

_Found = TypeVar("_Found")


class LookedAt(Generic[_Found]):
    """For a form. `look` runs as an errand; `show` is told what was found, and None when another place is typed."""

    def __init__(
        self,
        form: LookingForm,
        place: PlaceField,
        title: str,
        look: Callable[[Path], _Found],
        show: Callable[[_Found | None], None],
    ) -> None:
        self._form, self._place, self._title = form, place, title
        self._look_at, self._show = look, show
        self._seen = ""
        self.found: _Found | None = None
        """What lies at the place that is typed; None until it was looked at."""
        place.edit.editingFinished.connect(self.look_again)
        place.edit.textEdited.connect(self.forget)

    def require(self, path: Path) -> _Found | None:
        """What lies at `path`. None where that has yet to be looked at: then the deed is asked for once more after."""
        if self.found is None or str(path) != self._seen:
            self._look(path, go_on=True)
            return None
        return self.found

    def look_again(self) -> None:
        """Look at the place that is typed, if it is another one than before."""
        try:
            path = self._place.path()
        except ClinicalcError:
            return  # said when the deed is asked for
        if str(path) != self._seen:
            self._look(path, go_on=False)

    def forget(self) -> None:
        """Another place is typed."""
        self._seen, self.found = "", None
        self._show(None)

    def _look(self, path: Path, *, go_on: bool) -> None:
        form, look = self._form, self._look_at

        def done(found: _Found) -> None:
            self._seen, self.found = str(path), found
            form.form.settle()
            self._show(found)
            if go_on:
                QTimer.singleShot(0, form, form.ask)  # the errand itself ends after this

        def failed(error: ClinicalcError) -> None:
            self.forget()
            form.form.refuse(error, self._place.edit)

        form.look(self._title, lambda _: look(path), done, failed)
