"""Validation files: what is read, what is refused, and everything that is wrong at once."""

from pathlib import Path

import numpy as np
import pytest

from clinicalc.coefficients.spans import Span
from clinicalc.cohort.checking import check_cohort
from clinicalc.cohort.table import read_table
from clinicalc.errors import ValidationRefused
from clinicalc.validation.updated import UpdateMethod
from clinicalc.validation.validation_file import (
    make_plan,
    read_validation_file,
    settle_validation,
    take_validation,
)
from tests.validation.invented_cohort import invented_model

FOLDER = Path("people")
COHORT = """
[cohort]
file = "people.csv"
words = "Invented people"
exclusions = {prior = {column = "before", yes = ["1", "2"]}}
[cohort.outcome]
kind = "time_to_event"
time = "days"
unit = "d"
status = "status"
event = "1"
competing = ["2"]
[cohort.columns]
weight = {column = "pounds", unit = "[lb_av]"}
sex = {levels = {female = "F", male = "M"}}
"""
PEOPLE = """age,pounds,systolic_bp,urea,sex,smoker,diabetes,before,site,days,status
50,176,120,5,F,0,1,0,B,400,0
51,180,121,5,M,1,0,1,A,4000,1
52,,122,6,M,1,0,,10,4100,2
53,200,123,6,F,0,0,2,,4200,0
"""


def test_a_file_is_read_with_everything_it_says() -> None:
    head = """
    title = "Does it hold?"
    model = "model.json"
    horizons = [{time = 120, unit = "mo"}]
    groups = ["sex", "site"]
    decision_points = [0.2, 0.1, 0.2]
    """
    tail = """
    [update]
    method = "baseline_slope"
    version = "1.1.0"
    use = {population = "Them"}
    [bootstrap]
    replicates = 100
    seed = 7
    """
    file = take_validation(head + COHORT + tail, "v.toml", FOLDER)
    file.refuse()
    settled = settle_validation(file, invented_model("cox"))
    assert file.model_file == FOLDER / "model.json"
    assert (settled.title, settled.cohort) == ("Does it hold?", "Invented people")
    assert settled.cohort_file == FOLDER / "people.csv"
    assert settled.spans == (Span(10),)
    assert [(group.name, group.is_predictor) for group in settled.groups] == [("sex", True), ("site", False)]
    assert settled.points is not None
    assert [point.value for point in settled.points] == [0.1, 0.2]
    assert (settled.resamples, settled.seed) == (100, 7)
    assert settled.update is not None
    assert settled.update.wish.method is UpdateMethod.INTERCEPT_SLOPE
    assert (settled.update.version, settled.update.population) == ("1.1.0", "Them")


def test_what_is_not_said_is_the_models_own() -> None:
    settled = settle_validation(take_validation(COHORT, "v.toml", FOLDER), invented_model("cox"))
    assert (settled.spans, settled.points, settled.update, settled.resamples) == (None, None, None, 0)
    assert [group.name for group in settled.groups] == ["sex", "smoker", "diabetes"]


def test_groups_and_exclusions_come_from_the_table(tmp_path: Path) -> None:
    (tmp_path / "people.csv").write_text(PEOPLE, encoding="utf-8")
    (tmp_path / "v.toml").write_text('groups = ["site", "smoker"]\n' + COHORT, encoding="utf-8")
    settled = settle_validation(read_validation_file(tmp_path / "v.toml"), invented_model("cox"))
    table = read_table(settled.cohort_file)
    cohort = check_cohort(table, settled.dictionary, settled.predictors)
    plan = make_plan(settled, table, cohort)
    site, smoker = plan.groups
    assert site.levels == ("10", "A", "B")
    np.testing.assert_array_equal(site.codes, [2, 1, 0, -1])
    assert (smoker.label, smoker.levels) == ("Smokes now", ("No", "Yes"))
    np.testing.assert_array_equal(smoker.codes, [0, 1, 1, 0])
    (prior,) = plan.exclusions
    np.testing.assert_array_equal(prior.yes, [False, True, False, True])
    assert cohort.columns["weight"][0] == pytest.approx(176 * 0.45359237)


