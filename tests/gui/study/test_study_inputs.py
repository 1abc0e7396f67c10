"""Other studies and bad people through the window: each ends in sentences, and the fit before stays."""

from typing import Any

import numpy as np
import numpy.typing as npt
import pandas as pd
import pytest
import statsmodels.api as sm
from pytestqt.qtbot import QtBot

from clinicalc.assessment.findings import Grade
from clinicalc.assessment.numerals import MINUS
from clinicalc.gui.study.problem_list import ProblemEntry
from clinicalc.gui.study.steps import Step
from clinicalc.gui.study.study_page import StudyPage
from tests.gui.study.conftest import rest
from tests.gui.study.study_files import StudyFiles

pytestmark = [
    pytest.mark.gui,
    pytest.mark.qt_log_ignore("This plugin does not support"),
]
OUTCOME = '{kind = "time_to_event", time = "days", unit = "d", status = "status", event = "1", censored = "0"}'
BINARY = '{kind = "binary", column = "status", event = "1", no_event = "0"}'


def change_column(files: StudyFiles, column: str, values: npt.NDArray[Any] | int) -> None:
    """Other values in one column of the people."""
    table = pd.read_csv(files.people)
    table[column] = values
    table.to_csv(files.people, index=False)


def sentences(page: StudyPage) -> list[str]:
    """The stops that are listed on the step that is shown."""
    entries = page.sheet.findChildren(ProblemEntry)
    return [entry.stated.sentence for entry in entries if entry.stated.grade is Grade.STOP]


def to_binary(files: StudyFiles, kind: str = "logistic") -> None:
    """The study with an outcome that is known of everybody."""
    files.change_study(OUTCOME, BINARY)
    files.change_study('kind = "cox"', f'kind = "{kind}"')
    files.change_study("horizons = [{years = 1}, {years = 3}]", "horizons = [{years = 3}]")


def spoil(files: StudyFiles, how: str) -> None:
    """One kind of people that cannot be used."""
    rows = len(pd.read_csv(files.people))
    even = np.arange(rows) % 2
    if how == "constant":
        change_column(files, "age", 60)
    elif how == "text":
        change_column(files, "age", np.where(even, "sixty", "61"))
    elif how == "no events":
        change_column(files, "status", 0)
    elif how == "coded 1 and 2":
        change_column(files, "status", even + 1)
    elif how == "times of nought":
        change_column(files, "days", np.where(even, 0, 100))
    elif how == "separated":
        status = pd.read_csv(files.people).status
        change_column(files, "sex", np.where(status == 1, "M", "F"))
    else:
        files.people.unlink()


@pytest.mark.parametrize(
    ("how", "words"),
    [
        ("constant", "age"),
        ("text", "sixty"),
        ("no events", "event"),
        ("coded 1 and 2", "2"),
        ("times of nought", "days"),
        ("separated", "sex"),
        ("gone", "cannot be opened"),
    ],
)
def test_bad_people_end_in_sentences(qtbot: QtBot, page: StudyPage, files: StudyFiles, how: str, words: str) -> None:
    page.work.open_study(files.study)
    rest(qtbot, page)
    page.work.fit()
    rest(qtbot, page)
    fit = page.state.fit
    assert fit is not None
    spoil(files, how)
    page.work.read_again()
    rest(qtbot, page)
    page.work.fit()
    rest(qtbot, page)
    said = sentences(page)
    assert said, page.sheet.words
    assert any(words in one for one in said), said
    assert ("people.csv was not read" in page.sheet.words) is (how == "gone")
    assert page.state.fit is fit
    page.show_step(Step.FIT)
    assert "not of what is open now" in page.sheet.words
    page.show_step(Step.PACKAGE)
    assert not page.foot.next.isEnabled() or page.state.may_fit
    assert page.state.package is None


@pytest.mark.parametrize("kind", ["logistic", "cloglog"])
def test_a_binary_outcome_is_fitted(qtbot: QtBot, page: StudyPage, files: StudyFiles, kind: str) -> None:
    """statsmodels GLM, binomial, of the complete cases."""
    to_binary(files, kind)
    page.work.open_study(files.study)
    rest(qtbot, page)
    page.work.fit()
    rest(qtbot, page)
    assert page.state.fit is not None, page.sheet.words
    people = pd.read_csv(files.people)
    people = people[people.sbp != -9]
    x = np.column_stack([np.ones(len(people)), people.age, people.sex == "M", people.sbp / 10]).astype(float)
    link = sm.families.links.Logit() if kind == "logistic" else sm.families.links.CLogLog()
    other = sm.GLM(people.status, x, family=sm.families.Binomial(link)).fit(tol=1e-12)
    facts = page.sheet.tables[0].rows.facts
    shown = [float(fact.cells[2].replace(MINUS, "-")) for fact in facts]
    assert shown == pytest.approx(list(other.params[1:]), rel=1e-5)
    heading = page.sheet.tables[0].rows.columns[4].heading
    assert heading.startswith("Odds ratio" if kind == "logistic" else "Ratio")
    assert "Intercept" in page.sheet.words
    page.show_step(Step.PACKAGE)
    rest(qtbot, page)
    assert page.state.package is not None, page.sheet.words


def test_several_equations_stand_under_each_other(qtbot: QtBot, page: StudyPage, files: StudyFiles) -> None:
    text = files.study.read_text(encoding="utf-8")
    one = text[text.index("[[equations]]") : text.index("[cohort]")]
    one = one.replace('    {categories_of = "sex", reference = "female"},\n', "")
    women = one.replace('id = "all"', 'id = "women"\napplies_when = {sex = ["female"]}')
    men = one.replace('id = "all"', 'id = "men"\napplies_when = {sex = ["male"]}')
    files.change_study(text[text.index("[[equations]]") : text.index("[cohort]")], women + men)
    files.change_study('[estimate.all]\nkind = "cox"', '[estimate.women]\nkind = "cox"\n\n[estimate.men]\nkind = "cox"')
    page.work.open_study(files.study)
    rest(qtbot, page)
    assert page.state.not_opened is None, page.sheet.words
    page.show_step(Step.MODEL)
    assert "sex is female" in page.sheet.words
    page.work.fit()
    rest(qtbot, page)
    assert len(page.sheet.tables) == 4
    assert "Equation women" in page.sheet.words
    assert "Equation men" in page.sheet.words
    page.show_step(Step.PACKAGE)
    rest(qtbot, page)
    assert page.state.package is not None, page.sheet.words


def test_a_spline_is_described_and_fitted(qtbot: QtBot, page: StudyPage, files: StudyFiles) -> None:
    files.change_study('{id = "age", product = [{of = "age"}]}', '{spline_of = "age", knots = 4}')
    page.work.open_study(files.study)
    rest(qtbot, page)
    page.show_step(Step.MODEL)
    assert "restricted cubic spline of age, 4 knots at the default quantiles" in page.sheet.words
    page.work.fit()
    rest(qtbot, page)
    assert len(page.sheet.tables[0].rows.facts) == 5
    assert any("knots" in fact.cells[1] for fact in page.sheet.tables[0].rows.facts)
