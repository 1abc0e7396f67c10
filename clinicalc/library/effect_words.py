"""The effect of a change as sentences, and as plain objects for JSON."""

from collections.abc import Iterator, Mapping
from types import MappingProxyType

from clinicalc.assessment.numerals import (
    EN_DASH,
    MINUS,
    MOST_DECIMALS,
    NARROW_SPACE,
    join_words,
    percent,
    percent_in_full,
)
from clinicalc.library.difference_words import Json
from clinicalc.library.effect import Crossed, Effect, ExampleEffect, GridEffect, MovedPatient, Whose
from clinicalc.units.unit import find_unit

_NO_NAMES: Mapping[str, str] = MappingProxyType({})
_SHOWN_EXAMPLES = 12
"""Examples that are written out; the JSON has them all."""


def say_effect(effect: Effect) -> Iterator[str]:
    """What the change does, one sentence a line."""
    for grid in effect.grids:
        yield from say_grid(grid)
        yield ""
    yield from effect.not_compared
    yield "Worked examples of both, by each"
    for example in effect.examples[:_SHOWN_EXAMPLES]:
        yield f"  {_say_example(example)}"
    if len(effect.examples) > _SHOWN_EXAMPLES:
        yield f"  and {len(effect.examples) - _SHOWN_EXAMPLES} more; --json has them all."


def say_grid(grid: GridEffect, names: Mapping[str, str] = _NO_NAMES) -> Iterator[str]:
    """A heading, and indented below it a sentence a line; `names` are those of values by their ids."""
    setting = grid.span.words + ("" if grid.recalibration is None else f", recalibration {grid.recalibration}")
    thinned = "" if grid.patients == grid.whole else f", evenly taken from a grid of {grid.whole}"
    yield f"Effect on {grid.patients} standard patients ({setting}{thinned})"
    neither = grid.patients - grid.both - grid.only_old - grid.only_new
    yield (
        f"  Both versions give a number for {grid.both} of them, only the old one for {grid.only_old}, only the new one"
        f" for {grid.only_new}, neither for {neither}."
    )
    if not grid.both:
        return
    yield f"  The same number to the last bit: {grid.unchanged} of {grid.both}."
    yield f"  Largest rise: {say_moved(grid.largest_rise, names)}"
    yield f"  Largest fall: {say_moved(grid.largest_fall, names)}"
    for point in grid.crossed:
        yield f"  {_say_crossed(point, grid.both)}"
    if not grid.crossed:
        yield "  Neither file states a decision point."
    if grid.width is None:
        yield "  The bands cannot be compared: one version has none, or the links differ."
    else:
        width = grid.width
        least, most = f"{width.least:.3g}", f"{width.most:.3g}"
        if least == most:
            times = "as wide as" if least == "1" else f"{least} times as wide as"
            yield f"  The new band is {times} the old one on the link scale ({width.patients} patients)."
        else:
            yield (
                f"  The new band is {least}{EN_DASH}{most} times as wide as the old one on the link scale (median"
                f" {width.middle:.3g}, {width.patients} patients)."
            )


def say_moved(moved: MovedPatient | None, names: Mapping[str, str] = _NO_NAMES) -> str:
    """Both probabilities, their distance, and the patient as typed, without what has an empty name."""
    if moved is None:
        return "nobody."
    typed = ", ".join(_say_typed(id, text, names.get(id)) for id, text in moved.typed if names.get(id) != "")
    return f"{_pair(moved.old, moved.new)}: {typed}"


def _say_typed(id: str, text: str, name: str | None) -> str:
    return f"{id} {_spell(text)}" if name is None else f"{name} {_spell(text)}"


def _spell(text: str) -> str:
    """A typed value with the unit as people write it; in the JSON it keeps its UCUM code."""
    number, _, code = text.partition(" ")
    known = find_unit(code) if code else None
    return text if known is None else f"{number} {known.spelling}"


def _say_crossed(point: Crossed, both: int) -> str:
    stated = "" if point.in_old and point.in_new else f", only in the {'old' if point.in_old else 'new'} version"
    name = f"{percent_in_full(point.probability)} ({join_words(list(point.labels))}{stated})"
    if not point.upwards and not point.downwards:
        return f"Decision point {name}: none of {both} changes sides."
    return f"Decision point {name}: {point.upwards} of {both} rise to or above it, {point.downwards} fall below it."


def _say_example(example: ExampleEffect) -> str:
    both = (("old", example.old, example.old_because), ("new", example.new, example.new_because))
    answers = [
        f"{whose} no number ({because})" if figure is None else f"{whose} {figure:.6g}"
        for whose, figure, because in both
    ]
    stated = "both state" if example.stated_by is Whose.BOTH else f"{example.stated_by.value} states"
    return f"{stated} {example.stated:g}; {', '.join(answers)}: {example.values}"


def _pair(old: float, new: float) -> str:
    """Two probabilities and their distance in percentage points.

    With as many decimals as tell the two apart and make the distance that of the two figures as written.
    """
    decimals = next((d for d in range(1, MOST_DECIMALS + 1) if _adds_up(old, new, d)), MOST_DECIMALS)
    points = f"{100.0 * (new - old):+.{decimals}f}".replace("-", MINUS)
    before, after = percent(old, decimals=decimals), percent(new, decimals=decimals)
    return f"{before} to {after} ({points}{NARROW_SPACE}points)"


def _adds_up(old: float, new: float, decimals: int) -> bool:
    before, after, distance = (round(100.0 * figure, decimals) for figure in (old, new, new - old))
    return before != after and round(after - before, decimals) == distance


def record_effect(effect: Effect) -> Json:
    """The effect as plain objects; probabilities from 0 to 1."""
    return {
        "grids": [_record_grid(grid) for grid in effect.grids],
        "examples": [
            {
                "stated_by": example.stated_by.value,
                "values": example.values,
                "stated": example.stated,
                "old": example.old,
                "new": example.new,
                "old_because": example.old_because or None,
                "new_because": example.new_because or None,
            }
            for example in effect.examples
        ],
        "not_compared": list(effect.not_compared),
    }


def _record_grid(grid: GridEffect) -> Json:
    return {
        "horizon": {"time": grid.span.time, "unit": grid.span.unit},
        "recalibration": grid.recalibration,
        "patients": grid.patients,
        "whole_grid": grid.whole,
        "number_from_both": grid.both,
        "number_from_old_only": grid.only_old,
        "number_from_new_only": grid.only_new,
        "unchanged": grid.unchanged,
        "largest_rise": _record_moved(grid.largest_rise),
        "largest_fall": _record_moved(grid.largest_fall),
        "decision_points": [
            {
                "probability": point.probability,
                "labels": list(point.labels),
                "in_old": point.in_old,
                "in_new": point.in_new,
                "upwards": point.upwards,
                "downwards": point.downwards,
            }
            for point in grid.crossed
        ],
        "changing_sides": grid.crossing,
        "band_width_ratio": None
        if grid.width is None
        else {
            "least": grid.width.least,
            "median": grid.width.middle,
            "most": grid.width.most,
            "patients": grid.width.patients,
        },
    }


def _record_moved(moved: MovedPatient | None) -> Json | None:
    return None if moved is None else {"values": dict(moved.typed), "old": moved.old, "new": moved.new}
