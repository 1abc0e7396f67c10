"""Which answer of a question a typed text stands for: one rule for worked examples and for patients."""

from collections.abc import Iterable


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
