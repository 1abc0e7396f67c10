"""Long sentences folded for a terminal."""

import textwrap

WIDTH = 100
"""Columns."""


def fold(line: str, *, hanging: int = 2) -> list[str]:
    """The line folded at spaces to `WIDTH` columns, further lines indented `hanging` columns more than the first."""
    indent = len(line) - len(line.lstrip(" "))
    return textwrap.wrap(
        line,
        WIDTH,
        subsequent_indent=" " * (indent + hanging),
        drop_whitespace=True,
        break_long_words=False,
        break_on_hyphens=False,
        expand_tabs=False,
        replace_whitespace=False,
    ) or [""]
