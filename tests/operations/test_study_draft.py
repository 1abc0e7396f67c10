"""Drafts of study files: what a file of people suggests, and what changes of it leave as it was."""

import tomllib
from io import StringIO
from pathlib import Path

import numpy as np
import pandas as pd
import pytest

from clinicalc.cohort.dictionary import ColumnEntry, Role
from clinicalc.errors import DescriptionRefused, TableRefused
from clinicalc.operations.course import Course
from clinicalc.operations.study import check_data, fit_study, open_study, package_study
from clinicalc.operations.study_draft import (
    StudyDraft,
    begin_draft,
    changed,
    draft_study,
    entry_of,
    plan_of,
    save_draft,
    with_column,
)
from clinicalc.operations.study_draft_model import About, make_id, with_about, with_fit, with_terms
from tests.gui.study.study_files import STUDY, people_csv, write_study_files


def begin(folder: Path, text: str) -> StudyDraft:
    """A draft for people in a CSV file."""
    path = folder / "made.csv"
    path.write_text(text, encoding="utf-8")
    return begin_draft(path, Course())


def test_columns_of_no_known_name_are_looked_at(tmp_path: Path) -> None:
    colours = ("red", "green", "blue")
    rows = "".join(
        f"{place},{place % 2},{colours[place % 3]},{place * 1.5},{'yn'[place % 2]},{40 + place},0\n"
        for place in range(40)
    )
    draft = begin(tmp_path, f"nr,thing,colour,strange_measure,agreed,age,dead\n{rows}")
    entries = {column: entry_of(draft, column) for column in draft.columns}
    assert entries["thing"].levels == (("no", "0"), ("yes", "1"))
    assert {answer for answer, _ in entries["colour"].levels} == {"red", "green", "blue"}
    assert entries["agreed"].role is Role.VALUE
    assert (entries["strange_measure"].predictor, entries["strange_measure"].unit) == ("strange_measure", "1")
    assert entries["age"].predictor == "age"
    assert all(entry.reason for entry in entries.values())
    kinds = {one["id"]: one["kind"] for one in draft.tree["predictors"]}  # type: ignore[attr-defined]
    assert kinds["thing"] == kinds["agreed"] == "yes_no"
    assert kinds["colour"] == "choice"


def test_a_column_that_is_ignored_leaves_nothing_behind(tmp_path: Path) -> None:
    draft = begin_draft(write_study_files(tmp_path).people, Course())
    ignored = with_column(draft, ColumnEntry("sbp", Role.IGNORED))
    assert entry_of(ignored, "sbp").role is Role.IGNORED
    assert "systolic_bp" not in str(ignored.tree)
    assert entry_of(draft, "sbp").predictor == "systolic_bp", "the draft before stays as it was"
    untimed = with_column(draft, ColumnEntry("days", Role.IGNORED))
    assert plan_of(untimed).time == ""


def test_a_draft_of_a_file_says_what_the_file_says(tmp_path: Path) -> None:
    files = write_study_files(tmp_path)
    draft = draft_study(files.study, ("person", "age", "sex", "sbp", "days", "status"))
    assert draft.tree == tomllib.loads(STUDY)
    assert draft.text == STUDY
    assert draft.lost_comments == ()
    roles = {column: entry_of(draft, column).role for column in draft.columns}
    assert roles == {
        "person": Role.PERSON,
        "age": Role.VALUE,
        "sex": Role.VALUE,
        "sbp": Role.VALUE,
        "days": Role.TIME,
        "status": Role.STATUS,
    }
    saved = save_draft(draft, files.study, replace_file=True)
    assert files.study.read_text(encoding="utf-8") == STUDY
    assert saved.is_saved


def test_what_is_no_file_of_people_or_no_toml_is_refused(tmp_path: Path) -> None:
    with pytest.raises(TableRefused):
        begin_draft(tmp_path / "nowhere.csv", Course())
    broken = tmp_path / "broken.toml"
    broken.write_text("a = ", encoding="utf-8")
    with pytest.raises(DescriptionRefused, match="cannot be read"):
        draft_study(broken, ())


@pytest.mark.parametrize(
    ("text", "id"), [("Syst. BP (mmHg)", "syst_bp_mmhg"), ("2nd", "x_2nd"), ("age", "age"), ("Größe", "grosse")]
)
def test_ids_are_made_of_any_name(text: str, id: str) -> None:
    assert make_id(text) == id


def test_a_draft_of_any_columns_becomes_a_file(tmp_path: Path) -> None:
    """A bare number, a choice of colours, a question, and competing events; nothing is edited by hand."""
    table = pd.read_csv(StringIO(people_csv()))
    draw = np.random.default_rng(3)
    table["strange"] = np.round(draw.normal(5, 2, len(table)), 2)
    table["colour"] = draw.choice(["red", "green", "blue"], len(table))
    table["took_part"] = draw.integers(0, 2, len(table))
    table.loc[::17, "status"] = 2
    draft = begin(tmp_path, table.to_csv(index=False))
    about = About("A title", "An event", "an event", "Nobody", "A test", "Invented.", "Cox fit to invented people.")
    tree = with_about(draft.tree, about)
    terms: list[object] = [{"id": id, "product": [{"of": id}]} for id in ("age", "strange", "took_part")]
    tree = with_terms(tree, [*terms, {"categories_of": "colour", "reference": "blue"}])
    tree = with_fit(tree, {"kind": "cox"}, [{"years": 3}])
    path = tmp_path / "made.toml"
    save_draft(changed(draft, tree), path, replace_file=False)
    study = open_study(path)
    cohort = check_data(study, Course())
    assert cohort.stops == ()
    package = package_study(fit_study(study, cohort, Course()), Course())
    equation = package.model.content.equations[0]
    assert [term.id for term in equation.terms] == ["age", "strange", "took_part", "colour_red", "colour_green"]
    assert equation.competing_events.handled == "censored"
