"""The step Model: what the study file says of the model, its equations and how each is fitted."""

from collections.abc import Iterator, Mapping

from msgspec import UnsetType

from clinicalc.coefficients.schema import ChoicePredictor, NumberPredictor, Predictor
from clinicalc.coefficients.spans import span_of
from clinicalc.development.study_strata import FitPlan
from clinicalc.gui.study.data_words import COVARIANCES, KINDS
from clinicalc.gui.study.draft_sheets import make_draft_model_sheet
from clinicalc.gui.study.fact_rows import Fact, FactColumn
from clinicalc.gui.study.fitting_kinds import usual_ties
from clinicalc.gui.study.held_sheet import make_held_sheet
from clinicalc.gui.study.method_words import HANDLED, method_lines, table_penalty
from clinicalc.gui.study.step_sheet import StepSheet
from clinicalc.gui.study.steps import Ask
from clinicalc.gui.study.study_state import OpenedStudy, StudyState
from clinicalc.gui.study.term_words import describe_term, name_term
from clinicalc.units.unit import unit as unit_of

_TERMS = (FactColumn("Term"), FactColumn("What it is"))
_PREDICTORS = (FactColumn("Id"), FactColumn("Label"), FactColumn("Unit or answers"), FactColumn("Derivation range"))


def make_model_sheet(state: StudyState) -> StepSheet:
    """The sheet as the study stands."""
    if state.draft is not None:
        return make_draft_model_sheet(state.draft, state.not_opened)
    if state.people_only is not None:
        return make_held_sheet(state.people_only)
    opened = state.opened
    if opened is None:
        return StepSheet("Model", "Open a study file first: it says which terms the model has.")
    content = opened.study.content
    sheet = StepSheet("Model", f"{content.title}, version {content.version}")
    sheet.add_lines(tuple(_head_lines(opened)))
    equations = {str(tree.get("id")): tree for tree in opened.study.description.equations}
    for plan in opened.study.fits:
        sheet.add_heading(f"Equation {plan.id}" if len(opened.study.fits) > 1 else "How it is fitted")
        sheet.add_lines(tuple(_plan_lines(plan, opened)))
        terms = equations.get(plan.equations[0], {}).get("terms") if plan.equations else None
        listed = terms if isinstance(terms, list) else []
        facts = [Fact((name_term(term, place), describe_term(term))) for place, term in enumerate(listed)]
        sheet.add_table(f"Terms of the equation {plan.id}", _TERMS, facts)
    sheet.add_heading("Missing values and optimism")
    sheet.add_lines(tuple(method_lines(opened.study.imputation, opened.study.bootstrap)))
    sheet.add_heading("Values that are asked for")
    derivations = _derivations(opened)
    facts = [_predictor_fact(predictor, derivations) for predictor in content.predictors]
    sheet.add_table("Predictors", _PREDICTORS, facts)
    sheet.add_words("The model is changed in the study file: here, or in an editor and read again.", soft=True)
    sheet.add_asks((("&Change the study…", Ask.CHANGE),))
    return sheet


def plan_words(plan: FitPlan) -> str:
    """How an equation is fitted, in a word: "Cox"."""
    return KINDS[plan.table.kind].partition(" ")[0]


def count_terms(opened: OpenedStudy) -> int:
    """The terms of all equations, as the study file has them."""
    equations = {str(tree.get("id")): tree for tree in opened.study.description.equations}
    found = [equations.get(plan.equations[0], {}).get("terms") for plan in opened.study.fits if plan.equations]
    return sum(len(terms) for terms in found if isinstance(terms, list))


def _head_lines(opened: OpenedStudy) -> Iterator[tuple[str, str]]:
    content = opened.study.content
    yield "Id", content.id
    yield "Outcome", content.outcome
    yield "Population", content.use.population


def _plan_lines(plan: FitPlan, opened: OpenedStudy) -> Iterator[tuple[str, str]]:
    table = plan.table
    yield "Fit", KINDS[table.kind]
    if usual_ties(table.kind):
        yield "Ties", (usual_ties(table.kind) if isinstance(table.ties, UnsetType) else table.ties).capitalize()
    if table_penalty(table):
        yield "Penalty", table_penalty(table)
    by = "" if isinstance(table.cluster, UnsetType) else f": column {table.cluster}"
    yield "Covariance", f"{COVARIANCES[table.covariance_kind]}{by}"
    if not isinstance(table.strata, UnsetType):
        yield "Strata", f"a baseline for each answer of {table.strata}"
    equation = next(one for one in opened.study.content.equations if one.id in plan.equations)
    spans = [span.words for horizon in equation.horizons if (span := span_of(horizon)) is not None]
    if spans:
        yield "Horizons", ", ".join(spans)
    if len(plan.equations) == 1 and equation.applies_when:
        conditions = [f"{id} is {' or '.join(answers)}" for id, answers in equation.applies_when.items()]
        yield "People", "; ".join(conditions)
    competing = equation.competing_events
    which = "" if isinstance(competing.which, UnsetType) else f"{competing.which}; "
    yield "Competing events", f"{which}{HANDLED[competing.handled]}"


def _derivations(opened: OpenedStudy) -> Mapping[str, object]:
    """What the study file itself says of derivation ranges; what it leaves out comes from the people."""
    parts = opened.study.description.model.get("predictors")
    found = [part for part in parts if isinstance(part, dict)] if isinstance(parts, list) else []
    return {str(part.get("id")): part.get("derivation") for part in found}


def _predictor_fact(predictor: Predictor, derivations: Mapping[str, object]) -> Fact:
    if isinstance(predictor, NumberPredictor):
        stated = derivations.get(predictor.id)
        ends = stated if isinstance(stated, list) and len(stated) == 2 else None
        words = "from the people used" if ends is None else " to ".join("open" if e is None else f"{e:g}" for e in ends)
        return Fact((predictor.id, predictor.label, unit_of(predictor.unit).spelling, words))
    if isinstance(predictor, ChoicePredictor):
        return Fact((predictor.id, predictor.label, ", ".join(choice.label for choice in predictor.choices), ""))
    return Fact((predictor.id, predictor.label, "yes, no", ""))
