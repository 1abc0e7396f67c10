"""The groups of a validation for its report: observed over expected of all beside each other, and their figures."""

from collections.abc import Iterator

from clinicalc.assessment.model import Model
from clinicalc.assessment.numerals import EN_DASH
from clinicalc.operations.validation_words import figure_words, limits_words, name_field, name_level, share_of_all
from clinicalc.report.contents import Cell, Column, GroupsPart, NotedCell, Prose, Row, Section, Table
from clinicalc.report.group_figure import ShownGroup, ShownGroups
from clinicalc.validation.validated import GroupFigures, HorizonValidation, Measure, Validation

_CHANCE = (
    "Groups differ by chance too, small ones most; that one of many lies beyond its limits is to be expected. What was"
    " found wrong in a group, all that were looked at considered, stands at the beginning."
)
_NONE = "No group was named."
_EVERYBODY = "Everybody"


def tell_groups(validation: Validation, model: Model) -> Iterator[Section]:
    """One figure of all groups, and a table; a sentence where no group was named."""
    if not validation.groups:
        yield Section("Groups", (Prose((_NONE,)),), whole=True)
        return
    shown = show_groups(validation, model)
    at = f", {shown.span}" if shown.span else ""
    yield Section(f"Groups{at}", (GroupsPart(shown), Prose((_CHANCE,))), whole=True)
    yield Section(f"Figures of the groups{at}", (_table(validation, model),))


def horizon_of_groups(validation: Validation) -> HorizonValidation | None:
    """The horizon at which groups are looked at: the longest."""
    spans = [each for each in validation.horizons if each.span is not None]
    longest = max(spans, key=lambda each: each.span.days if each.span else 0.0, default=None)
    return longest or next(iter(validation.horizons), None)


def show_groups(validation: Validation, model: Model) -> ShownGroups:
    """Everybody, and every group, with names as the model has them."""
    horizon = horizon_of_groups(validation)
    rows = []
    if horizon is not None:
        ratio = horizon.observed_to_expected
        rows.append(
            ShownGroup("", _EVERYBODY, horizon.people, horizon.events, ratio.value, ratio.lower, ratio.upper, ratio.why)
        )
    for group in validation.groups:
        ratio = group.observed_to_expected
        by, level = name_field(model, group.by), name_level(model, group.by, group.level)
        why = group.why or ratio.why
        rows.append(ShownGroup(by, level, group.people, group.events, ratio.value, ratio.lower, ratio.upper, why))
    span = "" if horizon is None or horizon.span is None else horizon.span.words
    return ShownGroups(tuple(rows), span)


def _table(validation: Validation, model: Model) -> Table:
    columns = (
        Column("group", 0.0, 150.0),
        Column("people", 156.0, 40.0, at_end=True),
        Column("events", 202.0, 40.0, at_end=True),
        Column("observed", 248.0, 76.0, at_end=True),
        Column("expected", 330.0, 48.0, at_end=True),
        Column("slope", 384.0, 60.0, at_end=True),
        Column("C", 450.0, 60.0, at_end=True),
    )
    return Table(columns, tuple(_row(group, model) for group in validation.groups), small=True)


def _row(group: GroupFigures, model: Model) -> Row:
    by, level = name_field(model, group.by), name_level(model, group.by, group.level)
    name = NotedCell(f"{by}: {level}", (group.why,)) if group.why else f"{by}: {level}"
    observed = group.observed
    risk: Cell = EN_DASH
    if observed.value is not None:
        limits = limits_words(observed, 1, percent=True)
        risk = NotedCell(share_of_all(observed.value), () if limits == EN_DASH else (f"({limits})",))
    return Row(
        (
            name,
            f"{group.people:,}",
            f"{group.events:,}",
            risk,
            share_of_all(group.expected),
            _figure(group.slope),
            _figure(group.c),
        )
    )


def _figure(measure: Measure) -> Cell:
    """The figure, its limits under it."""
    if measure.value is None:
        return EN_DASH
    limits = limits_words(measure)
    return NotedCell(figure_words(measure.value), () if limits == EN_DASH else (f"({limits})",))
