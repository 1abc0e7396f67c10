"""The step Update: a model mended, its new version written, signed, and looked at on the page of models."""

from pathlib import Path

import pytest
from PySide6.QtCore import Qt
from PySide6.QtTest import QTest
from pytestqt.qtbot import QtBot

from clinicalc.coefficients.reader import read_file
from clinicalc.gui.main_window import MainWindow
from clinicalc.gui.page_tabs import Page
from clinicalc.gui.study.fact_table import FactTable
from clinicalc.gui.study.steps import Ask, Step
from clinicalc.gui.study.study_foot import Next
from clinicalc.gui.study.study_page import StudyPage
from clinicalc.gui.study.update_deed import UpdateDeed
from clinicalc.gui.study.validation_saves import ValidationReportDeed
from clinicalc.gui.study.write_deed import WriteDeed
from clinicalc.validation.updated import UpdateMethod
from tests.gui.models.shelves import FullShelf, page_of
from tests.gui.models.shelves import rest as rest_models
from tests.gui.study.conftest import rest
from tests.gui.study.validation_files import ValidationFiles, write_validation_files
from tests.library.keys_at_hand import PASSPHRASE, key_file
from tests.library.records_kit import ADA

pytestmark = [
    pytest.mark.gui,
    pytest.mark.qt_log_ignore("This plugin does not support"),
]


def form(page: StudyPage) -> UpdateDeed:
    """The form in which an update is asked for."""
    page.show_step(Step.UPDATE)
    assert page.foot.comes_next is Next.UPDATE
    page.foot.next.click()
    deed = page.right.currentWidget()
    assert isinstance(deed, UpdateDeed)
    return deed


def update(qtbot: QtBot, page: StudyPage, method: UpdateMethod = UpdateMethod.CLOSED_TEST) -> None:
    """The model updated in that way, otherwise as the file says."""
    deed = form(page)
    deed.method.chooser.setCurrentIndex(deed.method.chooser.findData(method))
    deed.ask()
    rest(qtbot, page)
    assert page.state.validating.update is not None, deed.form.refusal.text()


def cells(page: StudyPage, name: str) -> list[tuple[str, ...]]:
    """The rows of a table of the sheet."""
    found = next(one for one in page.sheet.findChildren(FactTable) if one.accessibleName() == name)
    return [fact.cells for fact in found.rows.facts]


def test_the_form_begins_with_what_the_file_says(validated: StudyPage) -> None:
    deed = form(validated)
    assert deed.method.chooser.currentData() == UpdateMethod.CLOSED_TEST
    assert deed.version.text == "0.2.0"
    assert deed.cohort.text == "Tarnwick Millside, everybody registered on 2016-01-01"


def test_tests_choice_and_old_against_new(qtbot: QtBot, validated: StudyPage) -> None:
    update(qtbot, validated)
    made = validated.state.validating.update
    assert made is not None
    (equation,) = made.update.equations
    assert equation.testing is not None
    assert len(cells(validated, "Why this way")) == len(equation.testing.tests)
    assert "Nothing is written yet" in validated.sheet.words
    assert made.after is not None
    for old, new in zip(made.before.horizons, made.after.horizons, strict=True):
        assert old.span is not None
        rows = {row[0]: row[1:] for row in cells(validated, f"Old against new, {old.span.words}")}
        said = rows["Observed / expected"]
        assert said[0].startswith(f"{old.observed_to_expected.value:.3f}")
        assert said[1].startswith(f"{new.observed_to_expected.value:.3f}")
    assert validated.foot.comes_next is Next.WRITE_VERSION
    assert validated.foot.next.hasFocus()


def test_intercept_and_slope_with_limits(qtbot: QtBot, validated: StudyPage) -> None:
    update(qtbot, validated, UpdateMethod.INTERCEPT_SLOPE)
    made = validated.state.validating.update
    assert made is not None
    (equation,) = made.update.equations
    rows = [row for row in cells(validated, "Intercept and slope") if row[0] == "3 years"]
    line = equation.lines[-1]
    assert rows[0][1].startswith(f"{line.intercept:.4f}".replace("-", "−"))
    half = 1.959963984540054 * line.covariance[2] ** 0.5
    assert rows[0][2] == f"{line.slope:.4f} ({line.slope - half:.4f} to {line.slope + half:.4f})"


