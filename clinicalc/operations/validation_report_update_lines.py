"""What an update estimated, for the report: intercepts and slopes with limits, refitted terms, groups of two scales."""

from collections.abc import Iterator
from math import sqrt
from statistics import NormalDist

from clinicalc.assessment.model import Model
from clinicalc.assessment.numerals import EN_DASH, NARROW_SPACE
from clinicalc.operations.validation_words import LIMITS, figure_words, share_of_all
from clinicalc.report.contents import Column, Prose, Row, Section, Table
from clinicalc.validation.updated import EquationUpdate, Refit, Update, UpdateMethod

_Z = NormalDist().inv_cdf(0.975)
_LINES = (
    "The new linear predictor is the intercept, plus the slope times the old one; limits from the standard errors, on"
    " the scale of the linear predictor."
)
_STATED = "kept at 1"
_GROUPS = "Each group of like predictions: the mean predicted risk, and the observed one with its standard error."


def tell_estimates(model: Model, update: Update) -> Iterator[Section]:
    """A table of all lines, and of each equation that has them its refitted terms and its groups."""
    lines = [one for one in update.equations if one.lines and one.method is not UpdateMethod.KEEP]
    if lines:
        said = Prose((_LINES,), keep=True)
        yield Section("Intercept and slope", (said, _lines(lines, several=len(update.equations) > 1)), whole=True)
    several = len(update.equations) > 1
    for one in update.equations:
        of = f": {one.id}" if several else ""
        if one.refit is not None:
            yield Section(f"Coefficients{of}", tuple(_refit(model, one, one.refit)))
        if one.groups:
            yield Section(f"Groups of the update{of}", (Prose((_GROUPS,), keep=True), _groups(one)))


def _lines(equations: list[EquationUpdate], *, several: bool) -> Table:
    columns = (
        Column("equation, horizon" if several else "horizon", 0.0, 120.0),
        Column(f"intercept, {LIMITS}", 126.0, 150.0),
        Column(f"slope, {LIMITS}", 282.0, 122.0),
        Column("people", 404.0, 40.0, at_end=True),
        Column("events by then", 450.0, 60.0, at_end=True),
    )
    rows = []
    for one in equations:
        for line in one.lines:
            named = f"{one.id}, {line.span.words}" if several else line.span.words
            intercept = _with_limits(line.intercept, line.covariance[0])
            slope = _with_limits(line.slope, line.covariance[2]) if line.covariance[2] > 0 else ""
            if not slope:
                slope = _STATED if line.slope == 1.0 else figure_words(line.slope, 4)
            rows.append(Row((named, intercept, slope, f"{line.people:,}", f"{line.events:,}")))
    return Table(columns, tuple(rows), small=True)


def _with_limits(value: float, variance: float) -> str:
    """The figure with its limits; alone where it has no variance."""
    if not variance > 0:
        return figure_words(value, 4)
    half = _Z * sqrt(variance)
    return f"{figure_words(value, 4)} ({figure_words(value - half, 4)} to {figure_words(value + half, 4)})"


def _refit(model: Model, one: EquationUpdate, refit: Refit) -> Iterator[Prose | Table]:
    se = "robust (sandwich) standard errors" if refit.robust else "standard errors of the model"
    said = [f"Every term that is not marked as fixed, estimated anew; {LIMITS} from {se}."]
    if refit.shrinkage is not None:
        said.append(
            f"Uniform shrinkage {figure_words(refit.shrinkage.factor, 3)} (chi² {figure_words(refit.shrinkage.chi2)} on"
            f" {refit.shrinkage.df:g} degrees of freedom); it is stated and not applied."
        )
    yield Prose(tuple(said), keep=True)
    old = {
        term.id: term.coefficient
        for equation in model.content.equations
        if equation.id == one.id
        for term in equation.terms
    }
    columns = (
        Column("term", 0.0, 180.0),
        Column("old coefficient", 186.0, 90.0),
        Column("new coefficient", 282.0, 84.0),
        Column(LIMITS, 372.0, 138.0),
    )
    rows = []
    for place, (id, new) in enumerate(zip(refit.terms, refit.coefficients.tolist(), strict=True)):
        variance = float(refit.covariance[place, place])
        half = _Z * sqrt(variance) if variance > 0 else None
        limits = EN_DASH if half is None else f"{figure_words(new - half, 4)} to {figure_words(new + half, 4)}"
        rows.append(Row((id, figure_words(old.get(id), 4), figure_words(new, 4), limits)))
    yield Table(columns, tuple(rows), small=True)


def _groups(one: EquationUpdate) -> Table:
    columns = (
        Column("horizon", 0.0, 110.0),
        Column("people", 116.0, 70.0),
        Column("predicted", 192.0, 90.0),
        Column("observed", 288.0, 90.0),
        Column("standard error", 384.0, 126.0),
    )
    rows = (
        Row(
            (
                group.span.words,
                f"{group.people:,}",
                share_of_all(group.predicted, 2),
                share_of_all(group.observed, 2),
                f"{figure_words(100.0 * group.se, 2)}{NARROW_SPACE}points",
            )
        )
        for group in one.groups
    )
    return Table(columns, tuple(rows), small=True)
