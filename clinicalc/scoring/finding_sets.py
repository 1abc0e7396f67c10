"""Sets of findings by number: a row holds one small number for all that is said of it."""

from collections.abc import Iterable
from dataclasses import dataclass

import numpy as np

from clinicalc.assessment.findings import Finding, FindingCode, Grade
from clinicalc.scoring.scored import Places, SaidOfRow


@dataclass(frozen=True, slots=True)
class SaidCode:
    """One finding without its words."""

    grade: Grade
    code: FindingCode
    field: str = ""

    @property
    def text(self) -> str:
        """As it stands in a row."""
        return f"{self.code.value}:{self.field}" if self.field else self.code.value


def codes_of(findings: Iterable[Finding]) -> frozenset[SaidCode]:
    """The findings without their words."""
    return frozenset(SaidCode(finding.grade, finding.code, finding.field) for finding in findings)


class FindingSets:
    """Every set met so far, each with its place; place 0 is the empty set. Grows and never forgets."""

    def __init__(self, field_order: Iterable[str]) -> None:
        """`field_order` are the ids in page order, in which the codes of a row are written."""
        self._order = {id: place for place, id in enumerate(field_order)}
        self._sets: list[frozenset[SaidCode]] = []
        self._places: dict[frozenset[SaidCode], int] = {}
        self._joined: dict[tuple[int, int], int] = {}
        self._said: list[SaidOfRow] = []
        self._stops: list[bool] = []
        self.place_of(frozenset())

    def used(self, said: Places) -> tuple[tuple[SaidOfRow, ...], Places]:
        """The sets that stand in a column as texts, in order of their first row, and the column by place among them.

        A block then says the same whatever was scored before it.
        """
        present = np.flatnonzero(np.bincount(said, minlength=len(self._sets)))
        first = np.zeros(len(self._sets), dtype=np.intp)
        first[said[::-1]] = np.arange(len(said))[::-1]
        present = present[np.argsort(first[present], kind="stable")]
        place = np.zeros(len(self._sets), dtype=np.intp)
        place[present] = np.arange(len(present))
        return tuple(self._said[set] for set in present), place[said]

    @property
    def stops(self) -> np.ndarray[tuple[int], np.dtype[np.bool_]]:
        """Whether each set holds a stop, by place."""
        return np.array(self._stops)

    def place_of(self, codes: frozenset[SaidCode]) -> int:
        """The place of a set, new or known."""
        place = self._places.get(codes)
        if place is None:
            place = self._places[codes] = len(self._sets)
            self._sets.append(codes)
            self._said.append(SaidOfRow(*(self._text(codes, grade) for grade in Grade)))
            self._stops.append(any(code.grade is Grade.STOP for code in codes))
        return place

    def add(self, said: Places, rows: Places, code: SaidCode) -> None:
        """One finding added to what is `said` in these rows, in place."""
        if len(rows):
            self.join(said, rows, self.place_of(frozenset({code})))

    def join(self, said: Places, rows: Places, more: int | Places) -> None:
        """Further sets, one for all or one a row, joined to what is `said` in these rows, in place."""
        if not len(rows):
            return
        width = len(self._sets)
        both = said[rows] * width + more
        # few sets in most blocks: looking them up costs less than sorting
        if width * width <= 4 * len(rows) + 1024:
            pairs = np.flatnonzero(np.bincount(both, minlength=1))
            lookup = np.zeros(width * width, dtype=np.intp)
            lookup[pairs] = [self._join(*divmod(int(pair), width)) for pair in pairs]
            said[rows] = lookup[both]
            return
        pairs, at = np.unique(both, return_inverse=True)
        said[rows] = np.array([self._join(*divmod(int(pair), width)) for pair in pairs], dtype=np.intp)[at]

    def _join(self, one: int, other: int) -> int:
        place = self._joined.get((one, other))
        if place is None:
            place = self._joined[one, other] = self.place_of(self._sets[one] | self._sets[other])
        return place

    def _text(self, codes: frozenset[SaidCode], grade: Grade) -> str:
        last = len(self._order)
        mine = sorted(
            (code for code in codes if code.grade is grade),
            key=lambda code: (self._order.get(code.field, last), code.text),
        )
        return " ".join(code.text for code in mine)
