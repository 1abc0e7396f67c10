"""A coefficient file is looked at, and then installed: the very bytes that were looked at."""

from PySide6.QtWidgets import QWidget

from clinicalc.errors import ClinicalcError, CoefficientFileRefused, UsageError
from clinicalc.gui.errands import Errands
from clinicalc.gui.file_choosing import ChooseOpen, Wanted
from clinicalc.gui.form import Form
from clinicalc.gui.form_deed import FormDeed, read_field, refuse_at
from clinicalc.gui.models.deeds.given import LastKey
from clinicalc.gui.models.deeds.key_fields import KeyFields, check_first, sign
from clinicalc.library.appointing import LONGEST_TEXT
from clinicalc.operations.model_card import ModelCard
from clinicalc.operations.vetting_desk import VettingDesk


class LookDeed(FormDeed):
    """Asks for a file and has it looked at; `card_ready` has what was found, also of one that is there already."""

    def __init__(self, desk: VettingDesk, errands: Errands, choose: ChooseOpen) -> None:
        form = Form(
            "Install a coefficient file",
            "The file is looked at first: its form, its worked examples, its signatures. Nothing is changed by that.",
            "Look at the &file",
        )
        self._place = form.add_place("&Coefficient file", lambda parent: choose(parent, Wanted.COEFFICIENT_FILE))
        self.problems = form.add_words("")
        super().__init__(form, errands)
        self._desk = desk

    def begin(self) -> None:
        """Look at the file."""
        desk = self._desk
        path = read_field(self._place.path, self._place.edit)
        self.problems.setText("")
        self.work("Looking at the file", lambda course: desk.look_at(path, course), self.card_ready.emit, self._at)

    def _at(self, error: ClinicalcError) -> QWidget:
        """The field of the file; all that is wrong with the file is listed under it, however much that is."""
        if isinstance(error, CoefficientFileRefused) and len(error.problems) > 1:
            self.problems.setText("\n".join(str(problem) for problem in error.problems))
        return self._place.edit


class InstallDeed(FormDeed):
    """Installs the file that was looked at, with the key of an approver."""

    def __init__(
        self, card: ModelCard, desk: VettingDesk, errands: Errands, choose: ChooseOpen, last_key: LastKey
    ) -> None:
        form = Form(
            f"Install {card.title} {card.version}",
            "What was looked at is what is installed, byte for byte. It gives no number before it is approved.",
            "I&nstall",
        )
        if card.others:
            form.add_words(_say_others(card))
        self._came_from = form.add_text(
            "Where it &came from",
            says="Such as: its publisher, handed over on a stick. It stands in the history for good.",
            longest=LONGEST_TEXT,
        )
        self._key = KeyFields(form, choose, last_key)
        super().__init__(form, errands)
        self._card, self._desk = card, desk

    def begin(self) -> None:
        """Install it."""
        desk = self._desk
        came_from = self._came_from.text
        if not came_from:
            missing = UsageError("it is not said where the file came from.", do="Say it in a few words.")
            refuse_at(missing, self._came_from.edit)
        card = self._card
        if check_first(
            self,
            self._key,
            lambda key_file, course: desk.check_installation(card, came_from, key_file, course),
        ):
            return
        sign(
            self,
            self._key,
            lambda signer, course: desk.install(card, signer, came_from, course),
            self.done.emit,
        )


def _say_others(card: ModelCard) -> str:
    other = card.others[0]
    more = f" and {len(card.others) - 1} more" if len(card.others) > 1 else ""
    return (
        f"The library holds version {other.version}{more} of this model: {other.says}."
        " What changed between the two stands on the card; “Back” leads there."
    )
