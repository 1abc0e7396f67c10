"""An equation of the description filled with the figures of its fit, as a coefficient file says them."""

from collections.abc import Iterator, Mapping, Sequence

from clinicalc.coefficients.pointers import listed, point, quoted
from clinicalc.coefficients.spans import TIME_UNITS, Span
from clinicalc.development.fit import Fit, FitKind
from clinicalc.development.fit_reading import Wanted
from clinicalc.development.horizon_times import HorizonTime
from clinicalc.errors import Problem

Tree = dict[str, object]

_BASELINES = ("intercept", "baseline_survival", "mean_linear_predictor", "log_cumulative_hazard")


def wanted_of(equation: Mapping[str, object]) -> Wanted:
    """What the equation wants of its fit."""
    ids = tuple(str(term["id"]) for term in _parts(equation, "terms") if _is_estimated(term) and "id" in term)
    horizons = tuple(HorizonTime(_span_of(horizon)) for horizon in _parts(equation, "horizons"))
    return Wanted(str(equation.get("id")), ids, horizons, "uncertainty" not in equation)


def find_misshapen(equation: Mapping[str, object], base: str) -> Iterator[Problem]:
    """What keeps an equation from being filled at all: parts that are no tables, terms without an id."""
    for name in ("terms", "horizons"):
        found = equation.get(name)
        if not isinstance(found, list) or not found:
            what = "is missing" if found is None else "is no list of tables"
            yield Problem(base, f"the field {quoted(name)} {what}.")
            continue
        for place, part in enumerate(found):
            if not isinstance(part, dict):
                yield Problem(point(base, name, place), "a table must stand here, such as {id = ..., product = [...]}.")
            elif name == "terms" and not isinstance(part.get("id"), str):
                yield Problem(point(base, name, place), 'the field "id" is missing.')


def find_said_twice(equation: Mapping[str, object], kind: FitKind, base: str) -> Iterator[Problem]:
    """What the description says and the fit says too, or says otherwise than the fit can be."""
    for place, term in enumerate(_parts(equation, "terms")):
        if _is_estimated(term) and "coefficient" in term:
            where = point(base, "terms", place, "coefficient")
            yield Problem(
                where, 'the coefficient comes from the fit. Leave it out, or say "fixed" if it was not estimated.'
            )
    for place, horizon in enumerate(_parts(equation, "horizons")):
        for name in _BASELINES:
            if name in horizon:
                yield Problem(point(base, "horizons", place, name), "the baseline comes from the fit. Leave it out.")
    stated = equation.get("uncertainty")
    if stated is not None and not (isinstance(stated, dict) and stated.get("basis") == "none"):
        yield Problem(
            point(base, "uncertainty"),
            'the band comes from the fit. Leave this out; only {basis = "none", because = "..."} may '
            "stand beside a fit.",
        )
    if equation.get("link", kind.link) != kind.link:
        yield Problem(
            point(base, "link"), f"a {kind} fit has the link {quoted(kind.link)}, not {quoted(equation.get('link'))}."
        )
    competing = equation.get("competing_events")
    handled = competing.get("handled") if isinstance(competing, dict) else None
    if isinstance(handled, str) and (handled == "subdistribution") != (kind is FitKind.FINE_GRAY):
        wrong = 'a Fine–Gray fit handles competing events as "subdistribution"'
        if kind is not FitKind.FINE_GRAY:
            wrong = f'a {kind} fit is not of a subdistribution; say "censored" or "not_applicable"'
        yield Problem(point(base, "competing_events", "handled"), f"{wrong}, and {quoted(handled)} stands here.")


def find_unfitted(equation: Mapping[str, object], base: str) -> Iterator[Problem]:
    """Terms without a coefficient in an equation without a fit."""
    bare = [quoted(term.get("id")) for term in _parts(equation, "terms") if "coefficient" not in term]
    if bare:
        yield Problem(
            base,
            f"there is no table [fit.{equation.get('id')}], and {listed(bare)} {'has' if len(bare) == 1 else 'have'}"
            " no coefficient. Name the fit's tables there, or write the figures of the source here.",
        )


