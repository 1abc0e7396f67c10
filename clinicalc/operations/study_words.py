"""What the command says of a study: its data, its fits and what was made of them, as lines of plain text."""

from collections.abc import Iterator

from clinicalc.cohort.checked import CheckedCohort
from clinicalc.cohort.problems import DataProblem
from clinicalc.development.estimating import FittedStudy
from clinicalc.development.fit import FitKind
from clinicalc.development.study_figures import FitFigures
from clinicalc.estimation.screening_words import word_screened
from clinicalc.operations.folding import fold
from clinicalc.operations.study_method_words import pooled_columns, tell_left_out, tell_optimism, tell_penalty

_KINDS = {"cox": "Cox", "fine-gray": "Fine\u2013Gray"}


def tell_data(file: str, cohort: CheckedCohort) -> Iterator[str]:
    """How many people there are, and everything found about them, stops first."""
    count = len(cohort.problems)
    found = "nothing was found wrong." if not count else f"{count} {'remark' if count == 1 else 'remarks'}:"
    yield f"{file}: {cohort.rows:,} {'person' if cohort.rows == 1 else 'people'}; {found}"
    for problem in cohort.problems:
        yield from _tell_problem(problem)


def tell_fits(fitted: FittedStudy) -> Iterator[str]:
    """The figures of each fit, its coefficients, and what is to be known of it."""
    for figures in fitted.figures:
        yield ""
        yield from _tell_fit(figures, fitted)


def _tell_problem(problem: DataProblem) -> Iterator[str]:
    lines = ", ".join(map(str, problem.rows))
    more = ", …" if problem.count > len(problem.rows) else ""
    said = not problem.rows or "in line" in problem.sentence
    where = "" if said else f" Line{'s' * (len(problem.rows) > 1)} {lines}{more}."
    yield from _item(problem.gravity, f"{problem.sentence}{where}")


def _tell_fit(figures: FitFigures, fitted: FittedStudy) -> Iterator[str]:
    kind = _KINDS.get(figures.kind, figures.kind)
    yield f"{figures.id}: {kind} fit to {figures.people:,} people with {figures.events:,} events{_competing(figures)}"
    yield from tell_left_out(figures)
    if figures.penalty is not None:
        yield from tell_penalty(figures.penalty)
    if figures.follow_up is not None:
        follow = figures.follow_up
        median = "" if follow.median is None else f"median {follow.median:.6g} {follow.unit}, "
        yield f"  Follow-up: {median}longest {follow.longest:.6g} {follow.unit}"
    for at in figures.horizons:
        yield f"  {at.equation}, {at.span.words}: {at.events:,} events, {at.still_at_risk:,} still at risk"
    mean = "" if figures.imputed is None else ", means over the sets"
    yield f"  Log likelihood {figures.loglik:.4f} (without terms {figures.loglik_null:.4f}){mean}"
    if figures.concordance is not None:
        c = figures.concordance
        yield f"  C {c.c:.4f}, standard error {c.se:.4f}, in the people of the fit"
    if figures.optimism is not None:
        yield from tell_optimism(figures.optimism)
    yield from _tell_coefficients(figures, fitted)
    for one in figures.screened:
        yield from _item(one.gravity, word_screened(one))


def _competing(figures: FitFigures) -> str:
    if not figures.competing:
        return ""
    how = "counted" if figures.kind == FitKind.FINE_GRAY else "taken as censored"
    return f", {figures.competing:,} competing events {how}"


def _tell_coefficients(figures: FitFigures, fitted: FittedStudy) -> Iterator[str]:
    fit = fitted.fits[figures.equations[0]]
    width = max(map(len, ("Term", *fit.names)))
    heading, pooled = pooled_columns(figures)
    yield f"  {'Term':<{width}}  {'Coefficient':>12}  {'Std. error':>12}{heading}"
    for place, (name, b) in enumerate(zip(fit.names, fit.coefficients, strict=True)):
        se = "" if fit.covariance is None else f"{fit.covariance[place][place] ** 0.5:.6g}"
        yield f"  {name:<{width}}  {b:>12.6g}  {se:>12}{pooled.get(name, '')}"


def _item(gravity: str, sentence: str) -> Iterator[str]:
    yield from fold(f"  {gravity.capitalize()}: {sentence}", hanging=4)
