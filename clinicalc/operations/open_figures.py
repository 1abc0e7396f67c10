"""The figures that a coefficient file calls unconfirmed, each in words, with its digits and who compared it."""

from collections.abc import Iterator, Sequence
from dataclasses import dataclass

from clinicalc.assessment.numerals import MINUS
from clinicalc.coefficients.schema import ModelContent, Unconfirmed
from clinicalc.covariates.term_words import say_figure
from clinicalc.library.difference import say_value
from clinicalc.library.figures import Ends, Figure, Order, Table, list_figures
from clinicalc.library.records import Compared

MOST_SAID = 6
"""How many statements of one part are said in one line; `parts` holds all of them."""
MOST_ROWS = 60
"""Of a matrix whose rows are given one by one; of a larger one, such as a thousand draws, only its size is said."""


@dataclass(frozen=True, slots=True)
class OpenFigure:
    """One entry of `unconfirmed`. `at` is its JSON Pointer into the model ("" the whole), `what` says it in words.

    `figure` is what the file states there with every digit it has: one figure, or several with their names, or how many
    they are. `parts` holds each statement by itself, words and figure. `compared_by` is whom the approval in force
    names, "" nobody.
    """

    at: str
    what: str
    figure: str
    why: str
    check_against: str
    compared_by: str
    parts: tuple[tuple[str, str], ...] = ()


def list_open_figures(content: ModelContent, compared: Sequence[Compared] = ()) -> tuple[OpenFigure, ...]:
    """Every entry in file order; `compared` is what the approval in force says."""
    figures = list_figures(content) if content.unconfirmed else ()
    names = {one.at: one.by for one in compared}
    return tuple(_open_figure(entry, figures, names.get(entry.at, "")) for entry in content.unconfirmed)


def _open_figure(entry: Unconfirmed, figures: Sequence[Figure], by: str) -> OpenFigure:
    place = f"/model{entry.at}"
    there = [figure for figure in figures if figure.path == place or figure.path.startswith(f"{place}/")]
    found = [figure for figure in there if not isinstance(figure.value, Order)]  # an order is no figure to compare
    shared = _shared_words([figure.what for figure in found])
    parts = tuple(part for figure in found for part in _parts(figure, shared))
    what = _list_words(there, place) or shared or _step_words(entry.at)
    return OpenFigure(entry.at, what, _say(parts), entry.why, entry.check_against, by, parts)


def _list_words(figures: Sequence[Figure], place: str) -> str:
    """What a whole list is called, which its order says: "equation women: terms"; "" for anything else."""
    orders = (one.what for one in figures if one.path == place and isinstance(one.value, Order))
    return next(orders, "").rpartition(": ")[0]


def _parts(figure: Figure, shared: str) -> Iterator[tuple[str, str]]:
    """The statement, or each row of a matrix, which the figures of a paper are compared with one by one."""
    words = figure.what.removeprefix(shared).removeprefix(": ")
    table = figure.value
    if not isinstance(table, Table) or len(table.rows) > MOST_ROWS:
        yield words, _figure_words(figure)
        return
    for row in table.rows:
        cells = [table.cells[row, column] for column in table.columns if (row, column) in table.cells]
        yield f"{words}, {row}".removeprefix(", "), "  ".join(_true_minus(say_figure(cell)) for cell in cells)


def _figure_words(figure: Figure) -> str:
    if figure.value is None:
        return "not stated"
    words = say_value(figure.value)
    return _true_minus(words) if isinstance(figure.value, float | Ends) else words


def _true_minus(digits: str) -> str:
    """The digits of a file as a sentence has them: with the sign for minus, which no hyphen is."""
    return digits.replace("-", MINUS)


def _step_words(at: str) -> str:
    """A pointer's last step that is a word: "equations"; the whole model where there is none."""
    steps = [step for step in at.split("/") if step and not step.isdigit()]
    return steps[-1].replace("_", " ") if steps else "whole model"


def _shared_words(whats: Sequence[str]) -> str:
    """What several statements are all about: the beginning that they share, cut between its parts."""
    if not whats:
        return ""
    shared = whats[0].split(": ")
    for what in whats[1:]:
        pairs = zip(shared, what.split(": "), strict=False)
        shared = shared[: next((i for i, (mine, yours) in enumerate(pairs) if mine != yours), len(shared))]
    return ": ".join(shared)


def _say(parts: Sequence[tuple[str, str]]) -> str:
    if len(parts) == 1:
        return parts[0][1]
    if len(parts) > MOST_SAID or not parts:
        return f"{len(parts)} statements"
    return "; ".join(f"{words} {figure}".strip() for words, figure in parts)