def fill_equation(equation: Mapping[str, object], fit: Fit) -> Tree:
    """The equation with the coefficients, baselines and band of its fit; names of the fit are ids of its terms."""
    figures = dict(zip(fit.names, fit.coefficients, strict=True))
    terms = [
        _with_coefficient(term, figures[str(term["id"])]) if _is_estimated(term) else dict(term)
        for term in _parts(equation, "terms")
    ]
    horizons = _parts(equation, "horizons")
    baseline = "intercept" if fit.kind is FitKind.LOGISTIC else "log_cumulative_hazard"
    filled = {
        **equation,
        "link": fit.kind.link,
        "terms": terms,
        "horizons": [{**h, baseline: line.lp0} for h, line in zip(horizons, fit.baselines, strict=True)],
    }
    if "uncertainty" not in equation:
        filled["uncertainty"] = _band(fit, terms, horizons)
    return filled


def stand_in(equation: Mapping[str, object], kind: str) -> Tree:
    """The equation with figures that break no rule, so that all else can be checked when its fit cannot be taken."""
    wanted = wanted_of(equation)
    size = len(wanted.terms)
    terms = [_with_coefficient(term, 0.0) if _is_estimated(term) else dict(term) for term in _parts(equation, "terms")]
    horizons = _parts(equation, "horizons")
    days = sorted(_days(h) for h in horizons)
    baseline = "intercept" if kind == FitKind.LOGISTIC else "log_cumulative_hazard"
    filled: Tree = {
        **equation,
        "link": FitKind(kind).link,
        "terms": terms,
        "horizons": [
            {
                **{name: value for name, value in h.items() if name not in _BASELINES},
                baseline: days.index(_days(h)) - 100.0,
            }
            for h in horizons
        ],
    }
    if "uncertainty" not in equation and size:
        identity = [[float(i == j) for j in range(size)] for i in range(size)]
        centres = [{"variance": 1.0, "centre": [0.0] * size, **_time_of(h)} for h in horizons]
        filled["uncertainty"] = {"basis": "covariance", "covariance": identity, "at_centre": centres}
    elif "uncertainty" not in equation:
        filled["uncertainty"] = {"basis": "none", "because": "There is no estimated term."}
    return filled


def _band(fit: Fit, terms: Sequence[Mapping[str, object]], horizons: Sequence[Mapping[str, object]]) -> Tree:
    """The covariance in the order of the file's terms, and the centre of each horizon."""
    assert fit.covariance is not None  # asked for where the equation has a band
    order = [fit.names.index(str(term["id"])) for term in terms if _is_estimated(term)]
    return {
        "basis": "robust" if fit.robust else "covariance",
        "covariance": [[fit.covariance[i][j] for j in order] for i in order],
        "at_centre": [
            {"variance": line.variance, "centre": [(line.centre or ())[i] for i in order], **_time_of(horizon)}
            for horizon, line in zip(horizons, fit.baselines, strict=True)
        ],
    }


def _with_coefficient(term: Mapping[str, object], coefficient: float) -> Tree:
    return {**term, "coefficient": coefficient}


def _is_estimated(term: Mapping[str, object]) -> bool:
    return term.get("fixed") is not True


def _time_of(horizon: Mapping[str, object]) -> Tree:
    return {name: horizon[name] for name in ("years", "time", "unit") if name in horizon}


def _span_of(horizon: Mapping[str, object]) -> Span | None:
    years, time, unit = horizon.get("years"), horizon.get("time"), horizon.get("unit")
    if isinstance(years, int | float) and time is None and unit is None:
        return Span(float(years))
    if years is None and isinstance(time, int | float) and isinstance(unit, str):
        return Span(float(time), unit)
    return None


def _days(horizon: Mapping[str, object]) -> float:
    span = _span_of(horizon)
    return span.days if span is not None and span.unit in TIME_UNITS else 0.0


def _parts(equation: Mapping[str, object], name: str) -> list[Tree]:
    found = equation.get(name)
    return [part for part in found if isinstance(part, dict)] if isinstance(found, list) else []
