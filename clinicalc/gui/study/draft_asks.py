"""What is asked for on the sheets of a study file that is being written: a form, or at once another draft."""

from clinicalc.gui.errands import Errands
from clinicalc.gui.form_deed import FormDeed
from clinicalc.gui.study.about_deed import AboutDeed
from clinicalc.gui.study.answer_deed import AnswerDeed
from clinicalc.gui.study.column_deed import ColumnDeed
from clinicalc.gui.study.fitting_deed import FittingDeed
from clinicalc.gui.study.methods_deed import MethodsDeed
from clinicalc.gui.study.steps import Ask
from clinicalc.gui.study.term_deed import TermDeed
from clinicalc.operations.study_draft import StudyDraft, changed
from clinicalc.operations.study_draft_model import terms_of, with_terms


def answer(ask: Ask, place: int, draft: StudyDraft, errands: Errands) -> FormDeed | StudyDraft | None:
    """The form, the draft, or None where nothing comes of it. Leaving the draft is the page's own."""
    if ask is Ask.COLUMN:
        return ColumnDeed(draft, draft.columns[place], errands) if 0 <= place < len(draft.columns) else None
    if ask is Ask.ABOUT:
        return AboutDeed(draft, errands)
    if ask is Ask.ADD_TERM:
        return TermDeed(draft, errands)
    if ask is Ask.ANSWER:
        return AnswerDeed(draft, place, errands)
    if ask is Ask.FITTING:
        return FittingDeed(draft, errands)
    if ask in (Ask.FIRTH, Ask.RIDGE):
        return FittingDeed(draft, errands, equation=max(0, place), penalty=ask.value)
    if ask is Ask.METHODS:
        return MethodsDeed(draft, errands)
    if ask is Ask.REMOVE_TERM:
        terms = terms_of(draft.tree)
        if 0 <= place < len(terms):
            return changed(draft, with_terms(draft.tree, [*terms[:place], *terms[place + 1 :]]))
    return None
