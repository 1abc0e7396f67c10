"""One fit of a study from the sets of its imputation: fitted to each, and pooled.

Coefficients and linear predictor by Rubin's rules (`pooled_fit`); C on the logit scale by Rubin's rules; each person's
linear predictor, log likelihoods and figures of a penalty are means over the sets; the sample that is needed is that of
the mean log likelihoods (`screening_sets`).
"""

from collections.abc import Iterator, Sequence
from dataclasses import replace
from math import exp, inf, log, sqrt

import numpy as np

from clinicalc.coefficients.pointers import quoted
from clinicalc.development.estimated_penalised import remark_penalty, say_strengths
from clinicalc.development.estimating_faults import say_refused
from clinicalc.development.estimating_one import estimate_one
from clinicalc.development.fit import FitKind
from clinicalc.development.fit_ground import Estimated, Ground
from clinicalc.development.pooled_fit import PooledFit, pool_fits
from clinicalc.development.screening_sets import screen_sets, screen_size
from clinicalc.development.study_figures import FitFigures, LeftOut
from clinicalc.development.study_imputation import Filling
from clinicalc.development.study_method_figures import ImputationFigures, PenaltyFigures, PooledTerm
from clinicalc.development.study_screening import screen_fit
from clinicalc.errors import DescriptionRefused, FitRefused, Problem
from clinicalc.estimation.chained_equations import SETTLED
from clinicalc.estimation.concordance import Concordance
from clinicalc.estimation.rubin import pool
from clinicalc.estimation.sample_size import r2_from_likelihoods
from clinicalc.estimation.student import student_quantile

_NARROW = 0.02
"""Share by which a normal interval may be too narrow beside that of Student's t before it is said."""


def estimate_imputed(ground: Ground, filling: Filling) -> Estimated:
    """The fit to every set, pooled; `ground` is that of the people as they are. Raises DescriptionRefused, Stopped."""
    sets = len(filling.grounds)
    found = []
    for number, each in enumerate(filling.grounds):
        ground.course.go_on()
        ground.course.say(f"Fitting {ground.plan.id} to each set", number, sets)
        try:
            found.append(estimate_one(each))
        except FitRefused as refused:
            raise DescriptionRefused(ground.plan.id, tuple(_of_set(say_refused(refused, each), number))) from refused
    return pool_estimated(ground, filling, found)


def pool_estimated(ground: Ground, filling: Filling, found: Sequence[Estimated]) -> Estimated:
    """The fits to the sets, two at least, made one."""
    first = found[0].figures
    degrees = _complete_degrees(first)
    pooled = [pool_fits([one.fits[place] for one in found], degrees) for place in range(len(first.equations))]
    penalty = _mean_penalty([one.figures.penalty for one in found])
    null, loglik = (_mean([getattr(one.figures, name) for one in found]) for name in ("loglik_null", "loglik"))
    size = screen_size(filling.grounds[0], first, r2_from_likelihoods(null, loglik, first.people))
    figures = replace(
        first,
        left_out=_left_out(ground, first),
        loglik_null=null,
        loglik=loglik,
        concordance=_pool_concordance([one.figures.concordance for one in found]),
        screened=screen_sets(ground, filling, found, size),
        minimum=size.minimum,
        penalty=penalty,
        imputed=_describe(filling, ground.estimated, pooled[0]),
    )
    said = f"Coefficients pooled by Rubin's rules over {len(found)} sets with missing values filled in."
    own = tuple(remark_penalty(ground.plan.id, first.penalty))
    remarks = (*(one for one in found[0].remarks if one not in own), *remark_penalty(ground.plan.id, penalty))
    return Estimated(
        tuple(
            replace(one.fit, remarks=(*(say_strengths(each, first.penalty, penalty) for each in one.fit.remarks), said))
            for one in pooled
        ),
        figures,
        np.mean([one.linear_predictor for one in found], axis=0),
        (*remarks, *_remark(ground, figures, pooled)),
    )


def _complete_degrees(figures: FitFigures) -> float:
    """Degrees of freedom if nothing were missing: people, or events of a time, less the coefficients."""
    if FitKind(figures.kind).has_intercept:
        return float(max(figures.people - figures.terms - 1, 1))
    return float(max(figures.events - figures.terms, 1))


def _left_out(ground: Ground, figures: FitFigures) -> LeftOut:
    missing = screen_fit(ground.model, ground.equations, ground.people, ground.cohort).missing
    applicable = len(ground.people.rows)
    return LeftOut(applicable, applicable - figures.people, missing)


