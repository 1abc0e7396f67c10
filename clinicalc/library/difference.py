"""What changed between two versions of a model: every statement of both, set side by side by name, in page order."""

from collections import Counter
from collections.abc import Iterator, Sequence
from dataclasses import dataclass, replace
from difflib import SequenceMatcher
from enum import StrEnum

from clinicalc.assessment.numerals import join_words
from clinicalc.coefficients.schema import ModelContent
from clinicalc.covariates.term_words import say_figure
from clinicalc.library.aspects import Aspect
from clinicalc.library.figures import Ends, Figure, Order, Table, Texts, Value, list_figures


class ChangeKind(StrEnum):
    """What happened to a statement; part of exported records."""

    CHANGED = "changed"
    ADDED = "added"
    REMOVED = "removed"


@dataclass(frozen=True, slots=True)
class Change:
    """One statement that differs. `old` or `new` is "" where that version does not make it.

    `old_path` and `new_path` are JSON Pointers into the two files, "" where there is nothing.
    """

    aspect: Aspect
    what: str
    old: str
    new: str
    old_path: str
    new_path: str

    @property
    def kind(self) -> ChangeKind:
        """Whether the statement is in both versions, only in the new one, or only in the old one."""
        if not self.new_path:
            return ChangeKind.REMOVED
        return ChangeKind.CHANGED if self.old_path else ChangeKind.ADDED


@dataclass(frozen=True, slots=True)
class Difference:
    """The changes in page order, and how many statements of each kind are the same in both."""

    changes: tuple[Change, ...]
    same: tuple[tuple[Aspect, int], ...]

    @property
    def untouched(self) -> tuple[Aspect, ...]:
        """The kinds of statements in which nothing changed at all, among those that both versions make."""
        changed = {change.aspect for change in self.changes}
        return tuple(aspect for aspect, _ in self.same if aspect not in changed)

    def say_same(self) -> str:
        """The sentence that says what is the same, and how many statements that is."""
        untouched = self.untouched
        whole = [f"{aspect.value} ({count})" for aspect, count in self.same if aspect in untouched]
        partly = [f"{count} of the {aspect.value}" for aspect, count in self.same if aspect not in untouched]
        said = f"Same: {join_words(whole)}." if whole else "Same: no kind of statement as a whole."
        return f"{said} Same besides: {join_words(partly)}." if partly else said


def find_difference(old: ModelContent, new: ModelContent) -> Difference:
    """Every statement in which the two differ, to the last digit and letter; what came or went whole is one row."""
    before, after = list_figures(old), list_figures(new)
    shared = {_part_of(figure) for figure in before} & {_part_of(figure) for figure in after}
    changes: list[Change] = []
    whole: dict[tuple[str, ...], int] = {}
    same: Counter[Aspect] = Counter()
    for mine, yours in pair_figures(before, after):
        figure = yours or mine
        assert figure is not None
        part = _part_of(figure)
        found = list(compare_pair(mine, yours))
        if part is None or part in shared:
            changes += found
            same[figure.aspect] += is_counted(figure) and not found
        elif part in whole:
            changes[whole[part]] = _joined(changes[whole[part]], figure, *found)
        elif found:
            whole[part] = len(changes)
            changes.append(_as_whole(figure, found[0]))
    places = {aspect: place for place, aspect in enumerate(Aspect)}
    counted = sorted((item for item in same.items() if item[1]), key=lambda item: places[item[0]])
    return Difference(tuple(changes), tuple(counted))


def is_counted(figure: Figure) -> bool:
    """Whether a statement counts by itself: not an order, nor what a coefficient is multiplied with."""
    return not isinstance(figure.value, Order) and not (figure.aspect is Aspect.COEFFICIENTS and figure.key[-1] == "of")


def _part_of(figure: Figure) -> tuple[str, ...] | None:
    """The question, exclusion, example and so on that a statement belongs to; None for equations and the model."""
    steps = figure.path.split("/")
    listed = len(steps) > 3 and steps[3].isdigit() and figure.key[0] != "equations" and figure.key[-1] != "order"
    return figure.key[:2] if listed else None


def _as_whole(figure: Figure, change: Change) -> Change:
    """The first row of a part that came or went whole: named after the part, which its path leads to."""
    path = "/".join(figure.path.split("/")[:4])
    what, _, words = figure.what.partition(": ")
    said = f"{words}: {change.old or change.new}" if words else change.old or change.new
    gone = bool(change.old_path)
    return replace(
        change,
        what=what,
        old=said if gone else "",
        new="" if gone else said,
        old_path=path if gone else "",
        new_path="" if gone else path,
    )


