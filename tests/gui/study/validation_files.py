"""A model fitted to the small study, other invented people, and a validation file that holds one against the other."""

from dataclasses import dataclass
from functools import cache
from pathlib import Path
from tempfile import TemporaryDirectory

import numpy as np

from clinicalc.operations.course import Course
from clinicalc.operations.study import check_data, fit_study, open_study, package_study
from tests.gui.study.study_files import FOLLOWED, write_study_files

OTHERS = 1500
VALIDATION = """title = "Held against the people of the mill"
model = "small.json"
groups = ["sex", "site"]
decision_points = [0.05, 0.1, 0.2]

[cohort]
file = "others.csv"
words = "Tarnwick Millside, everybody registered on 2016-01-01"
person = "person"
outcome = {kind = "time_to_event", time = "days", unit = "d", status = "status", event = "1", censored = "0"}

[cohort.columns.sex]
levels = {female = "F", male = "M"}

[cohort.columns.systolic_bp]
column = "sbp"
missing = ["-9"]

[update]
method = "closed_test"
version = "0.2.0"
"""


@dataclass(frozen=True, slots=True)
class ValidationFiles:
    """The validation file, the coefficient file and the people beside it."""

    validation: Path
    model: Path
    people: Path

    def change(self, old: str, new: str) -> None:
        """Write other words in the validation file; the old ones must be there."""
        text = self.validation.read_text(encoding="utf-8")
        assert old in text
        self.validation.write_text(text.replace(old, new, 1), encoding="utf-8")

    def change_people(self, old: str, new: str) -> None:
        """The same in the file of people, once."""
        text = self.people.read_text(encoding="utf-8")
        assert old in text
        self.people.write_text(text.replace(old, new, 1), encoding="utf-8")


def write_validation_files(folder: Path, factor: float = 1.8, people: int = OTHERS) -> ValidationFiles:
    """All of them in a folder; the others have `factor` times the hazard of the people of the small study."""
    files = ValidationFiles(folder / "millside.toml", folder / "small.json", folder / "others.csv")
    files.validation.write_text(VALIDATION, encoding="utf-8")
    files.model.write_bytes(small_model())
    files.people.write_text(others_csv(factor, people), encoding="utf-8")
    return files


@cache
def small_model() -> bytes:
    """The coefficient file of the small study."""
    with TemporaryDirectory() as folder:
        study = open_study(write_study_files(Path(folder)).study)
        course = Course()
        return package_study(fit_study(study, check_data(study, course), course), course).data


def others_csv(factor: float, people: int) -> str:
    """Drawn as the people of the small study, with another hazard, from two sites."""
    draw = np.random.default_rng(20261202)
    age = np.round(draw.uniform(40, 80, people))
    male = draw.random(people) < 0.5
    pressure = np.round(draw.normal(132, 16, people))
    risk = factor * np.exp(0.06 * (age - 60) + 0.4 * male + 0.015 * (pressure - 130))
    days = np.maximum(1, np.round(draw.exponential(365.25 / (0.05 * risk))))
    leaves = np.maximum(1, np.round(draw.uniform(600, FOLLOWED, people)))
    missing = draw.random(people) < 0.02
    mill = draw.random(people) < 0.3
    lines = ["person,age,sex,sbp,days,status,site"]
    for place in range(people):
        event = days[place] <= leaves[place]
        sex = "M" if male[place] else "F"
        measured = "-9" if missing[place] else f"{pressure[place]:.0f}"
        end, site = min(days[place], leaves[place]), "mill" if mill[place] else "quay"
        lines.append(f"{place + 1},{age[place]:.0f},{sex},{measured},{end:.0f},{int(event)},{site}")
    return "\n".join(lines) + "\n"
