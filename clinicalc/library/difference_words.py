"""A difference, its effect and a comparison of two entries as lines of text, and as plain objects for JSON."""

import textwrap
from collections.abc import Iterator, Mapping, Sequence

from clinicalc.library.difference import Change, Difference
from clinicalc.library.entries import Entries

Json = Mapping[str, object]

_WIDTHS = (40, 28, 28)
"""Columns of a table of changes: what, old, new; two spaces between them."""
ABSENT = "—"


def say_difference(found: Difference) -> Iterator[str]:
    """The table of what changed and the sentence about what is the same. Lines are folded already, but for the last."""
    if not found.changes:
        yield "Every statement of the two is the same."
    else:
        yield f"What changed ({len(found.changes)})"
        yield from say_changes(found.changes, ("what", "old", "new"))
    yield ""
    yield found.say_same()


def say_changes(changes: Sequence[Change], heads: tuple[str, str, str]) -> Iterator[str]:
    """A table of three columns, with the kind of statement above its rows and the place in the file below each."""
    yield from _row(heads)
    aspect = None
    for change in changes:
        if change.aspect is not aspect:
            aspect = change.aspect
            yield aspect.value.capitalize()
        place = change.new_path or f"{change.old_path} ({heads[1]} only)"
        yield from _row((f"  {change.what}", change.old or ABSENT, change.new or ABSENT))
        yield f"      {place}"


def say_entries(found: Entries) -> Iterator[str]:
    """What differs between two entries of one paper, and how much agrees."""
    for title, changes in (("Figures that differ", found.figures), ("Texts that differ", found.texts)):
        if changes:
            yield f"{title} ({len(changes)})"
            yield from say_changes(changes, ("what", "entry A", "entry B"))
            yield ""
    agree = ", ".join(f"{aspect.value} {count}" for aspect, count in found.agreeing)
    yield f"Agree: {found.agreeing_figures} figures and {found.agreeing_texts} texts ({agree})."
    if found.agrees:
        yield "The two entries agree in every figure and every text."


def record_difference(found: Difference) -> Json:
    """The changes, and the counts of what is the same, as plain objects."""
    return {
        "changes": [record_change(change) for change in found.changes],
        "same": {aspect.value: count for aspect, count in found.same},
        "untouched": [aspect.value for aspect in found.untouched],
        "says": found.say_same(),
    }


def record_entries(found: Entries) -> Json:
    """The comparison of two entries as plain objects; "old" is entry A, "new" entry B."""
    return {
        "agrees": found.agrees,
        "figures": [record_change(change) for change in found.figures],
        "texts": [record_change(change) for change in found.texts],
        "agreeing": {aspect.value: count for aspect, count in found.agreeing},
        "agreeing_figures": found.agreeing_figures,
        "agreeing_texts": found.agreeing_texts,
    }


def record_change(change: Change) -> Json:
    """One change; null where one of the two says nothing."""
    return {
        "about": change.aspect.value,
        "what": change.what,
        "kind": change.kind.value,
        "old": change.old if change.old_path else None,
        "new": change.new if change.new_path else None,
        "old_path": change.old_path or None,
        "new_path": change.new_path or None,
    }


def _row(cells: tuple[str, str, str]) -> Iterator[str]:
    """Three texts side by side, each folded in its column; a word that is too long is broken."""
    columns = [
        textwrap.wrap(cell, width, subsequent_indent="    " if place == 0 else "", break_on_hyphens=False) or [""]
        for place, (cell, width) in enumerate(zip(cells, _WIDTHS, strict=True))
    ]
    for line in range(max(map(len, columns))):
        parts = [
            (column[line] if line < len(column) else "").ljust(w) for column, w in zip(columns, _WIDTHS, strict=True)
        ]
        yield "  ".join(parts).rstrip()