def _mean(values: Sequence[float]) -> float:
    return float(np.mean(values))


def _pool_concordance(found: Sequence[Concordance | None]) -> Concordance | None:
    """C pooled on the logit scale, its standard error brought back to C; pairs are means over the sets.

    Where C is 0 or 1 in a set, which has no logit, it is pooled as it is.
    """
    known = [one for one in found if one is not None]
    if len(known) < len(found):
        return None
    inside = all(0.0 < one.c < 1.0 for one in known)
    slopes = [one.c * (1.0 - one.c) if inside else 1.0 for one in known]
    c = np.array([[log(one.c / (1.0 - one.c)) if inside else one.c] for one in known])
    variances = np.array([[[(one.se / slope) ** 2]] for one, slope in zip(known, slopes, strict=True)])
    with np.errstate(all="ignore"):
        pooled = pool(c, variances, inf)
    middle, se = float(pooled.estimates[0]), sqrt(float(pooled.total[0, 0]))
    if inside:
        middle = 1.0 / (1.0 + exp(-middle))
        se *= middle * (1.0 - middle)
    pairs = (round(_mean([getattr(one, name) for one in known])) for name in ("concordant", "discordant", "tied"))
    return Concordance(middle, se, *pairs)


def _mean_penalty(found: Sequence[PenaltyFigures | None]) -> PenaltyFigures | None:
    known = [one for one in found if one is not None]
    if not known:
        return None
    strengths = [one.strength for one in known if one.strength is not None]
    predicted = [one.mean_predicted for one in known if one.mean_predicted is not None]
    return replace(
        known[0],
        strength=_mean(strengths) if strengths else None,
        degrees=_mean([one.degrees for one in known]),
        mean_predicted=_mean(predicted) if predicted else None,
        over_sets=(min(strengths), max(strengths)) if known[0].chosen and len(set(strengths)) > 1 else None,
    )


def _describe(filling: Filling, terms: Sequence[str], pooled: PooledFit) -> ImputationFigures:
    worst = max(filling.mixing, key=lambda id: filling.mixing[id])
    figures = zip(terms, pooled.slopes.degrees.tolist(), pooled.slopes.missing_information.tolist(), strict=True)
    return ImputationFigures(
        sets=filling.table.sets,
        rounds=filling.rounds,
        seed=filling.table.seed,
        filled=filling.filled,
        not_filled=filling.not_filled,
        terms=tuple(PooledTerm(*each) for each in figures),
        mixing=filling.mixing[worst],
        worst=worst,
        settled=filling.settled,
    )


def _remark(ground: Ground, figures: FitFigures, pooled: Sequence[PooledFit]) -> Iterator[str]:
    imputed = figures.imputed
    assert imputed is not None
    filled = sum(imputed.filled.values())
    id = ground.plan.id
    yield (
        f"{id}: {filled:,} missing value{'' if filled == 1 else 's'} of {', '.join(map(quoted, imputed.filled))} "
        f"{'was' if filled == 1 else 'were'} filled in {imputed.sets} times from all others and the outcome (chained "
        f"equations, {imputed.rounds} rounds, seed {imputed.seed}), and the fits are pooled by Rubin's rules. This is "
        "right where what is missing depends on nothing but what is known of a person."
    )
    if not imputed.settled:
        yield (
            f"{id}: the sets have not come together after {imputed.rounds} rounds; {quoted(imputed.worst)} is furthest "
            f"apart (ratio of Gelman and Rubin {imputed.mixing:.2f}, above {SETTLED:g}). The fit is made from them as "
            "they are. Say more rounds in [imputation], or leave out one of two columns that tell nearly the same."
        )
    if ground.plan.table.covariance_kind == "cluster":
        yield f"{id}: values were filled in as if people of one cluster had no more in common than others."
    degrees = min(float(one.degrees.min()) for each in pooled for one in (each.slopes, *each.baselines))
    narrow = 1.0 - 1.959963984540054 / student_quantile(0.975, degrees)
    if narrow > _NARROW:
        yield (
            f"{id}: with {degrees:.0f} degrees of freedom for the least known coefficient, limits by the normal "
            f"distribution, as the band has them, are up to {100 * narrow:.0f}\u202f% too narrow. Take more sets."
        )


def _of_set(problems: Sequence[Problem], number: int) -> Iterator[Problem]:
    for problem in problems:
        yield replace(problem, message=f"in set {number + 1} of the values filled in: {problem.message}")
