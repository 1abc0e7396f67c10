"""A study file changed part by part: what stays the same keeps its letters, its comments and its place.

A part is a single value at the top of the file, or everything under one name in square brackets. What comes out is read
back, and is only taken where it says what it should.
"""

import tomllib
from collections.abc import Iterator, Mapping
from dataclasses import dataclass

from clinicalc.operations.study_toml import has_comments, is_tables, spell_toml

Tree = Mapping[str, object]


@dataclass(frozen=True, slots=True)
class _Part:
    """Lines of the file, and the name that they are of; "" for what is of none, such as a comment at the top."""

    name: str
    text: str
    is_table: bool = False


def revise_toml(text: str, tree: Tree) -> str:
    """The text with every part spelled anew that the tree has otherwise; all of it where that is not to be done."""
    try:
        before = tomllib.loads(text)
        revised = "".join(_revise(_split(text), before, tree))
        return revised if tomllib.loads(revised) == tree else spell_toml(tree)
    except tomllib.TOMLDecodeError:
        return spell_toml(tree)


def find_lost_comments(text: str, tree: Tree) -> tuple[str, ...]:
    """The names of the parts whose comments a revision loses, because they are changed."""
    try:
        before = tomllib.loads(text)
    except tomllib.TOMLDecodeError:
        return ()
    changed = (part for part in _split(text) if part.name and before.get(part.name) != tree.get(part.name))
    return tuple(dict.fromkeys(part.name for part in changed if has_comments(part.text)))


def _revise(parts: tuple[_Part, ...], before: Tree, tree: Tree) -> Iterator[str]:
    """Single values come before the first table, as TOML has it; tables that are new come last."""
    done: set[str] = set()
    known = {part.name for part in parts}
    new = {name: value for name, value in tree.items() if name not in known}
    singles = {name: value for name, value in new.items() if not _is_table(value)}
    is_head = True
    for part in parts:
        if part.is_table and is_head:
            is_head = False
            yield spell_toml(singles)
        if not part.name or (part.name in tree and before[part.name] == tree[part.name]):
            yield part.text
        elif part.name in tree and part.name not in done:
            spelled = spell_toml({part.name: tree[part.name]})
            yield f"{spelled}\n" if part.is_table else spelled
        done.add(part.name)
    if is_head:
        yield spell_toml(singles)
    for name, value in new.items():
        if _is_table(value):
            yield f"\n{spell_toml({name: value})}"


def _split(text: str) -> tuple[_Part, ...]:
    """The parts in their order; comments directly over a table are of it."""
    lines = text.splitlines(keepends=True)
    if lines and not lines[-1].endswith("\n"):
        lines[-1] += "\n"
    parts: list[_Part] = []
    first = next((place for place in range(len(lines)) if _begins_table(lines, place)), len(lines))
    starts = [place for place in range(first, len(lines)) if _begins_table(lines, place)]
    begins = [_with_comments(lines, place) for place in starts]
    parts += _split_head(lines[: begins[0] if begins else len(lines)])
    for place, start, end in zip(starts, begins, [*begins[1:], len(lines)], strict=False):
        [name] = tomllib.loads(lines[place])
        parts.append(_Part(name, "".join(lines[start:end]), is_table=True))
    return tuple(parts)


def _split_head(lines: list[str]) -> Iterator[_Part]:
    """Each single value with all of its lines."""
    start = 0
    while start < len(lines):
        end = start + 1
        while end < len(lines) and not _reads("".join(lines[start:end])):
            end += 1
        text = "".join(lines[start:end])
        yield _Part(next(iter(tomllib.loads(text)), ""), text)
        start = end


def _begins_table(lines: list[str], place: int) -> bool:
    """Whether a line is the head of a table, and not within a list or a text of several lines."""
    return lines[place].lstrip().startswith("[") and _reads("".join(lines[:place])) and _reads(lines[place])


def _with_comments(lines: list[str], place: int) -> int:
    while place and lines[place - 1].lstrip().startswith("#"):
        place -= 1
    return place


def _reads(text: str) -> bool:
    try:
        tomllib.loads(text)
    except tomllib.TOMLDecodeError:
        return False
    return True


def _is_table(value: object) -> bool:
    return isinstance(value, dict) or is_tables(value)
