"""The second field of a question: the same answers, narrower; the patient's own stands there until one is chosen."""

from PySide6.QtWidgets import QWidget

from clinicalc.assessment.entry import Typed
from clinicalc.assessment.fields import QuestionField
from clinicalc.gui.changed_place import BESIDE_WIDTH, ChangedPlace
from clinicalc.gui.segments import Segments


class ChangedAnswer(ChangedPlace):
    """Holds the changed answer. Choosing the patient's own answer is no change."""

    def __init__(self, field: QuestionField) -> None:
        self.segments = Segments(field.options, f"{field.label}, with changes", BESIDE_WIDTH)
        super().__init__(field.label, self.segments, self.segments.segments)
        self._field = field
        self._own: str | None = None
        self._answer: str | None = None
        self.segments.set_soft(True)
        self.segments.chosen.connect(self._take_answer)
        self.segments.entered.connect(self.entered)

    @property
    def typed(self) -> Typed | None:
        """The changed answer, None where there is none."""
        return None if self._answer is None else Typed(self._answer)

    def fill(self, typed: Typed | None) -> None:
        """Show a changed answer or none, without telling anybody."""
        self._answer = None if typed is None else self.segments.answer_meant(typed.text)
        self._show()

    def stand_beside(self, own: str | None) -> None:
        """Follow the patient's own answer."""
        self._own = own
        self._show()

    def words(self) -> str:
        """The patient's own answer."""
        own = next((option.label for option in self._field.options if option.id == self._own), "")
        if not own:
            return "No answer is entered yet."
        return f"As entered “{own}”.{' Escape goes back to it.' if self._differs else ''}"

    def describe(self) -> None:
        """What the note says, without the name; every answer says it, since each of them may take the focus."""
        words = self.note() if self._said or self._open else self.words()
        self.segments.setAccessibleDescription(words)
        for segment in self.segments.segments:
            segment.setAccessibleDescription(words)

    def give_up(self) -> None:
        """Choose nothing else than the patient's own answer."""
        if self._answer is not None:
            self._answer = None
            self._show()
            self.segments.setFocus()
            self.retyped.emit()

    def fits_beside(self) -> bool:
        """Whether all answers stand side by side in the narrow frame."""
        return self.segments.fits_in(BESIDE_WIDTH)

    def set_width(self, width: int) -> None:
        """Take this width, or one answer under the other where they have no room side by side."""
        self.segments.set_narrowest(width)
        self.segments.fit(width)

    def tab_stops(self) -> tuple[QWidget, ...]:
        """All answers, of which one at a time is the stop."""
        return self.segments.segments

    @property
    def _differs(self) -> bool:
        return self._answer is not None and self._answer != self._own

    def _take_answer(self, id: str) -> None:
        self._answer = None if id == self._own else id
        self._show()
        self.retyped.emit()

    def _show(self) -> None:
        self.segments.choose(self._answer or self._own)
        self.segments.set_soft(not self._differs)
        self.arrow.point(self._differs)
        self.describe()
