"""Small invented studies written for the tests: people of nowhere, drawn from a formula, and the study file beside."""

from dataclasses import dataclass
from pathlib import Path

import numpy as np

PEOPLE = 400
FOLLOWED = 1826.0
"""Days after which everybody's follow-up ends."""

STUDY = """# a comment of the author
id = "tarnwick-small-cox"
version = "0.1.0"
title = "Event within three years, a small invented cohort"
outcome = "The event within three years"

[source]
kind = "local"
citation = "Invented people, for tests of the window."

[use]
population = "Nobody: the people are invented"
setting = "Tests"
not_for = ["any patient"]
not_used = ["everything else"]
cautions = ["Invented; it must not guide any decision."]
plain = {outcome = "the event within three years", cautions = ["This is invented."]}

[[predictors]]
id = "age"
label = "Age"
kind = "number"
quantity = "age"
unit = "a"
group = "Person"
outside_derivation = "caution"

[[predictors]]
id = "sex"
label = "Sex"
kind = "choice"
group = "Person"
choices = [{id = "female", label = "Female"}, {id = "male", label = "Male"}]

[[predictors]]
id = "systolic_bp"
label = "Systolic blood pressure"
kind = "number"
quantity = "systolic_bp"
unit = "mm[Hg]"
group = "Measured"
outside_derivation = "caution"

[[equations]]
id = "all"
competing_events = {handled = "not_applicable"}
horizons = [{years = 1}, {years = 3}]
terms = [
    {id = "age", product = [{of = "age"}]},
    {categories_of = "sex", reference = "female"},
    {id = "systolic_bp", product = [{of = "systolic_bp", steps = [{divide = 10}]}]},
]

[cohort]
file = "people.csv"
person = "person"
outcome = {kind = "time_to_event", time = "days", unit = "d", status = "status", event = "1", censored = "0"}

[cohort.columns.sex]
levels = {female = "F", male = "M"}

[cohort.columns.systolic_bp]
column = "sbp"
missing = ["-9"]

[estimate.all]
kind = "cox"
"""


@dataclass(frozen=True, slots=True)
class StudyFiles:
    """The study file and the file of people beside it."""

    study: Path
    people: Path

    def change_study(self, old: str, new: str) -> None:
        """Write other words in the study file; the old ones must be there."""
        _change(self.study, old, new)

    def change_people(self, old: str, new: str) -> None:
        """The same in the file of people, once."""
        _change(self.people, old, new)


def write_study_files(folder: Path) -> StudyFiles:
    """A study in a folder: Cox, three terms, some values of blood pressure missing."""
    files = StudyFiles(folder / "small.toml", folder / "people.csv")
    files.study.write_text(STUDY, encoding="utf-8")
    files.people.write_text(people_csv(), encoding="utf-8")
    return files


def people_csv() -> str:
    """The people: hazard 0.05 a year at 60, times exp(0.06 a year of age, 0.4 for men, 0.15 for 10 mmHg)."""
    draw = np.random.default_rng(20261201)
    age = np.round(draw.uniform(40, 80, PEOPLE))
    male = draw.random(PEOPLE) < 0.5
    pressure = np.round(draw.normal(132, 16, PEOPLE))
    risk = np.exp(0.06 * (age - 60) + 0.4 * male + 0.015 * (pressure - 130))
    days = np.maximum(1, np.round(draw.exponential(365.25 / (0.05 * risk))))
    leaves = np.maximum(1, np.round(draw.uniform(600, FOLLOWED, PEOPLE)))
    missing = draw.random(PEOPLE) < 0.02
    lines = ["person,age,sex,sbp,days,status"]
    for place in range(PEOPLE):
        event = days[place] <= leaves[place]
        sex = "M" if male[place] else "F"
        measured = "-9" if missing[place] else f"{pressure[place]:.0f}"
        end = min(days[place], leaves[place])
        lines.append(f"{place + 1},{age[place]:.0f},{sex},{measured},{end:.0f},{int(event)}")
    return "\n".join(lines) + "\n"


def plan_methods(files: StudyFiles, *, sets: int = 3, replicates: int = 20) -> None:
    """Have missing values filled in and optimism found, with few sets and samples."""
    said = f"\n[imputation]\nsets = {sets}\nrounds = 5\n\n[bootstrap]\nreplicates = {replicates}\n"
    files.study.write_text(files.study.read_text(encoding="utf-8") + said, encoding="utf-8")


def let_others_die(files: StudyFiles, kind: str = "fine-gray") -> None:
    """Every fifth person without the event ends with another one; the fit is of that kind."""
    lines = files.people.read_text(encoding="utf-8").splitlines()
    changed = [f"{line[:-1]}2" if place % 5 == 0 and line.endswith(",0") else line for place, line in enumerate(lines)]
    files.people.write_text("\n".join(changed) + "\n", encoding="utf-8")
    handled = "subdistribution" if kind == "fine-gray" else "censored"
    files.change_study('censored = "0"}', 'censored = "0", competing = "2"}')
    files.change_study('handled = "not_applicable"', f'handled = "{handled}", which = "death from another cause"')
    files.change_study('kind = "cox"', f'kind = "{kind}"')


def make_binary(files: StudyFiles) -> None:
    """An outcome that is known of everybody, and a logistic fit to it."""
    files.change_study(
        '{kind = "time_to_event", time = "days", unit = "d", status = "status", event = "1", censored = "0"}',
        '{kind = "binary", column = "status", event = "1", no_event = "0"}',
    )
    files.change_study('kind = "cox"', 'kind = "logistic"')
    files.change_study("horizons = [{years = 1}, {years = 3}]", "horizons = [{years = 3}]")


def separate(files: StudyFiles) -> None:
    """No woman has the event, so that no logistic or Cox fit has an estimate for men."""
    lines = files.people.read_text(encoding="utf-8").splitlines()
    changed = [f"{line[:-1]}0" if ",F," in line else line for line in lines]
    files.people.write_text("\n".join(changed) + "\n", encoding="utf-8")


def _change(path: Path, old: str, new: str) -> None:
    text = path.read_text(encoding="utf-8")
    assert old in text
    path.write_text(text.replace(old, new, 1), encoding="utf-8")
