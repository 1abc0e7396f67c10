"""What was fitted, for the report of a fit: terms with their ratios, baselines, and how well people are told apart."""

import math
from collections.abc import Iterator

from clinicalc.assessment.model import ModelEquation
from clinicalc.assessment.numerals import EN_DASH, MINUS, NARROW_SPACE, percent, plain
from clinicalc.coefficients.questions import ChoicePredictor
from clinicalc.coefficients.schema import ModelContent
from clinicalc.covariates.design import DesignTerm
from clinicalc.covariates.term_words import say_term
from clinicalc.development.estimating import FittedStudy
from clinicalc.development.fit import FitKind
from clinicalc.development.study_figures import FitFigures
from clinicalc.development.study_method_figures import PooledTerm
from clinicalc.development.study_people import equations_of
from clinicalc.development.study_strata import FitPlan
from clinicalc.estimation.concordance import Concordance
from clinicalc.estimation.student import student_quantile
from clinicalc.report.contents import Block, Column, Fact, FactList, NotedCell, Prose, Row, Section, Table

RATIOS = {
    FitKind.COX: "hazard ratio",
    FitKind.FINE_GRAY: "subdistribution hazard ratio",
    FitKind.LOGISTIC: "odds ratio",
    FitKind.CLOGLOG: "ratio of hazards, exp(coefficient)",
}
_Z = 1.959963984540054  # the 97.5 % point of the normal distribution
_READ_TOGETHER = (
    "A ratio is that of two people who differ by one in the term as written and in nothing else; it is no effect of"
    " changing a value. Where several terms are made of one value, such as a spline or a product, they are read"
    " together, and no ratio stands at them."
)
_KNOWN_OVER_SETS = 1e6


def tell_model(fitted: FittedStudy, plan: FitPlan, figures: FitFigures, of: str) -> Iterator[Section]:
    """Coefficients, baselines, and discrimination; `of` names the fit in headings, "" for the only one."""
    equations = equations_of(fitted.model, plan)
    pooled = {} if figures.imputed is None else {one.term: one for one in figures.imputed.terms}
    yield Section(
        f"The model{of}", (Prose((_explain(fitted, figures),), keep=True), _terms(fitted, equations[0], pooled))
    )
    yield Section(f"Baseline{of}", (Prose((_BASELINE,)), _baselines(fitted, figures, equations)), whole=True)
    yield Section(f"Telling people apart{of}", tuple(_discrimination(figures)), whole=True)


_BASELINE = (
    "The linear predictor with every term at zero, and the risk that belongs to it. Nobody need be like that: it is a"
    " place to count from."
)


def _explain(fitted: FittedStudy, figures: FitFigures) -> str:
    limits = "95\u202f% limits from the coefficient and its standard error on the scale of the coefficient"
    if figures.imputed is not None:
        limits += ", with Student’s t of the degrees of freedom that stand beside them (Barnard and Rubin 1999)"
    fit = fitted.fits[figures.equations[0]]
    se = "robust (sandwich) standard errors" if fit.robust else "standard errors of the model"
    return f"{RATIOS[fit.kind].capitalize()} with {limits}; {se}. {_READ_TOGETHER}"


def _terms(fitted: FittedStudy, equation: ModelEquation, pooled: dict[str, PooledTerm]) -> Table:
    fit = fitted.fits[equation.content.id]
    columns = [
        Column("term, and what it is", 0.0, 222.0),
        Column("coefficient", 228.0, 54.0),
        Column("standard error", 288.0, 60.0),
        Column(f"{RATIOS[fit.kind]} (95\u202f% limits)", 354.0, 156.0 if not pooled else 94.0),
    ]
    if pooled:
        columns.append(Column("df, missing information", 454.0, 56.0))
    together = _read_together(fitted.model.content, equation)
    words = {term.id: say_term(term, _to_read).replace(" x ", " × ") for term in equation.content.terms}
    fixed = {term.id for term in equation.terms if term.fixed}
    rows = []
    for place, (name, b) in enumerate(zip(fit.names, fit.coefficients, strict=True)):
        square = None if fit.covariance is None else fit.covariance[place][place]
        se = None if square is None or square <= 0 or name in fixed else math.sqrt(square)
        degrees = pooled[name].degrees if name in pooled else math.inf
        if name in fixed:
            ratio = "stated, not estimated"
        elif name in together:
            ratio = EN_DASH
        else:
            ratio = _ratio(b, se, degrees)
        what = words.get(name, "")
        first = NotedCell(name, () if what in ("", name) else (what,))
        cells: list[str | NotedCell] = [first, _digits(b, 5), EN_DASH if se is None else _digits(se, 4), ratio]
        if pooled:
            cells.append(_pooled(pooled.get(name)))
        rows.append(Row(tuple(cells)))
    return Table(tuple(columns), tuple(rows), small=True)


def _pooled(term: PooledTerm | None) -> str | NotedCell:
    if term is None:
        return EN_DASH
    degrees = f"{term.degrees:,.1f}" if term.degrees < _KNOWN_OVER_SETS else "very many"
    return NotedCell(degrees, (f"{100 * term.missing_information:.1f}{NARROW_SPACE}%",))


def _ratio(b: float, se: float | None, degrees: float) -> str:
    if se is None:
        return _exp(b)
    t = _Z if degrees == math.inf else student_quantile(0.975, degrees)
    return f"{_exp(b)} ({_exp(b - t * se)} to {_exp(b + t * se)})"


