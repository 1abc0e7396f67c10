"""Founding, step 3: whether whoever made or brought a file may approve it too."""

from PySide6.QtCore import Signal

from clinicalc.assessment.fields import AnswerOption
from clinicalc.errors import UsageError
from clinicalc.gui.errands import Errands
from clinicalc.gui.form import Form
from clinicalc.gui.form_deed import FormDeed, refuse_at
from clinicalc.operations.founding_steps import FoundingPlan

_TWO, _ONE = "two people", "one person"
_ANSWERS = (AnswerOption(_TWO, "Somebody else must"), AnswerOption(_ONE, "The same person may"))


class RuleForm(FormDeed):
    """One question, nothing chosen at first; both answers are explained."""

    settled = Signal(bool)
    """Whether the author may approve."""

    def __init__(self, errands: Errands, plan: FoundingPlan) -> None:
        form = Form(
            "Who may approve what",
            "Step 3 of 4. The practice key signs this rule. It can be changed later, with the practice key and a "
            "reason, and every machine then knows it.",
            "&Continue",
        )
        super().__init__(form, errands)
        self.rule = form.add_question("Who &approves a file that somebody made or brought?", _ANSWERS)
        form.add_words("Somebody else must (recommended)", semibold=True)
        form.add_words(
            "A second person sees what the first overlooks, and a slip in a coefficient is hard to see in one’s own "
            "work. A file that you install then waits until another approver is appointed and approves it. A file that "
            "a publisher trusted here has signed is not yours, and you may approve it alone."
        )
        form.add_words("The same person may", semibold=True)
        form.add_words(
            "For a practice in which only one person can judge a model: nothing would ever come into use otherwise. "
            "Each such approval says that it was given by whoever made or brought the file."
        )
        if plan.author_may_approve is not None:
            self.rule.choose(_ONE if plan.author_may_approve else _TWO)
        self.rule.entered.connect(form.asked)

    def begin(self) -> None:
        """The answer that was chosen."""
        answer = self.rule.answer
        if answer is None:
            nothing = UsageError("nothing is chosen.", do="Choose one of the two answers; the text under them helps.")
            refuse_at(nothing, self.rule)
        self.settled.emit(answer == _ONE)
