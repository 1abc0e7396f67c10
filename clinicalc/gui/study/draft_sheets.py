"""The steps Data and Model while a study file is being written: what it says so far, and what can be changed in it."""

from collections.abc import Mapping

from clinicalc.assessment.numerals import join_words
from clinicalc.cohort.dictionary import DataDictionary
from clinicalc.gui.study.data_words import COLUMNS, COVARIANCES, KINDS, column_facts, count, outcome_lines, span_words
from clinicalc.gui.study.fact_rows import Fact, FactColumn
from clinicalc.gui.study.fitting_kinds import usual_ties
from clinicalc.gui.study.method_words import HANDLED, draft_lines, penalty_line
from clinicalc.gui.study.refusal_words import state_refusal
from clinicalc.gui.study.step_sheet import StepSheet
from clinicalc.gui.study.steps import Ask
from clinicalc.gui.study.study_state import Refusal
from clinicalc.gui.study.term_words import describe_term, name_term
from clinicalc.operations.study_draft import StudyDraft, entry_of, plan_of, table_of
from clinicalc.operations.study_draft_methods import methods_of
from clinicalc.operations.study_draft_model import about_of, answers_of, terms_of, which_competes

_TERMS = (FactColumn("Term"), FactColumn("What it is"))
_ANSWERS = (FactColumn("Item"), FactColumn("Answer"))
_SAVE_FIRST = (
    "It is not saved yet. When it is saved it is read like any study file, and everything wrong with it is said."
)


def make_draft_data_sheet(draft: StudyDraft, refusal: Refusal | None) -> StepSheet:
    """Every column of the file of people with what it is taken for, and why."""
    sheet = _begin("Data", draft, refusal)
    plan = plan_of(draft)
    sheet.add_heading("Outcome")
    sheet.add_lines(tuple(outcome_lines(plan)))
    sheet.add_heading("Columns of the file")
    entries = tuple(entry_of(draft, column) for column in draft.columns)
    facts = column_facts(DataDictionary(draft.file, plan, entries), _units_of(draft), with_reasons=True)
    table = sheet.add_table("Columns of the file", COLUMNS, facts)
    table.go_to(0)
    table.entered.connect(lambda place: sheet.asked.emit(Ask.COLUMN, place))
    sheet.add_asks((("&Change the column…", Ask.COLUMN), ("&Leave the changes", Ask.LEAVE)), table)
    return sheet


def make_draft_model_sheet(draft: StudyDraft, refusal: Refusal | None) -> StepSheet:
    """What the model is, its terms, and how it is fitted."""
    sheet = _begin("Model", draft, refusal)
    about = about_of(draft.tree)
    sheet.add_lines(
        tuple(
            (name, says or "not said yet")
            for name, says in (
                ("Title", about.title),
                ("Outcome", about.outcome),
                ("In plain words", about.plain),
                ("Population", about.population),
                ("Setting", about.setting),
                ("Caution", about.caution),
                ("Source", about.citation),
            )
        )
    )
    sheet.add_asks((("Say &what it is…", Ask.ABOUT),))
    sheet.add_heading("Terms")
    terms = terms_of(draft.tree)
    facts = [Fact((name_term(term, place), describe_term(term))) for place, term in enumerate(terms)]
    table = sheet.add_table("Terms", _TERMS, facts)
    table.go_to(0)
    if not terms:
        sheet.add_words("There are no terms yet.", soft=True)
    asks = (("&Add a term…", Ask.ADD_TERM), *((("R&emove the term", Ask.REMOVE_TERM),) if terms else ()))
    sheet.add_asks(asks, table)
    sheet.add_heading("How it is fitted")
    sheet.add_lines(tuple(_fitting_lines(draft)))
    sheet.add_asks((("&How it is fitted…", Ask.FITTING), ("M&issing values and optimism…", Ask.METHODS)))
    sheet.add_heading("Documentation")
    answers = [Fact(answer) for answer in answers_of(draft.tree)]
    sheet.add_words("What the fit itself answers is filled in when the file is made.", soft=True)
    answered = sheet.add_table("Documentation", _ANSWERS, answers) if answers else None
    if answered is not None:
        answered.entered.connect(lambda place: sheet.asked.emit(Ask.ANSWER, place))
    sheet.add_asks((("A&nswer an item…", Ask.ANSWER), ("&Leave the changes", Ask.LEAVE)), answered)
    return sheet


