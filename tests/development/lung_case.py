"""The guide's Cox and logistic fits as cases to spoil: the description as a tree, and the tables beside it."""

import csv
import shutil
import tomllib
from collections.abc import Callable
from dataclasses import dataclass
from pathlib import Path
from typing import Any

import pytest

from clinicalc.development.description import read_description
from clinicalc.development.package import Package, package_model
from clinicalc.errors import DescriptionRefused
from tests.development.describing import write_description
from tests.development.guide_page import STORED, save_descriptions

Table = list[list[str]]


@dataclass(frozen=True, slots=True)
class Case:
    """A description to change, in a folder of its own with its tables."""

    folder: Path
    tree: dict[str, Any]

    @property
    def fit(self) -> dict[str, Any]:
        """The [fit.all] table."""
        table: dict[str, Any] = self.tree["fit"]["all"]
        return table

    @property
    def equation(self) -> dict[str, Any]:
        """The only equation."""
        equation: dict[str, Any] = self.tree["equations"][0]
        return equation

    def rewrite(self, name: str, change: Callable[[Table], Table | None]) -> None:
        """Change the cells of a CSV table in place, or give back others."""
        path = self.folder / name
        with path.open(encoding="utf-8", newline="") as stream:
            table = list(csv.reader(stream))
        changed = change(table) or table
        with path.open("w", encoding="utf-8", newline="") as stream:
            csv.writer(stream).writerows(changed)

    def package(self) -> Package:
        """What comes of it. Raises DescriptionRefused."""
        return package_model(read_description(write_description(self.folder, self.tree)))

    def problems(self) -> list[str]:
        """Every problem it is refused for, place and sentence; fails where it is not refused."""
        with pytest.raises(DescriptionRefused) as caught:
            self.package()
        return [str(problem) for problem in caught.value.problems]

    def only_problem(self) -> str:
        """The one problem it is refused for."""
        found = self.problems()
        assert len(found) == 1, found
        return found[0]


def open_case(folder: Path, name: str) -> Case:
    """One of the guide's two descriptions ("lung", "three_months") with the tables that R wrote."""
    shutil.copytree(STORED, folder, dirs_exist_ok=True)
    save_descriptions(folder)
    return Case(folder, tomllib.loads((folder / f"{name}.toml").read_text(encoding="utf-8")))
