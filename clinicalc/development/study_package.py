"""A fitted study made into a coefficient file: what its people answer is filled in, examples are proved."""

import re
from dataclasses import replace

import numpy as np

from clinicalc.cohort.course import UNWATCHED, Course
from clinicalc.development.description import Description
from clinicalc.development.estimating import FittedStudy
from clinicalc.development.package import Package, package_model
from clinicalc.development.study_cautions import with_cautions
from clinicalc.development.study_documentation import document_study, with_documentation
from clinicalc.development.study_patients import make_patients
from clinicalc.development.study_population import with_populations
from clinicalc.development.study_ranges import (
    remark_other_figures,
    with_horizon_figures,
    with_ranges,
    with_source_figures,
)
from clinicalc.errors import DescriptionRefused, Problem


def package_fitted(fitted: FittedStudy, course: Course = UNWATCHED) -> Package:
    """The coefficient file of a fitted study, proved. Raises DescriptionRefused with every problem, and Stopped.

    What the study says itself stays as it says it: ranges, a population, people for examples, documentation.
    """
    course.say("Describing the people", 0, 2)
    with np.errstate(all="ignore"):  # figures out of the range of numbers are refused by the rules of the file
        described, remarks = complete(fitted)
    course.say("Working the examples", 1, 2)
    try:
        package = package_model(described, fits=fitted.fits)
    except DescriptionRefused as refused:
        problems = (Problem(re.sub(r"^fit\.", "estimate.", said.path), said.message) for said in refused.problems)
        raise DescriptionRefused(refused.name, tuple(problems)) from None
    course.say("Working the examples", 2, 2)
    return replace(package, remarks=(*package.remarks, *fitted.remarks, *remarks))


def complete(fitted: FittedStudy) -> tuple[Description, tuple[str, ...]]:
    """The description with everything that its people answer, and remarks about what they could not."""
    model = with_ranges(fitted, dict(fitted.description.model))
    model = with_source_figures(fitted, with_horizon_figures(fitted, model))
    other = tuple(remark_other_figures(fitted, model))
    model, remarks = with_populations(fitted, model)
    remarks = (*other, *remarks)
    model = with_cautions(fitted, with_documentation(fitted, model))
    patients = fitted.description.patients or make_patients(fitted)
    unanswered = document_study(fitted).unanswered
    if unanswered:
        remarks = (*remarks, say_unanswered(unanswered))
    return replace(fitted.description, model=model, patients=patients, fits={}), remarks


def say_unanswered(items: tuple[str, ...]) -> str:
    """The remark that names the items of the documentation which nobody answered."""
    return f"The documentation does not answer: {', '.join(items)}. Answers go into [[documentation]]."