def _joined(whole: Change, figure: Figure, *found: Change) -> Change:
    """The row of a whole part with a further statement."""
    words = figure.what.partition(": ")[2]
    said = "".join(f"; {words}: {change.old or change.new}" for change in found)
    return replace(whole, old=whole.old + said) if whole.old_path else replace(whole, new=whole.new + said)


def pair_figures(
    old: Sequence[Figure], new: Sequence[Figure]
) -> Iterator[tuple[Figure, None] | tuple[None, Figure] | tuple[Figure, Figure]]:
    """The statements of both by name, in the order of the new file; what is gone stands where it stood in the old."""
    by_key = {figure.key: figure for figure in old}
    after = {figure.key for figure in new}
    waiting = iter(old)
    said: set[tuple[str, ...]] = set()
    for figure in new:
        before = by_key.get(figure.key)
        if before is None:
            yield None, figure
            continue
        if figure.key not in said:
            for passed in waiting:
                said.add(passed.key)
                if passed.key not in after:
                    yield passed, None
                if passed.key == figure.key:
                    break
        yield before, figure
    yield from ((passed, None) for passed in waiting if passed.key not in after)


def compare_pair(before: Figure | None, after: Figure | None) -> Iterator[Change]:
    """The changes of one statement: none, one, or several where it is a list of texts."""
    figure = after or before
    assert figure is not None
    old_path = "" if before is None else before.path
    new_path = "" if after is None else after.path
    change = Change(figure.aspect, figure.what, "", "", old_path, new_path)
    old = None if before is None else before.value
    new = None if after is None else after.value
    if isinstance(figure.value, Order):
        moved = _reordered(old, new)
        if moved is not None:
            yield replace(change, old=moved[0], new=moved[1])
    elif isinstance(figure.value, Texts) and (before is None or after is None or isinstance(old, Texts)):
        yield from _compare_texts(change, old, new)
    elif before is None or after is None or not _is_same(old, new):
        words_old = "" if before is None else say_value(old)
        words_new = "" if after is None else say_value(new)
        if isinstance(old, Table) and isinstance(new, Table):
            words_new += f", {count_cells(old, new)} of them changed"
        yield replace(change, old=words_old, new=words_new)


def say_value(value: Value) -> str:
    """A statement in words, with every digit that the file has."""
    match value:
        case None:
            return "null"
        case bool():
            return "yes" if value else "no"
        case float():
            return say_figure(value)
        case Ends():
            low = "any" if value.low is None else say_figure(value.low)
            return f"{low} to {'any' if value.high is None else say_figure(value.high)}"
        case Table():
            return f"{len(value.rows)} × {len(value.columns)} figures"
        case Texts():
            return "; ".join(value.items)
        case Order():
            return ", ".join(value.names)
    return value


def count_cells(old: Table, new: Table) -> int:
    """How many figures differ, those that only one of the two has among them."""
    return sum(old.cells.get(cell) != new.cells.get(cell) for cell in {*old.cells, *new.cells})


def _is_same(old: Value, new: Value) -> bool:
    """Equal in kind and to the last digit; matrices by the names of rows and columns, not by their order."""
    if isinstance(old, Table) and isinstance(new, Table):
        return count_cells(old, new) == 0
    return type(old) is type(new) and old == new


def _reordered(old: Value, new: Value) -> tuple[str, str] | None:
    """The two orders of what both versions have, or None where it is the same order."""
    if not isinstance(old, Order) or not isinstance(new, Order):
        return None
    both = set(old.names) & set(new.names)
    before = [name for name in old.names if name in both]
    after = [name for name in new.names if name in both]
    return None if before == after else (", ".join(before), ", ".join(after))


def _compare_texts(change: Change, old: Value, new: Value) -> Iterator[Change]:
    """One change for each text that was replaced, added or taken away."""
    before = old.items if isinstance(old, Texts) else ()
    after = new.items if isinstance(new, Texts) else ()
    for kind, i, i_end, j, j_end in SequenceMatcher(None, before, after, autojunk=False).get_opcodes():
        if kind == "equal":
            continue
        gone = [(text, f"{change.old_path}/{place}") for place, text in enumerate(before[i:i_end], i)]
        come = [(text, f"{change.new_path}/{place}") for place, text in enumerate(after[j:j_end], j)]
        for row in range(max(len(gone), len(come))):
            old_text, old_path = gone[row] if row < len(gone) else ("", "")
            new_text, new_path = come[row] if row < len(come) else ("", "")
            yield replace(change, old=old_text, new=new_text, old_path=old_path, new_path=new_path)
