"""An item of the documentation is answered, in the words that the coefficient file will have."""

from clinicalc.development.fit_documentation import Item
from clinicalc.gui.errands import Errands
from clinicalc.gui.form import Form
from clinicalc.gui.form_deed import FormDeed
from clinicalc.operations.study_draft import StudyDraft, changed
from clinicalc.operations.study_draft_model import answers_of, with_answer


class AnswerDeed(FormDeed):
    """`done` has the StudyDraft with the answer; an answer that is left empty is taken away."""

    def __init__(self, draft: StudyDraft, place: int, errands: Errands) -> None:
        form = Form(
            "Answer an item",
            "What a reader of a model needs to know beside its figures. What nobody answered is said to be missing.",
            "&Set",
        )
        answers = answers_of(draft.tree)
        self._answers = dict(answers)
        items = dict.fromkeys([*(item.value for item in Item), *self._answers])
        self.item = form.add_choice("&Item", [(f"{item[:1].upper()}{item[1:]}", item) for item in items])
        self.answer = form.add_text("&Answer", longest=4000)
        super().__init__(form, errands)
        self._draft = draft
        wanted = answers[place][0] if 0 <= place < len(answers) else self._first_open(items)
        self.item.chooser.show_place(max(0, self.item.chooser.findData(wanted)))
        self.item.chooser.currentIndexChanged.connect(lambda _: self._fill())
        self._fill()

    def begin(self) -> None:
        """Put it into the draft."""
        item = str(self.item.chooser.currentData())
        self.done.emit(changed(self._draft, with_answer(self._draft.tree, item, self.answer.text)))

    def _first_open(self, items: dict[str, None]) -> str:
        return next((item for item in items if item not in self._answers), next(iter(items)))

    def _fill(self) -> None:
        self.answer.edit.setText(self._answers.get(str(self.item.chooser.currentData()), ""))
        self.answer.edit.setCursorPosition(0)
