"""The verdict: the first sentences of a validation, for a reader who reads no further.

Each fault by its name; where none is found, what was looked for and how closely, and never that the model is right.
"""

from collections.abc import Iterator
from math import exp

from clinicalc.assessment.fields import NumberField
from clinicalc.assessment.model import Model
from clinicalc.assessment.numerals import EN_DASH, MINUS, NARROW_SPACE, percent_of, plain
from clinicalc.coefficients.pointers import listed
from clinicalc.units.unit import unit
from clinicalc.validation.coarse_faults import say_range
from clinicalc.validation.intervals import Z
from clinicalc.validation.search import Finding, GroupSight, Search
from clinicalc.validation.suspected_units import find_ordinary
from clinicalc.validation.validated import Fault, FaultKind, HorizonValidation, Measure, Outcomes

_UNSEEN = 1.5
"""Where even predictions so many times off could pass unseen the people are called few."""
_MOST_NAMED = 8
_STEEP = 0.95
_TEN = 10.0
_ENDLESS = 10.0
"""Where a log factor or its standard error is larger, nobody or everybody of the group had the event."""
_OF_GROUPS = frozenset({FaultKind.GROUP_TOO_LOW, FaultKind.GROUP_TOO_HIGH})
_SHIFTS = frozenset({FaultKind.TOO_LOW, FaultKind.TOO_HIGH})


def write_faults(search: Search, horizon: HorizonValidation, model: Model) -> tuple[Fault, ...]:
    """The faults in words, in the order of the search."""
    return tuple(
        Fault(one.kind, _say(one, search, horizon, model), one.at, one.level, one.p) for one in search.findings
    )


def write_verdict(search: Search, faults: tuple[Fault, ...], horizon: HorizonValidation) -> tuple[str, ...]:
    """The first sentences."""
    whom = f"{horizon.people:,} people, {horizon.events:,} of them with the event{_by(horizon)}"
    if search.why:
        return (f"It could not be seen whether anything is wrong. {search.why} ({whom}.)", _say_limits())
    coarse = () if search.coarse is None else (say_range(search.coarse, horizon, named=bool(faults)),)
    if faults:
        more = "What else may be wrong is judged best when this is put right." if len(faults) == 1 else ""
        everybody = [fault.sentence for fault in faults if fault.kind not in _OF_GROUPS]
        groups = [fault.sentence for fault in faults if fault.kind in _OF_GROUPS]
        return (*everybody, *_say_over_all(search, horizon), *groups, *coarse, *((more,) if more else ()))
    if search.coarse is not None and search.coarse.unsure:
        return (*coarse, *_say_looked(search, horizon), _say_limits())
    first = f"Nothing that was looked for was found to be wrong in {whom}."
    if search.shift_factor > _UNSEEN:
        first = (
            f"With {whom}, there are too few to tell: predictions up to {_factor(search.shift_factor)} too high or too"
            f" low throughout, counted in {_scale(horizon)}, could have passed unseen, and nothing was found."
        )
    return (first, *coarse, *_say_looked(search, horizon), _say_limits())


def _say_looked(search: Search, horizon: HorizonValidation) -> tuple[str, ...]:
    """What was looked for, and what would have been found nine times of ten."""
    what = ["predictions too low or too high throughout", "predictions too extreme or too moderate"]
    what += [f"columns in a wrong unit ({_some(search.units)})"] if search.units else []
    what += [f"{len(search.groups)} groups off against the others"] if search.groups else []
    many = _factor(search.shift_factor)
    close = [f"predictions {many} too low or too high throughout (counted in {_scale(horizon)})"]
    if search.slope < _STEEP:
        close.append(f"a slope below {1.0 - search.slope:.2f} or above {1.0 + search.slope:.2f}")
    sentences = [f"Looked for were {listed(what)}.", f"Nine times of ten these people would have shown {listed(close)}"]
    if search.slope >= _STEEP:
        sentences[-1] += ", and hardly a wrong slope"
    if search.groups:
        best = min(search.groups, key=lambda one: one.factor)
        worst = max(search.groups, key=lambda one: one.factor)
        sentences[-1] += (
            f"; a group that is off from {_sight(best)} on" if best.factor < _TEN else "; and hardly a group"
        )
        # the two answers of one question are seen equally well
        apart = _factor(worst.factor) != _factor(best.factor)
        sentences[-1] += f", or only from {_sight(worst)} on" if apart and best.factor < _TEN else ""
    sentences[-1] += "."
    if search.blind:
        blind = _some(search.blind)
        sentences.append(f"A wrong unit of {blind} could not be seen: the model does not say how it was distributed.")
    return tuple(sentences)


