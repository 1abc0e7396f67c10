"""The line of state of each step."""

from collections.abc import Mapping

from clinicalc.gui.study.data_words import count, counts_line
from clinicalc.gui.study.model_sheet import count_terms, plan_words
from clinicalc.gui.study.steps import Step, StepLine
from clinicalc.gui.study.study_state import StudyState
from clinicalc.gui.study.validation_lines import update_line, validation_line
from clinicalc.operations.study_draft_model import terms_of


def step_lines(state: StudyState) -> Mapping[Step, StepLine]:
    """What is said of every step."""
    return {
        Step.DATA: _data(state),
        Step.MODEL: _model(state),
        Step.FIT: _fit(state),
        Step.VALIDATION: validation_line(state.validating),
        Step.UPDATE: update_line(state.validating),
        Step.PACKAGE: _package(state),
    }


def _data(state: StudyState) -> StepLine:
    if state.draft is not None:
        return StepLine(f"being written, {count(len(state.draft.columns), 'column')}")
    people_only = state.people_only
    if state.opened is None and people_only is None:
        return StepLine("not opened" if state.not_opened else "not started")
    cohort = None if state.opened is None else state.opened.cohort
    if people_only is not None and people_only.people is not None:
        cohort = people_only.people.cohort
    if cohort is None:
        return StepLine("people not read")
    if cohort.stops:
        return StepLine(f"{count(len(cohort.stops), 'stop')} in the data")
    return StepLine(counts_line(cohort), is_done=True)


def _model(state: StudyState) -> StepLine:
    if state.draft is not None:
        return StepLine(f"being written, {count(len(terms_of(state.draft.tree)), 'term')}")
    if state.people_only is not None:
        content = state.people_only.model.content
        return StepLine(f"{content.id} {content.version}", is_done=True)
    opened = state.opened
    if opened is None:
        return StepLine()
    kinds = " and ".join(dict.fromkeys(plan_words(plan) for plan in opened.study.fits))
    return StepLine(f"{kinds[:1].upper()}{kinds[1:]}, {count(count_terms(opened), 'term')}", is_done=True)


def _fit(state: StudyState) -> StepLine:
    if state.people_only is not None and state.fit is None:
        return StepLine("none here")
    if state.not_fitted is not None:
        return StepLine("refused" if state.fit is None else "refused; the fit before stays")
    if state.fit is None:
        return StepLine()
    return StepLine("of earlier data" if state.is_stale else "converged", is_done=not state.is_stale)


def _package(state: StudyState) -> StepLine:
    if state.not_packaged is not None:
        return StepLine("refused")
    if state.written is not None:
        return StepLine(state.written.name, is_done=True)
    return StepLine("ready to be written" if state.package is not None else "not started")


def name_of(state: StudyState) -> str:
    """What the study is called: its file's name."""
    if state.draft is not None:
        return "a new study file" if state.draft.path is None else f"{state.draft.path.name}, being changed"
    return "" if state.path is None else state.path.name
