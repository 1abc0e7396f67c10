"""What is wrong with the predictions, by name: too low or high, too extreme or moderate, a wrong unit, a group.

Each fault is a column beside the predictions, or the predictions from a column read in another unit. The one that
explains most beyond what chance allows it is taken, then the next beside it, and one is let go that another explains
better. An intercept is free while others are looked for, and is judged last: a group or a unit gone wrong shifts the
whole, and is not to be called a shift.
"""

from collections.abc import Iterator, Sequence
from dataclasses import dataclass, replace
from math import exp, log, sqrt
from statistics import NormalDist

import numpy as np
from numpy.typing import NDArray

from clinicalc.assessment.fields import NumberField
from clinicalc.assessment.model import Model
from clinicalc.assessment.rarity import chi_square_beyond
from clinicalc.coefficients.spans import Span
from clinicalc.cohort.course import UNWATCHED, Course
from clinicalc.errors import ValidationRefused
from clinicalc.validation.evidence import Evidence, Fitted, fit_beside, gather_evidence, scale_of
from clinicalc.validation.explained import Attempt, Explained, tell_levels, tell_units, with_p
from clinicalc.validation.fault_groups import Level, find_levels, gather_groups, score_column, score_level
from clinicalc.validation.foretelling import predict_people
from clinicalc.validation.people import UsedPeople
from clinicalc.validation.plan import NamedGroup
from clinicalc.validation.predicted import Outcome, PredictedPeople, YesNo
from clinicalc.validation.search import Finding, GroupSight, Search
from clinicalc.validation.suspected_units import Suspicion, find_ordinary, suspect_units
from clinicalc.validation.validated import FaultKind

Array = NDArray[np.float64]

ALPHA = 0.01
"""The chance that a faultless cohort is accused of anything, over all that is looked for; a quarter for each kind."""
LEAST_SHIFT = log(1.1)
LEAST_SLOPE = 0.1
"""Predictions off by less, throughout or in a group, are no fault that is named, nor a slope as near to 1."""
LEAST_EVENTS = 5
NINE_OF_TEN = NormalDist().inv_cdf(0.9)
_BESIDE = 1.0
_APART = 0.4
"""Standard deviation, in those of people, of the middle of a column from one place to another."""
UNNAMED = 10.0
"""By so much more must a factor that no unit has explain, in chi-square, than one that is known."""
_MOST_FOUND = 6
_EACH = ALPHA / 4.0


def find_faults(
    model: Model,
    people: UsedPeople,
    predicted: PredictedPeople,
    outcome: Outcome,
    span: Span,
    *,
    groups: Sequence[NamedGroup] = (),
    recalibration: str = "",
    course: Course = UNWATCHED,
) -> Search:
    """What is wrong at one horizon, and how closely could be looked; `groups` are of the file.

    Units come first, on which all else rests, then slope and groups as they are certain, then what shifts all.

    Levels of chance are shared among all that is looked for (Bonferroni), so that a faultless cohort is accused of
    anything with a chance of `ALPHA` at most.
    """
    course.say("Looking for what is wrong")
    eta = scale_of(predicted, outcome)
    why = _find_reason(eta, outcome, span)
    if why:
        return Search(why=why)
    evidence = gather_evidence(eta, outcome, span.time)
    own = gather_groups(model, people, groups)
    weights = evidence.weigh(evidence.expect(eta))
    hunt = _Hunt(model, people, outcome, span, recalibration, evidence, tuple(find_levels(own, weights)), course)
    found = hunt.go_through(Explained(eta))
    return hunt.tell(found)


