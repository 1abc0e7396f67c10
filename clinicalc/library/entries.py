"""Two entries of one paper, made by two persons who did not see each other's: every figure in which they differ.

Numbers are compared to the last digit, texts but for their spaces. Terms are set side by side by their names, or, where
the persons named them differently, by what they are multiplied with.
"""

from collections import Counter
from collections.abc import Iterator
from dataclasses import dataclass, replace

from clinicalc.coefficients.schema import ModelContent
from clinicalc.library.aspects import Aspect
from clinicalc.library.difference import Change, compare_pair, is_counted, pair_figures
from clinicalc.library.figures import Ends, Figure, Order, Table, Texts, list_figures


@dataclass(frozen=True, slots=True)
class Entries:
    """What differs, figures (numbers, and what they belong to) apart from texts; `old` is entry A and `new` entry B.

    `agreeing` counts, for each kind of statement, the figures and texts that are the same.
    """

    figures: tuple[Change, ...]
    texts: tuple[Change, ...]
    agreeing: tuple[tuple[Aspect, int], ...]
    agreeing_figures: int
    agreeing_texts: int

    @property
    def agrees(self) -> bool:
        """Whether nothing differs at all."""
        return not self.figures and not self.texts


_PROSE = frozenset(
    {
        Aspect.IDENTITY,
        Aspect.TITLE,
        Aspect.EXCLUSIONS,
        Aspect.QUESTIONS,
        Aspect.CAUTIONS,
        Aspect.USE,
        Aspect.SOURCE,
        Aspect.UNCONFIRMED,
        Aspect.DOCUMENTATION,
    }
)
"""What is said in words: where two texts of these kinds differ, no figure does."""


def compare_entries(a: ModelContent, b: ModelContent) -> Entries:
    """The comparison of entry A with entry B; a matrix figure by figure."""
    mine = tuple(_spread_out(list_figures(a)))
    yours = tuple(_renamed(mine, tuple(_spread_out(list_figures(b)))))
    figures: list[Change] = []
    texts: list[Change] = []
    agreeing: Counter[Aspect] = Counter()
    same_figures = same_texts = 0
    for before, after in pair_figures(mine, yours):
        one = after or before
        assert one is not None
        found = list(compare_pair(before, after))
        is_text = _is_text(one)
        if found:
            (texts if is_text else figures).extend(found)
        elif is_counted(one):
            agreeing[one.aspect] += 1
            same_texts += is_text
            same_figures += not is_text
    places = {aspect: place for place, aspect in enumerate(Aspect)}
    counted = tuple(sorted(agreeing.items(), key=lambda item: places[item[0]]))
    return Entries(tuple(figures), tuple(texts), counted, same_figures, same_texts)


def _is_text(figure: Figure) -> bool:
    """Whether only words are at stake: neither a number nor what a number belongs to."""
    if isinstance(figure.value, Order | Texts):
        return True
    prose = figure.aspect in _PROSE or figure.key[-1] in ("source", "label", "because", "which", "meaning")
    return isinstance(figure.value, str) and prose


def _spread_out(figures: tuple[Figure, ...]) -> Iterator[Figure]:
    """Each figure of a matrix as one of its own, and texts with single spaces."""
    for figure in figures:
        value = figure.value
        if isinstance(value, Table):
            for (row, column), number in value.cells.items():
                name = f"{row} and {column}" if column else row
                yield replace(figure, key=(*figure.key, row, column), what=f"{figure.what}: {name}", value=number)
        elif isinstance(value, Ends):
            for side, end in (("lower end", value.low), ("upper end", value.high)):
                yield replace(figure, key=(*figure.key, side), what=f"{figure.what}: {side}", value=end)
        elif isinstance(value, Texts):
            yield replace(figure, value=Texts(tuple(" ".join(text.split()) for text in value.items)))
        else:
            yield replace(figure, value=" ".join(value.split()) if isinstance(value, str) else value)


def _renamed(mine: tuple[Figure, ...], yours: tuple[Figure, ...]) -> Iterator[Figure]:
    """The statements of B, each term that A names otherwise under A's name for it."""
    names = _names_in_a(mine, yours)
    for figure in yours:
        equation = figure.key[:2]
        yield replace(figure, key=tuple(names.get((*equation, part), part) for part in figure.key))


def _names_in_a(mine: tuple[Figure, ...], yours: tuple[Figure, ...]) -> dict[tuple[str, ...], str]:
    """For terms that only B names so: what A calls the one term of the same equation with the same factors."""
    own, other = _terms(mine), _terms(yours)
    names = {}
    for (equation, id), factors in other.items():
        alike = [name for (place, name), product in own.items() if place == equation and product == factors]
        twins = [name for (place, name), product in other.items() if place == equation and product == factors]
        if (equation, id) not in own and len(alike) == len(twins) == 1 and (equation, alike[0]) not in other:
            names[(*equation, id)] = alike[0]
    return names


def _terms(figures: tuple[Figure, ...]) -> dict[tuple[tuple[str, ...], str], str]:
    """Equation and name of each term, with what it is multiplied with."""
    return {
        (figure.key[:2], figure.key[3]): str(figure.value)
        for figure in figures
        if figure.aspect is Aspect.COEFFICIENTS and figure.key[-1] == "of"
    }
