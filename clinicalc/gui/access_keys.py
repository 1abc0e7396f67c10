"""Access letters: commands keep theirs, labels from files get the first letter that is still free."""

from collections.abc import Iterable

COMMAND_LETTERS = frozenset("nrvuo")
"""New patient, pRint, saVe PDF, Use (an offered unit), Open file."""


def mark_letters(labels: Iterable[str], taken: frozenset[str] = COMMAND_LETTERS) -> tuple[str, ...]:
    """The labels with an ampersand before their access letter; their own ampersands are doubled, so shown as typed."""
    used = set(taken)
    marked = []
    for label in labels:
        place = next((i for i, c in enumerate(label) if c.isascii() and c.isalpha() and c.lower() not in used), None)
        if place is None:
            marked.append(show_ampersands(label))
            continue
        used.add(label[place].lower())
        marked.append(f"{show_ampersands(label[:place])}&{show_ampersands(label[place:])}")
    return tuple(marked)


def show_ampersands(text: str) -> str:
    """The text for a place where an ampersand would mark a letter."""
    return text.replace("&", "&&")
