"""The decision table of a validation in rows: what acting at each point does to 100 people."""

from collections.abc import Iterator, Sequence

from clinicalc.assessment.numerals import EN_DASH, NARROW_SPACE, join_words, percent_in_full
from clinicalc.gui.study.fact_rows import Fact, FactColumn
from clinicalc.operations.validation_report_decisions import flagged_with_event, flagged_without_event
from clinicalc.operations.validation_words import limits_words, of_hundred, share_of_all
from clinicalc.report.net_benefit_words import worth_words
from clinicalc.validation.validated import DecisionFigures, HorizonValidation, Measure

DECISIONS = tuple(
    FactColumn(name, is_figures=True)
    for name in ("act at", "flagged", "with event", "without", "missed", "net benefit")
)
FOUND = tuple(
    FactColumn(name, is_figures=True)
    for name in ("act at", "sensitivity", "specificity", "predictive value +", "predictive value −")
)
_NONE = (
    "No decision point was asked about, and the file states none. A validation file names them under decision_points;"
    " the practice’s own stand in Settings."
)
_WHAT = (
    "Flagged are people at or above the point, of them with the event and without; missed have the event and are not"
    " flagged. Net benefit in true positives of 100 people."
)


def decision_facts(shown: HorizonValidation, practice: Sequence[float]) -> Iterator[Fact]:
    """A row for each decision point, the practice's own set off."""
    for one in _ordered(shown):
        cells = (
            _point(one.point),
            of_hundred(one.flagged_share.value),
            of_hundred(flagged_with_event(one)),
            of_hundred(flagged_without_event(one)),
            EN_DASH if one.missed is None else of_hundred(one.missed / 100.0),
            EN_DASH if one.net_benefit is None else worth_words(one.net_benefit),
        )
        yield Fact(cells, is_marked=one.point in practice)


def decision_notes(shown: HorizonValidation, practice: Sequence[float]) -> Iterator[str]:
    """What the columns are, and which point is the practice's."""
    if not shown.decisions:
        yield _NONE
        return
    own = [_point(one.point) for one in _ordered(shown) if one.point in practice]
    verb = "is the practice’s decision point" if len(own) == 1 else "are the practice’s decision points"
    said = f" {join_words(own)} {verb}." if own else ""
    yield f"{_WHAT}{said}"


def found_facts(shown: HorizonValidation, practice: Sequence[float]) -> Iterator[Fact]:
    """What a flag at each decision point tells, with limits; why something is not known stands under it."""
    for one in _ordered(shown):
        measures = (one.sensitivity, one.specificity, one.positive_value, one.negative_value)
        why = " ".join(dict.fromkeys(measure.why for measure in measures if measure.why))
        cells = (_point(one.point), *(_with_limits(measure) for measure in measures))
        yield Fact(cells, " ".join(part for part in (one.label, why) if part), is_marked=one.point in practice)


def _ordered(shown: HorizonValidation) -> list[DecisionFigures]:
    return sorted(shown.decisions, key=lambda one: one.point)


def _point(value: float) -> str:
    """Without the nought that stands for no tenth."""
    return percent_in_full(value).replace(f".0{NARROW_SPACE}", NARROW_SPACE)


def _with_limits(measure: Measure) -> str:
    if measure.value is None:
        return EN_DASH
    limits = limits_words(measure, 1, percent=True)
    return f"{share_of_all(measure.value)}{'' if limits == EN_DASH else f' ({limits})'}"
