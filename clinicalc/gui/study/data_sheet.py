"""The step Data: which study and which people, how many, what is wrong with them, what the columns mean."""

from clinicalc.coefficients.schema import NumberPredictor
from clinicalc.cohort.checked import CheckedCohort, SurvivalOutcome
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
from clinicalc.gui.study.study_state import OpenedStudy, StudyState

_BEGIN = (
    "A study file says in TOML which people a model is fitted to, what their columns mean, and which terms the model"
    " has. Open one, or begin from a file of people: a study file is then proposed. The data stay in the file they came"
    " from, and nothing is written unless you say so."
)


def make_data_sheet(state: StudyState) -> StepSheet:
    """The sheet as the study stands."""
    if state.draft is not None:
        return make_draft_data_sheet(state.draft, state.not_opened)
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
    _add_people(sheet, opened)
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


def _add_people(sheet: StepSheet, opened: OpenedStudy) -> None:
    if opened.cohort is None:
        assert opened.fault is not None  # one of the two is there
        sheet.add_heading(f"{opened.study.dictionary.file} was not read")
        sheet.add_stated(state_refusal(opened.fault))
        return
    sheet.add_heading("People")
    sheet.add_lines(tuple(_people_lines(opened.cohort)))
    stated = state_problems(opened.cohort.problems)
    sheet.add_heading(f"Problems: {count_stated(stated)}" if stated else "No problems found")
    if stated:
        sheet.add_stated(stated)
    if opened.cohort.stops:
        sheet.add_words("Nothing is fitted before the stops are seen to.", semibold=True)


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
