"""Which answer of a question a typed text stands for: one rule for worked examples and for patients."""

from collections.abc import Iterable

NOT_MEASURED = "unknown"
"""The text that says of a value that it was not measured; a field left empty does not say so."""

NOT_MEASURED_WORDS = "not measured"
"""The same as people read it; it may be typed as well."""


def find_answer(typed: str, answers: Iterable[tuple[str, str]]) -> int | None:
    """The place of the answer among `answers` (id, label), or None where it is none of them.

    Spaces around and capitals do not count. Ids go before labels: no label can take an answer away from its id.
    """
    said = typed.strip().casefold()
    pairs = list(answers)
    for spellings in ([id for id, _ in pairs], [label.strip().casefold() for _, label in pairs]):
        if said in spellings:
            return spellings.index(said)
    return None


def leaves_open(typed: str, answers: Iterable[tuple[str, str]] = ()) -> bool:
    """Whether a typed text says that a value was not measured, unless it is one of the `answers` (id, label) itself."""
    said = " ".join(typed.split()).casefold()
    return said in (NOT_MEASURED, NOT_MEASURED_WORDS) and find_answer(typed, answers) is None