def test_a_version_that_is_not_higher_is_refused_at_its_field(qtbot: QtBot, validated: StudyPage) -> None:
    deed = form(validated)
    deed.version.edit.setText("0.1.0")
    deed.ask()
    rest(qtbot, validated)
    assert validated.right.currentWidget() is deed
    assert "0.1.0" in deed.form.refusal.text()
    assert deed.version.edit.hasFocus()
    deed.version.edit.setText("")
    deed.ask()
    assert "no name" in deed.form.refusal.text()
    deed.version.edit.setText("0.3.0")
    deed.cohort.edit.setText("")
    deed.ask()
    assert deed.cohort.edit.hasFocus()
    assert validated.state.validating.update is None


def test_a_model_that_holds_is_kept(qtbot: QtBot, page: StudyPage, tmp_path: Path) -> None:
    files = write_validation_files(tmp_path, factor=1.0, people=600)
    page.work.open_study(files.validation)
    rest(qtbot, page)
    update(qtbot, page)
    made = page.state.validating.update
    assert made is not None
    assert made.update.keeps
    assert made.package is None
    assert "The tests keep the model as it is" in page.sheet.words
    assert page.pane.list.says(Step.UPDATE) == "the model is kept"
    assert page.foot.comes_next is Next.UPDATE


def test_the_new_version_is_written_signed_and_looked_at(
    qtbot: QtBot, study_window: MainWindow, validated: StudyPage, held_files: ValidationFiles
) -> None:
    update(qtbot, validated)
    QTest.keyClick(study_window.windowHandle(), Qt.Key.Key_W, Qt.KeyboardModifier.AltModifier)
    qtbot.waitUntil(lambda: isinstance(validated.right.currentWidget(), WriteDeed), timeout=5000)
    deed = validated.right.currentWidget()
    assert isinstance(deed, WriteDeed)
    path = held_files.model.parent / "tarnwick-small-cox-0.2.0.json"
    assert deed.place.edit.text() == str(path)
    key = held_files.model.parent / "ada.key"
    key_file(key, ADA)
    deed.key.edit.setText(str(key))
    deed.secret.edit.setText(PASSPHRASE)
    deed.ask()
    rest(qtbot, validated)
    assert path.exists(), deed.form.refusal.text()
    content = read_file(path).content
    assert content.signatures
    assert content.model.version == "0.2.0"
    assert content.model.ancestry
    assert validated.step is Step.UPDATE
    assert f"Written to {path}" in validated.sheet.words
    assert validated.foot.comes_next is Next.INSTALL
    with qtbot.waitSignal(validated.install_asked) as told:
        validated.foot.next.click()
    assert told.args == [path]


def test_an_update_of_earlier_people_is_named_so(
    qtbot: QtBot, validated: StudyPage, held_files: ValidationFiles
) -> None:
    update(qtbot, validated)
    lines = held_files.people.read_text(encoding="utf-8").splitlines()
    held_files.people.write_text("\n".join(lines[:-1]) + "\n", encoding="utf-8")
    validated.foot.again.click()
    rest(qtbot, validated)
    validated.show_step(Step.UPDATE)
    assert "not of what is open now" in validated.sheet.words
    assert "Why this way" in validated.sheet.words
    assert validated.foot.comes_next is Next.UPDATE


def test_the_report_has_the_update(qtbot: QtBot, validated: StudyPage, held_files: ValidationFiles) -> None:
    update(qtbot, validated)
    validated.sheet.buttons[Ask.UPDATE_REPORT].click()
    deed = validated.right.currentWidget()
    assert isinstance(deed, ValidationReportDeed)
    assert "The update is in it too" in deed.form.says.text()
    deed.ask()
    rest(qtbot, validated)
    path = held_files.validation.parent / "tarnwick-small-cox-validation.pdf"
    assert path.read_bytes().startswith(b"%PDF"), deed.form.refusal.text()


def test_the_page_of_models_looks_at_it(qtbot: QtBot, tmp_path: Path, held_files: ValidationFiles) -> None:
    (tmp_path / "shelf").mkdir()
    shelf = FullShelf(tmp_path / "shelf")
    window = shelf.open()
    qtbot.addWidget(window)
    with qtbot.waitExposed(window):
        window.show()
    window.show_page(Page.STUDY)
    window.others.study().install_asked.emit(held_files.model)
    models = page_of(window)
    rest_models(models)
    assert window.others.study().isHidden()
    assert models.card.is_candidate
    assert models.card.shown is not None
    assert models.card.shown.id == "tarnwick-small-cox"
    window.close()