@dataclass(slots=True, eq=False)
class _Hunt:
    """One search."""

    model: Model
    people: UsedPeople
    outcome: Outcome
    span: Span
    recalibration: str
    evidence: Evidence
    levels: tuple[Level, ...]
    course: Course

    @property
    def group_limit(self) -> float:
        """The chi-square that a group must exceed."""
        return critical(_EACH / max(len(self.levels), 1))

    def fit(self, explained: Explained, *, shifted: bool = True) -> Fitted | None:
        """The fit of what is known."""
        return fit_beside(self.evidence, explained.eta, explained.columns(self.evidence, shifted=shifted))

    def go_through(self, explained: Explained) -> Explained:
        """Add what explains most, and let go what is explained by another, until nothing is left."""
        for _ in range(_MOST_FOUND):
            self.course.go_on()
            now = self.fit(explained)
            if now is None:
                break
            tries = [*self._try_slope(explained, now), *self._try_levels(explained, now)]
            tries += self._try_units(explained, now)
            best = max(tries, key=lambda one: one.beyond, default=None)
            if best is None or best.beyond <= 0.0:
                break
            explained = self._let_go(best.explained, explained)
        return self._turn_levels(explained)

    def _try_slope(self, explained: Explained, now: Fitted) -> Iterator[Attempt]:
        if explained.slope or float(np.ptp(explained.eta)) == 0.0:
            return
        tried = replace(explained, slope=True)
        fitted = self.fit(tried)
        if fitted is not None and abs(fitted.coefficients[1]) >= LEAST_SLOPE:
            chi2 = 2.0 * (fitted.loglik - now.loglik)
            yield Attempt(with_p(tried, "slope", chi2, 1.0), chi2, chi2 - critical(_EACH))

    def _try_levels(self, explained: Explained, now: Fitted) -> Iterator[Attempt]:
        columns, limit = explained.columns(self.evidence), self.group_limit
        known = {level.key for level in explained.levels}
        for level in self.levels:
            pairs = any(one.group.by == level.group.by and one.pair for one in explained.levels)
            if level.key in known or pairs or score_level(self.evidence, now, columns, level)[0] < 0.35 * limit:
                continue
            tried = replace(explained, levels=(*explained.levels, level))
            fitted = self.fit(tried)
            if fitted is not None and abs(fitted.coefficients[-1]) >= LEAST_SHIFT:
                chi2 = 2.0 * (fitted.loglik - now.loglik)
                yield Attempt(with_p(tried, str(level.key), chi2, len(self.levels)), chi2, chi2 - limit)

    def _try_units(self, explained: Explained, now: Fitted) -> Iterator[Attempt]:
        corrected = {suspicion.id: suspicion.values for suspicion, _ in explained.units}
        doubted = self._find_doubted(explained, now)
        suspicions = [one for one in suspect_units(self.model, self.people.columns, doubted) if one.id not in corrected]
        columns = len({one.id for one in suspicions})
        for suspicion in suspicions:
            eta = self._read_anew({**corrected, suspicion.id: suspicion.values})
            tried = None if eta is None else replace(explained, eta=eta)
            fitted = None if tried is None else self.fit(tried)
            if tried is None or fitted is None:
                continue
            chi2 = 2.0 * (fitted.loglik - now.loglik)
            beyond = chi2 - critical(_EACH / columns) - _doubt(suspicion)
            certain = suspicion.is_certain and chi2 > -critical(0.05)
            if certain or self._explains_shift(suspicion, tried, explained, now):
                beyond = max(beyond, (1e-3 if suspicion.is_named else 5e-4) / (1.0 + suspicion.after))
            p = min(1.0, chi_square_beyond(max(chi2, 0.0), 1) * columns)
            yield Attempt(replace(tried, units=(*explained.units, (suspicion, p))), chi2, beyond)

    def _find_doubted(self, explained: Explained, now: Fitted) -> frozenset[str]:
        """The columns of numbers whose coefficient would be another one, by the score test."""
        numbers = [id for id in self.people.columns if isinstance(self.model.by_id[id], NumberField)]
        beside, limit = explained.columns(self.evidence), critical(_EACH / max(len(numbers), 1))
        values = {id: self.people.columns[id] for id in numbers}
        return frozenset(id for id in numbers if score_column(self.evidence, now, beside, values[id])[0] > limit)

    def _explains_shift(self, suspicion: Suspicion, tried: Explained, explained: Explained, now: Fitted) -> bool:
        """Whether a column, read anew, makes as good as an intercept would what is wrong without one."""
        if not suspicion.before or suspicion.after > _BESIDE:
            return False
        anew, held = self.fit(tried, shifted=False), self.fit(explained, shifted=False)
        if anew is None or held is None:
            return False
        shift = 2.0 * (now.loglik - held.loglik) / self.evidence.spread
        return shift > critical(_EACH) and 2.0 * (now.loglik - anew.loglik) < critical(0.05)

    def _read_anew(self, columns: dict[str, Array]) -> Array | None:
        """eta with other columns; None where somebody then has no number."""
        people = replace(self.people, columns={**self.people.columns, **columns})
        try:
            predicted = predict_people(self.model, people, self.span, self.recalibration)
        except ValidationRefused:
            return None
        eta = scale_of(predicted, self.outcome)
        return eta if np.isfinite(eta).all() else None

    def _let_go(self, explained: Explained, before: Explained) -> Explained:
        """Without what was known before and is explained by what was found now."""
        for level in before.levels:
            without = replace(explained, levels=tuple(one for one in explained.levels if one.key != level.key))
            explained = without if self._loses(explained, without) < self.group_limit else explained
        if before.slope:
            without = replace(explained, slope=False)
            explained = without if self._loses(explained, without) < critical(_EACH) else explained
        return explained

    def _loses(self, explained: Explained, without: Explained) -> float:
        whole, rest = self.fit(explained), self.fit(without)
        return float("inf") if whole is None or rest is None else 2.0 * (whole.loglik - rest.loglik)

    def _turn_levels(self, explained: Explained) -> Explained:
        """Of a question with two answers the one whose people are off, where everybody else is as predicted."""
        for level in explained.levels:
            if not level.pair:
                continue
            others = [one for one in self.levels if one.group.by == level.group.by and one.key != level.key]
            for other in others:
                turned = tuple(other if one.key == level.key else one for one in explained.levels)
                one, two = (self.fit(each, shifted=False) for each in (explained, replace(explained, levels=turned)))
                if one is not None and two is not None and two.loglik > one.loglik:
                    p = tuple((str(other.key) if key == str(level.key) else key, value) for key, value in explained.p)
                    explained = replace(explained, levels=turned, p=p)
        return explained

    def tell(self, explained: Explained) -> Search:
        """The findings with their sizes, and what else could have been seen."""
        whole, held = self.fit(explained), self.fit(explained, shifted=False)
        if whole is None or held is None:
            return Search(why="The search for faults came to no end with these people.", events=self.evidence.events)
        shift, se, chi2 = self._judge_shift(explained, whole, held)
        shifted = chi2 > critical(_EACH) and abs(shift) >= LEAST_SHIFT
        beside = shifted or explained.slope or self._leaves_few(explained)
        used, places = (whole, 1) if beside else (held, 0)
        errors = np.sqrt(np.diag(used.covariance))
        groups = sorted(tell_levels(explained, used, places, shift if shifted else 0.0), key=lambda one: one.p or 0.0)
        findings = list(tell_units(explained))
        if explained.slope:
            slope = 1.0 + float(used.coefficients[places])
            kind = FaultKind.TOO_EXTREME if slope < 1.0 else FaultKind.TOO_MODERATE
            findings.append(Finding(kind, slope, float(errors[places]), dict(explained.p)["slope"]))
        if shifted:
            kind = FaultKind.TOO_LOW if shift > 0.0 else FaultKind.TOO_HIGH
            findings.append(Finding(kind, shift, se, min(1.0, 4.0 * chi_square_beyond(chi2, 1))))
        findings += groups
        return self._look_closely(explained, tuple(findings))

    def _judge_shift(self, explained: Explained, whole: Fitted, held: Fitted) -> tuple[float, float, float]:
        """The intercept, its standard error and chi-square; where a slope was found too, of the predictions as are.

        Of those in no group found; where these are few, of everybody.
        """
        few = self._leaves_few(explained)
        if explained.slope or few:
            flat = replace(explained, slope=False, levels=() if few else explained.levels)
            one, two = self.fit(flat), self.fit(flat, shifted=False)
            whole, held = (whole, held) if one is None or two is None else (one, two)
        se = sqrt(float(whole.covariance[0, 0]) * self.evidence.spread)
        return float(whole.coefficients[0]), se, 2.0 * (whole.loglik - held.loglik) / self.evidence.spread

    def _leaves_few(self, explained: Explained) -> bool:
        """Whether several groups were found that leave few people to be called the others."""
        if len(explained.levels) < 2:
            return False
        others = np.ones(len(explained.eta), dtype=np.bool_)
        for level in explained.levels:
            others &= level.rows == 0.0
        weights = self.evidence.weigh(self.evidence.expect(explained.eta))
        return float(weights[others].sum()) < 0.5 * float(weights.sum())

    def _look_closely(self, explained: Explained, findings: tuple[Finding, ...]) -> Search:
        """How closely could be looked, as if nothing were found."""
        fields = [field for id in self.people.columns if isinstance(field := self.model.by_id[id], NumberField)]
        seen = [field.label for field in fields if find_ordinary(self.model, field) is not None]
        blind = [field.label for field in fields if field.label not in seen]
        plain = replace(explained, slope=True, levels=())
        fitted = self.fit(plain)
        if fitted is None:
            return Search(findings, self.evidence.events, units=tuple(seen), blind=tuple(blind))
        sure = sqrt(critical(_EACH)) + NINE_OF_TEN
        se = np.sqrt(np.diag(fitted.covariance))
        return Search(
            findings,
            self.evidence.events,
            shift=_seen(sure, float(se[0]) * sqrt(self.evidence.spread), LEAST_SHIFT),
            slope=_seen(sure, float(se[1]), LEAST_SLOPE),
            groups=tuple(self._sights(plain, fitted)),
            units=tuple(seen),
            blind=tuple(blind),
        )

    def _sights(self, plain: Explained, fitted: Fitted) -> Iterator[GroupSight]:
        columns = plain.columns(self.evidence)
        sure = sqrt(self.group_limit) + NINE_OF_TEN
        for level in self.levels:
            _, left = score_level(self.evidence, fitted, columns, level)
            if left > 0.0:
                factor = exp(min(_seen(sure, 1.0 / sqrt(left), LEAST_SHIFT), 50.0))
                yield GroupSight(level.group.label, level.name, int(level.rows.sum()), factor)