def _sight(group: GroupSight) -> str:
    return f"{_factor(group.factor)} ({group.label}: {group.level}, {group.people:,} people)"


def _say_limits() -> str:
    return "Smaller faults, and others than these, may be there: this does not say that the model is right."


def _say(finding: Finding, search: Search, horizon: HorizonValidation, model: Model) -> str:
    match finding.kind:
        case FaultKind.UNIT:
            return _say_unit(finding, model)
        case FaultKind.GROUP_TOO_LOW | FaultKind.GROUP_TOO_HIGH:
            alone = sum(one.kind in _OF_GROUPS for one in search.findings) == 1
            return _say_group(finding, horizon, alone=alone, coarse=search.coarse is not None)
        case FaultKind.TOO_EXTREME | FaultKind.TOO_MODERATE:
            return _say_slope(finding, horizon, as_is=_rests_on_no_unit(search))
        case _:
            return _say_shift(finding, horizon, as_is=_rests_on_no_unit(search))


def _rests_on_no_unit(search: Search) -> bool:
    """Whether findings are of the predictions as they are: beside a wrong unit they are of corrected ones."""
    return all(one.kind is not FaultKind.UNIT for one in search.findings)


def _say_over_all(search: Search, horizon: HorizonValidation) -> Iterator[str]:
    """What holds for everybody, where only groups are said to be off."""
    kinds = {one.kind for one in search.findings}
    if kinds & _OF_GROUPS and not kinds & {*_SHIFTS, FaultKind.UNIT} and horizon.observed.value is not None:
        yield f"Over all {_say_seen(horizon)}."


def _say_seen(horizon: HorizonValidation) -> str:
    observed = horizon.observed.value
    assert observed is not None
    had = f"had the event{_by(horizon)}"
    if horizon.outcomes is Outcomes.TIMES and horizon.competing:  # what was observed is then no share of these people
        had = f"would have had the event{_by(horizon)} if no other event came first"
    seen = f"{percent_of(observed)} {had}, {percent_of(horizon.expected)} were predicted"
    return f"{seen} (observed over expected {_measure(horizon.observed_to_expected)})"


def _say_shift(finding: Finding, horizon: HorizonValidation, *, as_is: bool) -> str:
    word = "low" if finding.kind is FaultKind.TOO_LOW else "high"
    if not as_is:
        return f"Beside that the predictions are too {word} throughout: {_ratio(finding, horizon)}."
    ratio = horizon.observed_to_expected.value
    if ratio is None or horizon.observed.value is None:
        return f"The predictions are too {word} throughout: {_ratio(finding, horizon)}."
    if (ratio > 1.0) is not (finding.size > 0.0):
        return f"But for what is said of a group the predictions are too {word}: {_ratio(finding, horizon)}."
    return f"The predictions are too {word} throughout: {_say_seen(horizon)}."


def _say_slope(finding: Finding, horizon: HorizonValidation, *, as_is: bool) -> str:
    own = Measure(finding.size, finding.size - Z * finding.se, finding.size + Z * finding.se)
    stated = horizon.slope.value
    shown = own if not as_is or stated is None or (stated > 1.0) is not (finding.size > 1.0) else horizon.slope
    if finding.kind is FaultKind.TOO_EXTREME:
        what = "too extreme: high risks are predicted too high and low ones too low"
    else:
        what = "too moderate: high risks are predicted too low and low ones too high"
    said = f"The predictions are {what} (calibration slope {_measure(shown)}, where 1 is right)."
    if (shown.value or 0.0) <= 0.0 or (shown.lower or 0.0) <= 0.0:
        said += (
            " It cannot be told that those with the higher predicted risk had more events than those with the lower:"
            " look for a column or an outcome coded the other way round."
        )
    return said


