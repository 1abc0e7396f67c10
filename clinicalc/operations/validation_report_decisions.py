"""What acting at a decision point does, for the report: two tables of it, and net benefit over the points."""

from collections.abc import Iterator, Sequence

from clinicalc.assessment.numerals import EN_DASH, NARROW_SPACE, join_words, percent_in_full
from clinicalc.operations.validation_words import at_words, by_words, limits_words, of_hundred, share_of_all
from clinicalc.report.contents import Block, Cell, Column, NetBenefitPart, NotedCell, Prose, Row, Section, Table
from clinicalc.report.net_benefit_words import DecisionMark, ShownNetBenefit, worth_words
from clinicalc.validation.validated import DecisionFigures, HorizonValidation, Measure

_OF_HUNDRED = (
    "Of 100 people like these: how many are flagged, how many of those have the event{by} and how many do not, and how"
    " many have it who are not flagged. People at or above a decision point are flagged. Net benefit is in true"
    " positives of 100 people; acting on nobody is worth 0."
)
_PRACTICE = "On wash: the practice’s decision point."
_NO_POINTS = "No decision point was asked about, and the file states none."
_NO_CURVE = (
    "There is no curve of net benefit: the risk observed among those flagged is not known, or all predictions are 0."
)
_SHARES = (
    "Sensitivity is the share flagged of those with the event, specificity the share not flagged of those without; the"
    f" predictive values are the shares with the event of those flagged, and without of the others. In brackets 95"
    f"{NARROW_SPACE}% limits."
)
_NO_PLACE = "none"


def tell_decisions(horizon: HorizonValidation, practice: Sequence[float] = ()) -> Iterator[Section]:
    """Tables and curve of one horizon; `practice` are the points that the practice acts at."""
    at = at_words(horizon.span)
    if not horizon.decisions:
        yield Section(f"Decisions{at}", (Prose((_NO_POINTS,)),), whole=True)
        yield _net_benefit(horizon)
    else:
        ordered = sorted(horizon.decisions, key=lambda one: one.point)
        own = [one.point in practice for one in ordered]
        note = f" {_PRACTICE}" if any(own) else ""
        said = Prose((f"{_OF_HUNDRED.format(by=by_words(horizon.span))}{note}",), keep=True)
        yield Section(f"Decisions, of 100 people{at}", (said, _of_hundred(ordered, own)), whole=True)
        yield _net_benefit(horizon)
        shares: list[Block] = [Prose((_SHARES,), keep=True), _shares(ordered, own)]
        reasons = tuple(_reasons(ordered))
        shares += [Prose(reasons)] if reasons else []
        yield Section(f"Who is found, and who is not{at}", tuple(shares), whole=True)


def _net_benefit(horizon: HorizonValidation) -> Section:
    shown = show_net_benefit(horizon)
    block = Prose((_NO_CURVE,)) if shown is None else NetBenefitPart(shown)
    return Section(f"Net benefit over decision points{at_words(horizon.span)}", (block,), whole=True)


def show_net_benefit(horizon: HorizonValidation) -> ShownNetBenefit | None:
    """The curve with the decision points asked about; None where there is no curve."""
    curve = horizon.net_benefit
    if curve is None:
        return None
    marks = tuple(DecisionMark(one.point, one.net_benefit, one.treat_all) for one in horizon.decisions)
    span = "" if horizon.span is None else horizon.span.words
    reach = horizon.calibration.spread.quantile(0.99)
    return ShownNetBenefit(curve.points, curve.by_model, curve.treat_all, marks, span, reach=reach)


def flagged_with_event(one: DecisionFigures) -> float | None:
    """The share of all people who are flagged and have the event; None where it is not known."""
    if one.flagged == 0:
        return 0.0
    if one.flagged_share.value is None or one.positive_value.value is None:
        return None
    return one.flagged_share.value * one.positive_value.value


def flagged_without_event(one: DecisionFigures) -> float | None:
    """The share of all people who are flagged and do not have the event; None where it is not known."""
    with_event = flagged_with_event(one)
    return None if with_event is None or one.flagged_share.value is None else one.flagged_share.value - with_event


def _of_hundred(decisions: Sequence[DecisionFigures], own: Sequence[bool]) -> Table:
    columns = (
        Column("act at", 0.0, 120.0),
        Column("flagged", 126.0, 48.0, at_end=True),
        Column("with event", 180.0, 56.0, at_end=True),
        Column("without", 242.0, 56.0, at_end=True),
        Column("missed", 304.0, 56.0, at_end=True),
        Column("net benefit", 366.0, 62.0, at_end=True),
        Column("of acting on everyone", 434.0, 76.0, at_end=True),
    )
    rows = (
        Row(
            (
                _point(one),
                of_hundred(one.flagged_share.value),
                of_hundred(flagged_with_event(one)),
                of_hundred(flagged_without_event(one)),
                EN_DASH if one.missed is None else of_hundred(one.missed / 100.0),
                *(EN_DASH if worth is None else worth_words(worth) for worth in (one.net_benefit, one.treat_all)),
            ),
            marked=marked,
        )
        for one, marked in zip(decisions, own, strict=True)
    )
    return Table(columns, tuple(rows), small=True)


def _shares(decisions: Sequence[DecisionFigures], own: Sequence[bool]) -> Table:
    columns = (
        Column("act at", 0.0, 84.0),
        Column("sensitivity", 90.0, 94.0, at_end=True),
        Column("specificity", 190.0, 94.0, at_end=True),
        Column("positive predictive value", 290.0, 107.0, at_end=True),
        Column("negative predictive value", 403.0, 107.0, at_end=True),
    )
    rows = (
        Row(
            (
                percent_in_full(one.point),
                *(
                    _with_limits(each)
                    for each in (one.sensitivity, one.specificity, one.positive_value, one.negative_value)
                ),
            ),
            marked=marked,
        )
        for one, marked in zip(decisions, own, strict=True)
    )
    return Table(columns, tuple(rows), small=True)


def _point(one: DecisionFigures) -> Cell:
    words = percent_in_full(one.point)
    return NotedCell(words, (one.label,)) if one.label else words


def _with_limits(measure: Measure) -> Cell:
    """The share, and its limits under it in brackets."""
    if measure.value is None:
        return _NO_PLACE
    limits = limits_words(measure, 1, percent=True)
    return NotedCell(share_of_all(measure.value), ("no limits",) if limits == EN_DASH else (f"({limits})",))


def _reasons(decisions: Sequence[DecisionFigures]) -> Iterator[str]:
    """Why figures or limits are lacking at points, each reason once; what another says already is left out."""
    points: dict[str, list[str]] = {}
    for one in decisions:
        measures = (one.sensitivity, one.specificity, one.positive_value, one.negative_value)
        said = list(dict.fromkeys(measure.why for measure in measures if measure.why))
        for why in said:
            if not any(other is not why and other.startswith(why.removesuffix(".")) for other in said):
                points.setdefault(why, []).append(percent_in_full(one.point))
    for why, at in points.items():
        yield f"At {join_words(at)}: {why}"