def test_the_people_of_a_study_may_meet_another_model() -> None:
    text = COHORT.replace("[cohort]", 'id = "other"\npredictors = []\n[estimate.all]\nkind = "cox"\n[cohort]')
    text = text.replace('exclusions = {prior = {column = "before", yes = ["1", "2"]}}\n', "").replace("words", "#")
    file = take_validation(text + 'bilirubin = {column = "bili"}\n', "study.toml", FOLDER)
    settled = settle_validation(file, invented_model("cox"))
    assert file.of_study
    assert file.model_file is None
    assert [predictor.id for predictor in settled.predictors][:2] == ["age", "weight"]
    assert {entry.predictor: entry.column for entry in settled.dictionary.columns}["weight"] == "pounds"


def test_everything_that_is_wrong_is_said_at_once_at_its_place() -> None:
    head = """
    modle = "m.json"
    recalibration = "low"
    horizons = [{years = 5}, {years = 2, time = 3}]
    groups = ["age", "sex", "sex"]
    decision_points = [1.2]
    """
    text = head + COHORT.replace("weight =", "wieght =").replace("male = ", "mail = ").replace("prior =", "prio =")
    file = take_validation(text + '[update]\nmethod = "refitt"\n', "v.toml", FOLDER)
    with pytest.raises(ValidationRefused) as refused:
        settle_validation(file, invented_model("cox"))
    said = str(refused.value)
    for words in (
        'modle: the field "modle" is not known here. Did you mean "model"?',
        'recalibration: the model has no recalibration "low".',
        "horizons 1: the model gives no risk by 5 years. It has 10 years.",
        "horizons 2: a horizon is years",
        'groups 1: "age" is a number, and groups need answers',
        'groups 3: "sex" stands here twice.',
        "decision_points 1: 1.2 must be less than 1.",
        'cohort.columns.wieght: there is no predictor "wieght". Did you mean "weight"?',
        'cohort.columns.sex.levels.femail: "femail" is no answer',
        'cohort.columns.sex.levels.mail: "mail" is no answer',
        'cohort.exclusions.prio: the model has no exclusion "prio". Did you mean "prior"?',
        'update.method: "refitt" is not one of',
    ):
        assert words in said
    assert len(refused.value.problems) == 12


def test_who_the_people_are_in_words_has_its_place() -> None:
    file = take_validation('cohort = "Invented people"\n', "v.toml", FOLDER)
    with pytest.raises(ValidationRefused, match=r'stands in the table: \[cohort\], words = "…"'):
        file.refuse()


def test_a_yes_or_no_is_about_one_horizon() -> None:
    text = '[cohort]\nfile = "p.csv"\noutcome = {kind = "binary", column = "y", event = "1"}\n'
    settled = settle_validation(take_validation(text, "v.toml", FOLDER), invented_model("logistic"))
    assert settled.spans is None


def test_a_group_that_is_no_column_and_a_column_of_too_many_answers_are_refused(tmp_path: Path) -> None:
    (tmp_path / "people.csv").write_text(PEOPLE, encoding="utf-8")
    text = 'groups = ["sites", "days"]\n' + COHORT.replace('"before"', '"befor"')
    settled = settle_validation(take_validation(text, "v.toml", tmp_path), invented_model("cox"))
    table = read_table(settled.cohort_file)
    cohort = check_cohort(table, settled.dictionary, settled.predictors)
    with pytest.raises(ValidationRefused) as refused:
        make_plan(settled, table, cohort)
    said = str(refused.value)
    assert (
        'groups 1: "sites" is neither a question of the model nor a column of people.csv. Did you mean "site"?' in said
    )
    assert 'cohort.exclusions.prior: the column "befor" is not in people.csv. Did you mean "before"?' in said


def test_what_is_no_toml_or_is_not_there_is_refused(tmp_path: Path) -> None:
    with pytest.raises(ValidationRefused, match="this is not TOML"):
        take_validation("a = ", "v.toml", tmp_path)
    with pytest.raises(ValidationRefused, match="there is no such file"):
        read_validation_file(tmp_path / "v.toml")
