"""The step Data: which study and which people, how many, what is wrong with them, what the columns mean."""

from clinicalc.coefficients.schema import NumberPredictor
from clinicalc.cohort.checked import CheckedCohort, SurvivalOutcome
from clinicalc.errors import ClinicalcError
from clinicalc.gui.study.data_words import (
    COLUMNS,
    column_facts,
    count_events,
    outcome_lines,
    span_words,
    state_problems,
)
from clinicalc.gui.study.draft_sheets import add_refusal, make_draft_data_sheet
from clinicalc.gui.study.problem_list import count_stated
from clinicalc.gui.study.refusal_words import state_refusal
from clinicalc.gui.study.step_sheet import StepSheet
from clinicalc.gui.study.steps import Ask
from clinicalc.gui.study.study_state import Refusal, StudyState
from clinicalc.gui.study.validation_state import OpenedValidation

_BEGIN = (
    "A study file says in TOML which people a model is fitted to, what their columns mean, and which terms the model"
    " has. Open one, or begin from a file of people: a study file is then proposed. A validation file, which says which"
    " coefficient file is held against which people, is opened in the same way. The data stay in the file they came"
    " from, and nothing is written unless you say so."
)


def make_data_sheet(state: StudyState) -> StepSheet:
    """The sheet as the study stands."""
    if state.draft is not None:
        return make_draft_data_sheet(state.draft, state.not_opened)
    if state.people_only is not None:
        return make_people_sheet(state.people_only, state.not_opened)
    opened = state.opened
    if opened is None:
        sheet = StepSheet("Data", "" if state.not_opened else _BEGIN)
        if state.not_opened is not None:
            add_refusal(sheet, state.not_opened)
            sheet.add_words(_BEGIN, soft=True)
        return sheet
    sheet = StepSheet("Data", f"{opened.path.name}, people from {opened.study.dictionary.file}")
    if state.not_opened is not None:
        add_refusal(sheet, state.not_opened)
        sheet.add_words(f"What follows is {opened.path.name}, as it was opened before.", semibold=True)
    add_people(sheet, opened.study.dictionary.file, opened.cohort, opened.fault, "fitted")
    dictionary = opened.study.dictionary
    sheet.add_heading("Outcome")
    sheet.add_lines(tuple(outcome_lines(dictionary.outcome)))
    sheet.add_heading("Columns")
    numbers = [one for one in opened.study.content.predictors if isinstance(one, NumberPredictor)]
    units = {one.id: one.unit for one in numbers}
    sheet.add_table("Columns of the file", COLUMNS, column_facts(dictionary, units, with_reasons=False))
    sheet.add_words(
        "What a column means is changed in the study file: here, or in an editor and read again.", soft=True
    )
    sheet.add_asks((("&Change the study…", Ask.CHANGE),))
    return sheet


def add_people(
    sheet: StepSheet, file: str, cohort: CheckedCohort | None, fault: ClinicalcError | None, done: str
) -> None:
    """How many people there are and what is wrong with them, or why they were not read; `done` is what waits for it."""
    if cohort is None:
        assert fault is not None  # one of the two is there
        sheet.add_heading(f"{file} was not read")
        sheet.add_stated(state_refusal(fault))
        return
    sheet.add_heading("People")
    sheet.add_lines(tuple(_people_lines(cohort)))
    stated = state_problems(cohort.problems)
    sheet.add_heading(f"Problems: {count_stated(stated)}" if stated else "No problems found")
    if stated:
        sheet.add_stated(stated)
    if cohort.stops:
        sheet.add_words(f"Nothing is {done} before the stops are seen to.", semibold=True)


def make_people_sheet(opened: OpenedValidation, refusal: Refusal | None) -> StepSheet:
    """The people of a validation file."""
    dictionary = opened.settled.dictionary
    sheet = StepSheet("Data", f"{opened.path.name}, people from {dictionary.file}")
    if refusal is not None:
        add_refusal(sheet, refusal)
        sheet.add_words(f"What follows is {opened.path.name}, as it was opened before.", semibold=True)
    if opened.settled.cohort:
        sheet.add_words(opened.settled.cohort)
    cohort = None if opened.people is None else opened.people.cohort
    add_people(sheet, dictionary.file, cohort, opened.fault, "validated")
    sheet.add_heading("Outcome")
    sheet.add_lines(tuple(outcome_lines(dictionary.outcome)))
    sheet.add_heading("Columns")
    numbers = [one for one in opened.settled.predictors if isinstance(one, NumberPredictor)]
    units = {one.id: one.unit for one in numbers}
    sheet.add_table("Columns of the file", COLUMNS, column_facts(dictionary, units, with_reasons=False))
    sheet.add_words("What a column means is changed in the validation file, in an editor, and read again.", soft=True)
    return sheet


def _people_lines(cohort: CheckedCohort) -> list[tuple[str, str]]:
    events, competing = count_events(cohort)
    lines = [("People", f"{cohort.rows:,}"), ("With the event", f"{events:,}")]
    if competing:
        lines.append(("With a competing event", f"{competing:,}"))
    if isinstance(cohort.outcome, SurvivalOutcome):
        known = cohort.outcome.times[cohort.outcome.times == cohort.outcome.times]
        if len(known):
            lines.append(("Longest time", f"{known.max():,.6g} {span_words(cohort.outcome.unit)}"))
    return lines
