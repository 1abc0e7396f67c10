"""What a validation says of people and groups, in rows."""

from collections.abc import Iterator

from clinicalc.gui.study.fact_rows import Fact, FactColumn
from clinicalc.gui.study.validation_state import MadeValidation
from clinicalc.operations.validation_report_groups import horizon_of_groups
from clinicalc.operations.validation_report_people import draw_up_way
from clinicalc.operations.validation_words import figure_words, limits_words, name_field, name_level, share_of_all
from clinicalc.validation.validated import Measure

GROUPS = (
    FactColumn("Group"),
    FactColumn("People", is_figures=True),
    FactColumn("Events", is_figures=True),
    FactColumn("Observed", is_figures=True),
    FactColumn("Expected", is_figures=True),
    FactColumn("O / E", is_figures=True),
    FactColumn("95\u202f% limits", is_figures=True),
    FactColumn("Slope", is_figures=True),
    FactColumn("C", is_figures=True),
)
GROUPS_NOTE = (
    "Groups differ by chance too, small ones most. What was found wrong in a group, all that were looked at considered,"
    " stands at the head of the page."
)
WAY = (FactColumn("Who"), FactColumn("People", is_figures=True))


def groups_heading(made: MadeValidation) -> str:
    """With the horizon at which groups are looked at."""
    whole = horizon_of_groups(made.validation)
    return "Groups" if whole is None or whole.span is None else f"Groups at {whole.span.words}"


def group_facts(made: MadeValidation) -> Iterator[Fact]:
    """Everybody, and a row for each group; why there is no figure stands under it."""
    found, model = made.validation, made.ground.model
    whole = horizon_of_groups(found)
    if whole is not None:
        ratio = whole.observed_to_expected
        cells = _cells(whole.people, whole.events, whole.observed, whole.expected, ratio, whole.slope, whole.c)
        yield Fact(("Everybody", *cells))
    for one in found.groups:
        name = f"{name_field(model, one.by)}: {name_level(model, one.by, one.level)}"
        ratio = one.observed_to_expected
        cells = _cells(one.people, one.events, one.observed, one.expected, ratio, one.slope, one.c)
        yield Fact((name, *cells), one.why)


def way_facts(made: MadeValidation) -> Iterator[Fact]:
    """From everybody in the file to those used."""
    flow = draw_up_way(made.validation.count, made.ground.model)
    for place, stage in enumerate(flow.stages):
        is_last = place + 1 == len(flow.stages)
        name = f"{stage.words[:1].upper()}{stage.words[1:]}"
        yield Fact((name, f"{stage.count:,}"), is_marked=is_last)
        for leaving in stage.leaving:
            yield Fact((f"Left out: {leaving.reason}", f"{leaving.count:,}"))


def way_note(made: MadeValidation) -> str:
    """How many lack or exceed what, "" where nobody does; somebody may be counted under several."""
    found, model = made.validation.count, made.ground.model
    said = []
    for words, counts in (
        ("Outside the derivation range, and used", found.beyond),
        ("Left out, missing", found.missing_by),
        ("Left out, outside the limits of the model", found.refused_by),
    ):
        listed = [f"{name_field(model, id)} {number:,}" for id, number in counts.items() if number]
        if listed:
            said.append(f"{words}: {', '.join(listed)}.")
    return " ".join(said)


def _cells(
    people: int, events: int, observed: Measure, expected: float, ratio: Measure, slope: Measure, c: Measure
) -> tuple[str, ...]:
    return (
        f"{people:,}",
        f"{events:,}",
        share_of_all(observed.value),
        share_of_all(expected),
        figure_words(ratio.value),
        limits_words(ratio),
        figure_words(slope.value),
        figure_words(c.value),
    )