def _doubt(suspicion: Suspicion) -> float:
    """What more must be explained, in chi-square; a factor that no unit has is the likelier, the nearer it brings."""
    if suspicion.is_named:
        return 0.0 if suspicion.before else UNNAMED
    return UNNAMED + (suspicion.after / _APART) ** 2


def _seen(sure: float, se: float, least: float) -> float:
    """The size that is found nine times of ten: beyond chance, and beyond what is too small to be named."""
    return max(sure * se, least + NINE_OF_TEN * se)


def critical(alpha: float) -> float:
    """The chi-square on 1 that chance exceeds with this probability."""
    return NormalDist().inv_cdf(alpha / 2.0) ** 2


def _find_reason(eta: Array, outcome: Outcome, span: Span) -> str:
    """Why nothing can be looked for, or ""."""
    if not np.isfinite(eta).all():
        return "Some have a predicted risk of exactly 0 or 1, beside which nothing can be added."
    if isinstance(outcome, YesNo):
        events = int(outcome.y.sum())
        if len(outcome.y) - events < LEAST_EVENTS:
            return f"Fewer than {LEAST_EVENTS} people had no event."
    else:
        events = int(outcome.seen(span.time).sum())
        if outcome.competing and outcome.entry is not None:
            return "Some were first watched after time nought, where other events may come first."
    return f"Fewer than {LEAST_EVENTS} people had the event." if events < LEAST_EVENTS else ""
