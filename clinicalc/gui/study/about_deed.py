"""What a model is, in the texts that its file holds and a clinician reads."""

from clinicalc.gui.errands import Errands
from clinicalc.gui.form import Form
from clinicalc.gui.form_deed import FormDeed
from clinicalc.operations.study_draft import StudyDraft, changed
from clinicalc.operations.study_draft_model import About, about_of, with_about

_LONG = 2000


class AboutDeed(FormDeed):
    """`done` has the StudyDraft with the texts. What is left empty is said to be missing when the file is read."""

    def __init__(self, draft: StudyDraft, errands: Errands) -> None:
        form = Form("What the model is", "Everything here stands in the coefficient file as it is written.", "&Set")
        about = about_of(draft.tree)
        self.title = form.add_text("&Title", longest=120)
        self.outcome = form.add_text("&Outcome", says="What is predicted, and within which time.", longest=_LONG)
        self.plain = form.add_text("The same in &plain words", says="It stands on the patient’s page.", longest=_LONG)
        self.population = form.add_text("Pop&ulation", longest=_LONG)
        self.setting = form.add_text("S&etting", says="Such as: general practice.", longest=_LONG)
        self.caution = form.add_text("&Caution", says="Shown with every result.", longest=_LONG)
        self.citation = form.add_text("Sou&rce", says="Who fitted it to which people.", longest=_LONG)
        for field, text in (
            (self.title, about.title),
            (self.outcome, about.outcome),
            (self.plain, about.plain),
            (self.population, about.population),
            (self.setting, about.setting),
            (self.caution, about.caution),
            (self.citation, about.citation),
        ):
            field.edit.setText(text)
            field.edit.setCursorPosition(0)
        super().__init__(form, errands)
        self._draft = draft

    def begin(self) -> None:
        """Put the texts into the draft."""
        about = About(
            title=self.title.text,
            outcome=self.outcome.text,
            plain=self.plain.text,
            population=self.population.text,
            setting=self.setting.text,
            caution=self.caution.text,
            citation=self.citation.text,
        )
        self.done.emit(changed(self._draft, with_about(self._draft.tree, about)))
