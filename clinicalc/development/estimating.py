"""The equations of a study fitted to its people: knots laid, terms made, screened, fitted, or all that forbids it.

A Cox fit takes competing events as censored. Each fit uses the complete cases among those to whom it applies, or, where
the study says [imputation], those who lack only what can be filled in.
"""

from collections.abc import Iterator, Mapping
from dataclasses import dataclass, replace

import numpy as np

from clinicalc.assessment.model import Model
from clinicalc.cohort.checked import CheckedCohort, Column
from clinicalc.cohort.course import UNWATCHED, Course
from clinicalc.development.description import Description
from clinicalc.development.estimating_faults import say_refused, say_stops
from clinicalc.development.estimating_imputed import estimate_imputed
from clinicalc.development.estimating_one import estimate_one
from clinicalc.development.fit import Fit
from clinicalc.development.fit_ground import Estimated, Ground
from clinicalc.development.package import check_before_fits
from clinicalc.development.places import spell_place
from clinicalc.development.study import Study
from clinicalc.development.study_figures import FitFigures
from clinicalc.development.study_imputation import fill_values, lacks_values
from clinicalc.development.study_knots import lay_knots
from clinicalc.development.study_optimism import add_optimism
from clinicalc.development.study_people import FitPeople, choose_people, ready_model
from clinicalc.development.study_strata import FitPlan
from clinicalc.development.study_tables import ImputationTable
from clinicalc.development.study_terms import answers_of, write_out
from clinicalc.errors import DescriptionRefused, FitRefused, Problem


@dataclass(frozen=True, slots=True, eq=False)
class FittedStudy:
    """A study with its fits by equation id; `description` has its terms written out, knots among them.

    `figures` are one a fit, in the order of the study; `people` those each fit was made from, `predictors` the linear
    predictor of each of them, by the id of the fit. `sets` are the people used once for each set of filled-in values,
    in the order of `people.used`, none where nothing was filled in; `predictors` are then means over the sets.
    """

    study: Study
    cohort: CheckedCohort
    description: Description
    model: Model
    fits: Mapping[str, Fit]
    figures: tuple[FitFigures, ...]
    people: Mapping[str, FitPeople]
    predictors: Mapping[str, Column]
    remarks: tuple[str, ...]
    sets: Mapping[str, tuple[FitPeople, ...]]


def estimate_study(study: Study, cohort: CheckedCohort, course: Course = UNWATCHED) -> FittedStudy:
    """Every fit of the study. Raises DescriptionRefused with everything that forbids one, and Stopped."""
    _refuse(study, [Problem("cohort", stop.sentence) for stop in cohort.stops])
    model = ready_model(study.name, study.content)
    fill = study.imputation is not None
    people = {plan.id: choose_people(model, plan, cohort, fill=fill) for plan in study.fits}
    _refuse(study, [problem for plan in study.fits for problem in _find_nobody(plan, people[plan.id])])
    described = _with_knots(study, model, people)
    content, problems = check_before_fits(described)
    _refuse(study, problems)
    assert content is not None  # what could not be built was refused
    model = ready_model(study.name, content)
    found, sets = _estimate_plans(study, model, cohort, people, course)
    course.say("Fitting", len(study.fits), len(study.fits))
    return FittedStudy(
        study=study,
        cohort=cohort,
        description=described,
        model=model,
        fits={id: fit for one in found for id, fit in zip(one.figures.equations, one.fits, strict=True)},
        figures=tuple(one.figures for one in found),
        people=people,
        predictors={one.figures.id: one.linear_predictor for one in found},
        remarks=(*_remark_uncovered(cohort, people), *(remark for one in found for remark in one.remarks)),
        sets=sets,
    )


def _estimate_plans(
    study: Study, model: Model, cohort: CheckedCohort, people: Mapping[str, FitPeople], course: Course
) -> tuple[list[Estimated], dict[str, tuple[FitPeople, ...]]]:
    """Every fit with its optimism, and the people of its sets of filled-in values, by its id."""
    found: list[Estimated] = []
    sets: dict[str, tuple[FitPeople, ...]] = {}
    faults: list[Problem] = []
    for place, plan in enumerate(study.fits):
        course.say(f"Fitting {plan.id}", place, len(study.fits))
        ground = Ground(plan, model, cohort, people[plan.id], course)
        try:
            # figures out of the range of numbers are refused by what comes of them
            with np.errstate(all="ignore"):
                estimated, grounds = estimate_plan(ground, study.imputation)
            if not (faults or any(say_stops(estimated.figures.screened, ground))):
                estimated = add_optimism(grounds, estimated, study.bootstrap, course)
        except FitRefused as refused:
            faults += say_refused(refused, ground)
            continue
        except DescriptionRefused as refused:
            faults += refused.problems
            continue
        faults += say_stops(estimated.figures.screened, ground)
        found.append(estimated)
        sets[plan.id] = () if grounds == (ground,) else tuple(each.people for each in grounds)
    _refuse(study, faults)
    return found, sets


def estimate_plan(ground: Ground, table: ImputationTable | None) -> tuple[Estimated, tuple[Ground, ...]]:
    """One fit, and what it was made from: the ground itself, or those of the sets of values filled in, where any were.

    Raises FitRefused for the ground itself, DescriptionRefused where values or a horizon are at fault, and Stopped.
    """
    if table is None:
        return estimate_one(ground), (ground,)
    if not lacks_values(ground):
        estimated = estimate_one(ground)
        told = f"{ground.plan.id}: nobody lacks a value that could be filled in, so nothing was filled in."
        return replace(estimated, remarks=(*estimated.remarks, told)), (ground,)
    filling = fill_values(ground, table)
    return estimate_imputed(ground, filling), filling.grounds


def _remark_uncovered(cohort: CheckedCohort, people: Mapping[str, FitPeople]) -> Iterator[str]:
    """People to whom no equation applies: what decides it is missing, or has an answer that none is for."""
    count = cohort.rows - sum(len(part.rows) for part in people.values())
    if count:
        who = "1 person is" if count == 1 else f"{count:,} people are"
        yield f"{who} in no fit: no equation applies, because what decides which one does is missing."


def _refuse(study: Study, problems: list[Problem] | tuple[Problem, ...]) -> None:
    if problems:
        raise DescriptionRefused(study.name, tuple(dict.fromkeys(problems)))


def _find_nobody(plan: FitPlan, people: FitPeople) -> Iterator[Problem]:
    path = f"estimate.{plan.id}"
    if not len(people.rows):
        yield Problem(path, "it applies to nobody in the file. Check the answers in applies_when and [cohort.columns].")
    elif not people.complete.any():
        yield Problem(
            path,
            f"of the {len(people.rows):,} people to whom it applies nobody has the outcome and every value it needs.",
        )


def _with_knots(study: Study, model: Model, people: Mapping[str, FitPeople]) -> Description:
    """The description with every shorthand written out; knots lie where the people of each fit have them."""
    answers = answers_of(study.description.model)
    plan_of = {id: plan for plan in study.fits for id in plan.equations}
    faults: list[Problem] = []
    equations = []
    for place, equation in enumerate(study.description.equations):
        plan = plan_of[str(equation["id"])]
        knots = lay_knots(equation, people[plan.id])
        for number, fault in knots.faults:
            path = spell_place(f"/equations/{place}/terms/{number}/knots", study.description.model)
            faults.append(Problem(path, fault))
        equations.append(write_out(equation, answers, knots.find))
    _refuse(study, faults)
    ids = [str(equation["id"]) for equation in equations]
    return replace(
        study.description, model={**study.description.model, "equations": equations}, fits=dict.fromkeys(ids)
    )