def _say_group(finding: Finding, horizon: HorizonValidation, *, alone: bool, coarse: bool) -> str:
    """A group beside the others, never as too high or low by itself where everybody's predictions are off or may be."""
    word = "low" if finding.kind is FaultKind.GROUP_TOO_LOW else "high"
    who = f"{finding.label}: {finding.level} ({finding.people:,} people)"
    if alone and not finding.rest and not coarse:
        said = f"{_ratio(finding, horizon)}, in the others as predicted"
        return f"The predictions are too {word} in one group, {who}: {said}."
    others = "the others" if alone else "others who are alike in what else is said here"
    is_binary = horizon.outcomes is Outcomes.BINARY
    what, those = ("odds of the event", "those") if is_binary else ("rate of the event", "that")
    said = f"the {what}{_by(horizon)}, beside what was predicted, {_times(finding, horizon)} {those} of {others}"
    if not finding.rest:
        return f"One group is off against the others, {who}: {said}."
    shift = "low" if finding.rest > 0.0 else "high"
    if (finding.size > 0.0) is (finding.rest > 0.0):
        return f"The predictions are too {shift} by more in one group, {who}: {said}."
    if abs(finding.size) < abs(finding.rest):
        return f"The predictions are too {shift} by less in one group, {who}: {said}."
    return f"The predictions are not too {shift} in one group, {who}: {said}."


def _say_unit(finding: Finding, model: Model) -> str:
    suspicion, field = finding.suspicion, model.by_id[finding.at]
    assert suspicion is not None
    assert isinstance(field, NumberField)
    ordinary = find_ordinary(model, field)
    now, then = suspicion.middles
    after = f" {unit(field.unit).spelling}" if field.unit != "1" else ""
    beside = "" if ordinary is None else f", where {plain(ordinary.middle())}{after} is {ordinary.source}"
    said = (
        f"The column of {field.label} {suspicion.words}: half of its values lie above {plain(now)}{after}{beside};"
        f" read anew it is {plain(then)}{after}"
    )
    fits = ", and the predictions then fit what was seen better" if finding.p is not None and finding.p < 0.05 else ""
    return f"{said}{fits}. Correct its unit and look again: every other figure here rests on this column."


def _ratio(finding: Finding, horizon: HorizonValidation) -> str:
    """The hazard or odds beside those predicted; not named by their own names they would be read as risks."""
    if horizon.outcomes is Outcomes.BINARY:
        return f"the odds of the event{_by(horizon)} {_times(finding, horizon)} those predicted"
    return f"the rate of the event{_by(horizon)} {_times(finding, horizon)} that predicted"


def _times(finding: Finding, horizon: HorizonValidation) -> str:
    verb = "were" if horizon.outcomes is Outcomes.BINARY else "was"
    if max(finding.se, abs(finding.size)) > _ENDLESS:
        none = finding.size < 0.0
        factor = "0.00" if none else "any number of"
        return f"{verb} {factor} times ({'nobody' if none else 'everybody'} in it had the event: no limits follow)"
    low, high = exp(finding.size - Z * finding.se), exp(finding.size + Z * finding.se)
    return f"{verb} {exp(finding.size):.2f} times ({low:.2f}{EN_DASH}{high:.2f})"


def _scale(horizon: HorizonValidation) -> str:
    """What a factor is a factor of; where the event is frequent, that of risks is nearer 1."""
    return "odds" if horizon.outcomes is Outcomes.BINARY else "rates"


def _factor(factor: float) -> str:
    return f"{factor:.3g} times" if factor < _TEN else "ten times and more"


def _measure(measure: Measure) -> str:
    if measure.value is None:
        return "not known"
    value = f"{measure.value:.2f}".replace("-", MINUS)
    if measure.lower is None or measure.upper is None:
        return value
    ends = [f"{end:.2f}".replace("-", MINUS) for end in (measure.lower, measure.upper)]
    joint = " to " if MINUS in "".join(ends) else EN_DASH
    return f"{value}, 95{NARROW_SPACE}% interval {ends[0]}{joint}{ends[1]}"


def _by(horizon: HorizonValidation) -> str:
    return "" if horizon.span is None else f" by {horizon.span.words}"


def _some(names: tuple[str, ...]) -> str:
    more = f" and {len(names) - _MOST_NAMED} more" if len(names) > _MOST_NAMED else ""
    return ", ".join(names[:_MOST_NAMED]) + more if more else listed(names)