def add_refusal(sheet: StepSheet, refusal: Refusal) -> None:
    """Everything for which a file was not opened."""
    stated = state_refusal(refusal.error)
    sheet.add_heading(f"{refusal.name} was not opened: {count(len(stated), 'problem')}")
    sheet.add_stated(stated)


def say_lost_comments(draft: StudyDraft) -> str:
    """Which comments a saving under the same name loses."""
    parts = join_words([f"“{name}”" for name in draft.lost_comments])
    return f"The study file has comments in {parts}, which is changed: they are lost when it is saved."


def _begin(title: str, draft: StudyDraft, refusal: Refusal | None) -> StepSheet:
    name = "a new study file" if draft.path is None else draft.path.name
    sheet = StepSheet(title, f"{name}, people from {draft.file}, being written")
    if refusal is not None:
        add_refusal(sheet, refusal)
    if not draft.is_saved:
        sheet.add_words(_SAVE_FIRST, semibold=True)
    if draft.lost_comments:
        sheet.add_words(say_lost_comments(draft))
    if len(_equations(draft)) > 1:
        sheet.add_words(
            "It has several equations. The first is changed here; of the others only a penalty that was offered, and "
            "all else in an editor."
        )
    return sheet


def _fitting_lines(draft: StudyDraft) -> list[tuple[str, str]]:
    equations = _equations(draft)
    equation = equations[0] if equations else {}
    table = table_of(draft.tree, "estimate", str(equation.get("id", "")))
    horizons = equation.get("horizons")
    spans = [_span(one) for one in horizons if isinstance(one, Mapping)] if isinstance(horizons, list) else []
    kind = str(table.get("kind", ""))
    covariance = str(table.get("covariance", "robust" if kind == "fine-gray" else "model"))
    lines = [("Fit", KINDS.get(kind, kind or "not said yet"))]
    if usual_ties(kind):
        lines.append(("Ties", str(table.get("ties", usual_ties(kind))).capitalize()))
    if "penalty" in table:
        lines.append(("Penalty", penalty_line(str(table["penalty"]), table.get("ridge_strength"))))
    by = f": column {table['cluster']}" if "cluster" in table else ""
    lines.append(("Covariance", f"{COVARIANCES.get(covariance, covariance)}{by}"))
    which = which_competes(draft.tree)
    if which:
        handled = str(table_of(equation, "competing_events").get("handled", ""))
        lines.append(("Competing events", f"{which}; {HANDLED.get(handled, handled)}"))
    elif kind == "fine-gray":
        lines.append(("Competing events", "none yet, and this fit needs them: change the column of what ended it"))
    lines.append(("Horizons", ", ".join(spans) or "not said yet"))
    methods = methods_of(draft.tree)
    return [*lines, *draft_lines(methods.imputation, methods.bootstrap)]


def _span(horizon: Mapping[str, object]) -> str:
    if "years" in horizon:
        return f"{horizon['years']} year{'' if horizon['years'] == 1 else 's'}"
    return f"{horizon.get('time', '?')} {span_words(str(horizon.get('unit', '?')))}"


def _equations(draft: StudyDraft) -> list[Mapping[str, object]]:
    found = draft.tree.get("equations")
    return [one for one in found if isinstance(one, dict)] if isinstance(found, list) else []


def _units_of(draft: StudyDraft) -> dict[str, str]:
    found = draft.tree.get("predictors")
    listed = [one for one in found if isinstance(one, dict)] if isinstance(found, list) else []
    return {str(one.get("id")): str(one["unit"]) for one in listed if "unit" in one}