def _exp(value: float) -> str:
    """A ratio to three digits; one that no number holds is above or below what can be written."""
    if abs(value) > 20:
        return "over 480 million" if value > 0 else "nearly 0"
    return _digits(math.exp(value), 3)


def _digits(value: float, digits: int) -> str:
    """So many significant digits, noughts at the end among them, never in exponent form, with a true minus."""
    if value == 0 or not math.isfinite(value):
        return "0" if value == 0 else EN_DASH
    decimals = max(0, digits - 1 - math.floor(math.log10(abs(value))))
    return f"{value:,.{min(decimals, 12)}f}".replace("-", MINUS)


def _to_read(value: float) -> str:
    """A figure of a term to six digits: a knot at a quantile of the people has more in the file than can be read."""
    return plain(float(f"{value:.6g}"), 6)


def _read_together(content: ModelContent, equation: ModelEquation) -> set[str]:
    """Terms whose value another term has too, other than answers of one question."""
    inputs = {derived.id: set(derived.inputs.values()) for derived in content.derived}
    choices = {predictor.id for predictor in content.predictors if isinstance(predictor, ChoicePredictor)}
    made_of = {term.id: set().union(*(inputs.get(f.of, {f.of}) for f in term.factors)) for term in equation.terms}
    found = set()
    for term in equation.terms:
        for other in equation.terms:
            shared = made_of[term.id] & made_of[other.id] if other is not term else set()
            if shared and not (_is_answer(term, choices) and _is_answer(other, choices)):
                found.add(term.id)
    return found


def _is_answer(term: DesignTerm, choices: set[str]) -> bool:
    return len(term.factors) == 1 and term.factors[0].of in choices


def _baselines(fitted: FittedStudy, figures: FitFigures, equations: tuple[ModelEquation, ...]) -> Table:
    several = len(equations) > 1
    at = {(one.equation, one.span): one for one in figures.horizons}
    rows = []
    for equation in equations:
        fit = fitted.fits[equation.content.id]
        for place, line in enumerate(equation.lines):
            baseline = fit.baselines[place if len(fit.baselines) > 1 else 0]
            named = f"{equation.content.id}, " if several else ""
            span = "no horizon" if line.span is None else line.span.words
            known = at.get((equation.content.id, line.span)) if line.span is not None else None
            counts = ("", "", "") if known is None else (known.people, known.events, known.still_at_risk)
            cells = (f"{one:,}" if isinstance(one, int) else EN_DASH for one in counts)
            risk = percent(_risk(fit.kind, baseline.lp0), decimals=2)
            rows.append(Row((f"{named}{span}", _digits(baseline.lp0, 6), risk, *cells)))
    columns = (
        Column("equation, horizon" if several else "horizon", 0.0, 120.0),
        Column("linear predictor", 126.0, 84.0),
        Column("risk", 216.0, 60.0),
        Column("people", 282.0, 60.0),
        Column("events by then", 348.0, 74.0),
        Column("still followed", 428.0, 82.0),
    )
    timed = bool(figures.horizons)
    return Table(columns, tuple(rows), small=True) if timed else _without_counts(columns, rows)


def _without_counts(columns: tuple[Column, ...], rows: list[Row]) -> Table:
    """The table of a fit without times, which has no counts by a horizon."""
    return Table(columns[:3], tuple(Row(row.cells[:3]) for row in rows), small=True)


def _risk(kind: FitKind, eta: float) -> float:
    if kind.link == "cloglog":
        return -math.expm1(-math.exp(min(eta, 700.0)))
    return 1 / (1 + math.exp(-eta)) if eta >= 0 else math.exp(eta) / (1 + math.exp(eta))


def _discrimination(figures: FitFigures) -> Iterator[Block]:
    facts = []
    if figures.concordance is not None:
        c = figures.concordance
        low, high = limits_of(c)
        pairs = c.concordant + c.discordant + c.tied
        facts.append(
            Fact(
                "C, in these people",
                (
                    f"{c.c:.3f}, 95\u202f% limits {low:.3f} to {high:.3f}",
                    _PAIRS.format(f"{pairs:,}", _ALONE if figures.follow_up is None else _FIRST),
                ),
                strong=True,
            )
        )
    else:
        facts.append(Fact("C", ("not worked out: people came under observation late, or there is no pair to compare",)))
    facts.append(
        Fact("Log likelihood", (f"{_signed(figures.loglik, 2)}, without terms {_signed(figures.loglik_null, 2)}",))
    )
    size = figures.minimum
    if size is not None:
        facts.append(
            Fact(
                "Sample needed",
                (
                    f"{size.people:,} people by Riley and others (2019), with the R² of this fit adjusted for optimism;"
                    f" there were {figures.people:,}, and {plain(figures.events_per_term)} events for each term",
                ),
            )
        )
    yield FactList(tuple(facts))


_PAIRS = "of {} pairs of people of whom one {}: how often that one has the higher risk"
_FIRST, _ALONE = "is known to have had the event first", "had the event and the other did not"


def limits_of(c: Concordance) -> tuple[float, float]:
    """95 % limits of C on its logit, so that they stay between 0 and 1; C itself where it is one of these."""
    if not 0 < c.c < 1:
        return c.c, c.c
    half = _Z * c.se / (c.c * (1 - c.c))
    middle = math.log(c.c / (1 - c.c))
    low, high = (1 / (1 + math.exp(-(middle + side * half))) for side in (-1, 1))
    return low, high


def _signed(value: float, decimals: int) -> str:
    return f"{value:,.{decimals}f}".replace("-", "\u2212")
