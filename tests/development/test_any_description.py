"""Whatever stands in a description or a table, it is packaged or refused in words: no other error ever leaves."""

import copy
import re
from collections.abc import Iterator
from pathlib import Path
from typing import Any

import pytest

from clinicalc.errors import DescriptionRefused, Problem
from tests.development.lung_case import Case, open_case

Path_ = tuple[str | int, ...]
DELETED = object()
SPOILT: tuple[Any, ...] = (3, -1, "x", "", [], [3], {}, True, 1e300, float("nan"), DELETED)


def places(tree: Any, path: Path_ = ()) -> Iterator[Path_]:
    """The way to everything in a tree."""
    items = tree.items() if isinstance(tree, dict) else enumerate(tree) if isinstance(tree, list) else ()
    for key, value in items:
        yield (*path, key)
        yield from places(value, (*path, key))


def spoil(tree: Any, path: Path_, value: Any) -> Any:
    """A copy of the tree with another value at one place, or with nothing there."""
    whole = copy.deepcopy(tree)
    here = whole
    for key in path[:-1]:
        here = here[key]
    if value is DELETED:
        del here[path[-1]]
    else:
        here[path[-1]] = value
    return whole


def problems_of(case: Case) -> tuple[Problem, ...]:
    """What it is refused for; nothing where it is packaged. Any other error is the test's failure."""
    try:
        case.package()
    except DescriptionRefused as fault:
        return fault.problems or (Problem("", "refused without a word"),)
    return ()


@pytest.mark.parametrize("name", ["lung", "three_months"])
@pytest.mark.parametrize("value", SPOILT, ids=lambda value: "deleted" if value is DELETED else repr(value))
def test_any_one_place(name: str, value: Any, tmp_path: Path) -> None:
    case = open_case(tmp_path, name)
    everywhere = list(places(case.tree))
    found = {path: problems_of(Case(case.folder, spoil(case.tree, path, value))) for path in everywhere}
    assert sum(map(bool, found.values())) > len(everywhere) / 3
    for path, problems in found.items():
        assert all(len(problem.message.split()) > 3 for problem in problems), path


@pytest.mark.parametrize("table", ["lung_coef.csv", "lung_vcov.csv", "lung_baseline.csv"])
@pytest.mark.parametrize("cell", ["", "x", "0", "-1", "1e308", "1e-308", "NA", "1,5", '"', "0.5"])
def test_any_one_cell(table: str, cell: str, lung: Case) -> None:
    """Refused, or not the same file: a changed figure never goes by unseen."""
    path = lung.folder / table
    before = path.read_bytes()
    rows, width = before.decode().count("\n"), before.decode().partition("\n")[0].count(",") + 1
    plain = lung.package().data
    for row in range(table == "lung_coef.csv", rows):  # what its only column is called does not matter
        for column in range(width):

            def change(cells: list[list[str]], row: int = row, column: int = column) -> None:
                cells[row][column] = cell

            lung.rewrite(table, change)
            problems = problems_of(lung) if path.read_bytes() != before else ()
            assert problems or lung.package().data != plain or _says_the_same(before, path), (row, column)
            path.write_bytes(before)


def _says_the_same(before: bytes, path: Path) -> bool:
    """Whether only quotation marks differ, or a nought became a number that is lost in any sum."""
    then, now = (
        re.split("[,\n]", data.decode().replace('"', "").replace("\r", "")) for data in (before, path.read_bytes())
    )
    return [cell.replace("1e-308", "0") for cell in now] == then
