"""What the command says of a validation, as lines of plain text: verdict, people, figures, decisions, groups, rest."""

from collections.abc import Iterator, Mapping, Sequence

from clinicalc.assessment.numerals import EN_DASH, NARROW_SPACE
from clinicalc.coefficients.fingerprint import group_fingerprint
from clinicalc.operations.folding import fold
from clinicalc.operations.validation_names import METHODS, list_measures, spell_figure, spell_percent
from clinicalc.validation.validated import (
    DecisionFigures,
    GroupFigures,
    HorizonValidation,
    Measure,
    Outcomes,
    PeopleCount,
    Validation,
)


def tell_validation(found: Validation) -> Iterator[str]:
    """Everything, the verdict first."""
    for sentence in found.verdict:
        yield from fold(sentence)
    yield ""
    yield f"{found.title}, version {found.version}"
    yield f"Fingerprint {group_fingerprint(found.fingerprint)[:39]}"
    yield f"            {group_fingerprint(found.fingerprint)[40:]}"
    if found.recalibration:
        yield f"With the recalibration {found.recalibration}"
    if found.cohort:
        yield from fold(f"People: {found.cohort}")
    yield ""
    yield from tell_count(found.count)
    for at in found.horizons:
        yield ""
        yield from _tell_horizon(at)
    if found.groups:
        yield ""
        yield from _tell_groups(found.groups)
    for remark in found.remarks:
        yield ""
        yield from fold(remark)


def tell_count(count: PeopleCount) -> Iterator[str]:
    """Where everybody went: each person is counted once, at the first of these that is so."""
    yield f"In the file: {count.in_file:,}"
    for id, people in count.excluded.items():
        if people:
            yield f"  The model is not for them, {id}: {people:,}"
    if count.not_covered:
        yield f"  No equation of the model applies: {count.not_covered:,}"
    if count.no_outcome:
        yield f"  Outcome not known: {count.no_outcome:,}"
    if count.missing:
        yield from fold(f"  A value is missing: {count.missing:,} ({_list(count.missing_by)})", hanging=4)
    if count.refused:
        told = f"  A value for which the model gives no number: {count.refused:,} ({_list(count.refused_by)})"
        yield from fold(told, hanging=4)
    yield f"Used: {count.used:,}"
    if any(count.beyond.values()):
        told = f"  Of them with a value outside those the model was made from: {_list(count.beyond)}"
        yield from fold(told, hanging=4)


def _list(counts: Mapping[str, int]) -> str:
    return ", ".join(f"{id} {people:,}" for id, people in counts.items() if people)


def _tell_horizon(at: HorizonValidation) -> Iterator[str]:
    where = "" if at.span is None else f" by {at.span.words}"
    others = f", another event first in {at.competing:,}" if at.outcomes is Outcomes.COMPETING else ""
    yield f"Of {at.people:,} people {at.events:,} were seen to have the event{where}{others}"
    yield f"  Observed risk {_share(at.observed)}, {METHODS[at.observed.method]}"
    yield f"  Predicted risk {spell_percent(at.expected)} on average"
    yield from _tell_measures(list_measures(at))
    if at.brier_null is not None:
        yield f"  Brier score of the observed risk for everybody: {spell_figure(at.brier_null)}"
    for decision in at.decisions:
        yield from _tell_decision(decision)


def _tell_measures(measures: Sequence[tuple[str, Measure]]) -> Iterator[str]:
    width = max(len("Figure"), *(len(name) for name, _ in measures))
    yield f"  {'Figure':<{width}}  {'Value':>7}  {_limits_heading():<18}  How it was made"
    for name, measure in measures:
        if measure.value is None:
            yield from fold(f"  {name:<{width}}  {EN_DASH:>7}  {measure.why}", hanging=4)
            continue
        figures = f"{spell_figure(measure.value):>7}  {_limits(measure):<18}"
        yield f"  {name:<{width}}  {figures}  {METHODS[measure.method]}".rstrip()


def _tell_decision(at: DecisionFigures) -> Iterator[str]:
    label = f" ({at.label})" if at.label else ""
    yield f"  From {spell_percent(at.point)}{label}: flagged {at.flagged:,}, {_share(at.flagged_share)}"
    for name, measure in (
        ("Sensitivity", at.sensitivity),
        ("Specificity", at.specificity),
        ("Positive predictive value", at.positive_value),
        ("Negative predictive value", at.negative_value),
    ):
        yield from fold(f"    {name}: {_share(measure)}")
    if at.missed is not None:
        yield f"    Of 100 people {spell_figure(at.missed, 1)} have the event and are not flagged"
    if at.net_benefit is not None:
        everybody = "" if at.treat_all is None else f"; flagging everybody {spell_figure(at.treat_all)}, nobody 0"
        yield f"    Net benefit {spell_figure(at.net_benefit)}{everybody}"


def _tell_groups(groups: Sequence[GroupFigures]) -> Iterator[str]:
    names = [f"{group.by}: {group.level}" for group in groups]
    width = max(len("Group"), *map(len, names))
    heads = f"{'People':>7}  {'Events':>6}  {'Observed':>8}  {'Predicted':>9}  {'O/E':>5}"
    yield f"{'Group':<{width}}  {heads}  {_limits_heading()}"
    for name, group in zip(names, groups, strict=True):
        head = f"{name:<{width}}  {group.people:>7,}  {group.events:>6,}"
        if group.why:
            yield from fold(f"{head}  {group.why}")
            continue
        ratio = group.observed_to_expected
        figures = f"{spell_percent(group.observed.value):>8}  {spell_percent(group.expected):>9}"
        yield f"{head}  {figures}  {spell_figure(ratio.value, 2):>5}  {_limits(ratio, 2)}".rstrip()


def _share(measure: Measure) -> str:
    """A share with its limits, as percentages; or why there is none."""
    if measure.value is None:
        return measure.why or EN_DASH
    if measure.lower is None or measure.upper is None:
        return spell_percent(measure.value)
    lower, upper = (spell_figure(100.0 * limit, 1) for limit in (measure.lower, measure.upper))
    return f"{spell_percent(measure.value)} ({lower}{EN_DASH}{upper}{NARROW_SPACE}%)"


def _limits(measure: Measure, places: int = 4) -> str:
    if measure.lower is None or measure.upper is None:
        return ""
    return f"{spell_figure(measure.lower, places)} to {spell_figure(measure.upper, places)}"


def _limits_heading() -> str:
    return f"95{NARROW_SPACE}% interval"
