"""The shipped practice, its validation file and its model in a folder, to be changed as a test needs it."""

import csv
import io
import shutil
from collections.abc import Callable
from pathlib import Path

from clinicalc.resources import find_shipped

PLAN = "tarnwick-northgate-validation.toml"
PEOPLE = "tarnwick-northgate-cohort.csv"
MODEL = "tarnwick-cvd-10y-cox.json"

Row = dict[str, str]


def lay_out(folder: Path) -> Path:
    """Validation file, people and model in `folder`; the path of the first."""
    for name in (PLAN, PEOPLE, MODEL):
        shutil.copy(find_shipped(f"example_models/{name}"), folder / name)
    return folder / PLAN


def change_plan(folder: Path, old: str, new: str) -> None:
    """One text of the validation file in the place of another."""
    path = folder / PLAN
    text = path.read_text(encoding="utf-8")
    assert text.count(old) == 1, old
    path.write_text(text.replace(old, new), encoding="utf-8")


def read_rows(folder: Path) -> list[Row]:
    """The people as texts by column."""
    return list(csv.DictReader(io.StringIO((folder / PEOPLE).read_text(encoding="utf-8"))))


def change_people(folder: Path, change: Callable[[int, Row], Row]) -> None:
    """Every person's row, from 0, in the place of what it was."""
    rows = [change(place, row) for place, row in enumerate(read_rows(folder))]
    out = io.StringIO()
    writer = csv.DictWriter(out, list(rows[0]), lineterminator="\n")
    writer.writeheader()
    writer.writerows(rows)
    (folder / PEOPLE).write_text(out.getvalue(), encoding="utf-8")
