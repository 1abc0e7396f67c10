"""How a model is updated, and what the new version is called: the form before it is worked out."""

from dataclasses import replace

from PySide6.QtWidgets import QWidget

from clinicalc.errors import ClinicalcError, UsageError
from clinicalc.gui.errands import Errands
from clinicalc.gui.form import Form
from clinicalc.gui.form_deed import FormDeed, refuse_at
from clinicalc.gui.study.validation_errands import update_opened
from clinicalc.gui.study.validation_state import MadeUpdate, OpenedValidation
from clinicalc.operations.course import Course
from clinicalc.operations.updating import NewVersion
from clinicalc.operations.validating import choose_wish, name_version
from clinicalc.validation.updated import UpdateMethod
from clinicalc.validation.validated import Validation

_METHODS: tuple[tuple[str, str | None], ...] = (
    ("what a closed test chooses", UpdateMethod.CLOSED_TEST),
    ("a new intercept (the baseline)", UpdateMethod.INTERCEPT),
    ("a new intercept and slope", UpdateMethod.INTERCEPT_SLOPE),
    ("all coefficients anew, terms as they are", UpdateMethod.REFIT),
    ("by groups of predicted risk, on two scales", UpdateMethod.TWO_SCALE),
)
_SHORT = 140


class UpdateDeed(FormDeed):
    """`done` has the MadeUpdate; nothing is written by it."""

    def __init__(self, opened: OpenedValidation, before: Validation | None, errands: Errands) -> None:
        content = opened.model.content
        form = Form(
            "Update the model",
            f"{content.title}, version {content.version}, to the people of {opened.settled.cohort_file.name}. The"
            " figures are worked out and the file of the new version is made; nothing is written yet.",
            "&Update",
        )
        self._opened, self._before = opened, before
        self.method = form.add_choice("Me&thod", _METHODS)
        self.version = form.add_text(
            "&Version",
            says=f"Higher than {content.version}, such as {_next(content.version)}.",
            width=_SHORT,
            longest=40,
        )
        self.cohort = form.add_text(
            "&Who these people are", says="In words, with place and years; it stands in the file.", longest=300
        )
        self.population = form.add_text(
            "&Population", says="Whom the new version is for. Left empty: as the model says.", longest=400
        )
        super().__init__(form, errands)
        self._fill()

    def begin(self) -> None:
        """Work it out."""
        if not self.version.text:
            missing = UsageError("the new version has no name.", do="Write one that is higher than the model’s.")
            refuse_at(missing, self.version.edit)
        if not self.cohort.text:
            nobody = UsageError("nobody says who these people are.", do="Write it in a line: place, years.")
            refuse_at(nobody, self.cohort.edit)
        opened, before, new = self._opened, self._before, self._new()
        wish = choose_wish(opened.settled, UpdateMethod(str(self.method.chooser.currentData())))

        def work(course: Course) -> MadeUpdate:
            return update_opened(opened, wish, new, before, course)

        self.work("Updating", work, self.done.emit, self._at)

    def _new(self) -> NewVersion:
        named = name_version(self._opened.settled, self.version.text)
        return replace(named, cohort=self.cohort.text, population=self.population.text)

    def _fill(self) -> None:
        settled = self._opened.settled
        self.cohort.edit.setText(settled.cohort)
        wished = settled.update
        if wished is not None:
            self.method.chooser.setCurrentIndex(self.method.chooser.findData(wished.wish.method))
            self.version.edit.setText(wished.version)
            self.population.edit.setText(wished.population)

    def _at(self, error: ClinicalcError) -> QWidget:
        return self.version.edit if "version" in str(error) else self.method.chooser


def _next(version: str) -> str:
    """The version with its second number raised, as an example."""
    first, _, rest = version.partition(".")
    second = rest.partition(".")[0]
    return f"{first}.{int(second) + 1}.0" if second.isdecimal() else f"{first}.1.0"
