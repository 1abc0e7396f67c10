"""The form of missing values and optimism: its fields, what it writes into the study file, what it refuses."""

import tomllib
from pathlib import Path

import msgspec
import pytest
from PySide6.QtCore import Qt
from PySide6.QtWidgets import QApplication, QWidget
from pytestqt.qtbot import QtBot

from clinicalc.development.study_tables import BootstrapTable, ImputationTable
from clinicalc.gui.form_deed import FormDeed
from clinicalc.gui.main_window import MainWindow
from clinicalc.gui.study.column_deed import ColumnDeed
from clinicalc.gui.study.fitting_deed import FittingDeed
from clinicalc.gui.study.methods_deed import REPLICATES, ROUNDS, SETS, MethodsDeed
from clinicalc.gui.study.steps import Ask, Step
from clinicalc.gui.study.study_page import StudyPage
from tests.gui.study.changing_studies import fitting, methods, point, press, save, tree_of
from tests.gui.study.conftest import rest
from tests.gui.study.study_files import StudyFiles

pytestmark = [
    pytest.mark.gui,
    pytest.mark.qt_log_ignore("This plugin does not support"),
]


def test_nothing_is_written_of_a_method_that_is_not_chosen(changing: StudyPage) -> None:
    before = tree_of(changing)
    assert "left out (complete cases)" in changing.sheet.words
    assert "not looked into" in changing.sheet.words
    deed = methods(changing)
    assert not any(field.isVisible() for field in (deed.sets, deed.rounds, deed.seed, deed.replicates, deed.drawing))
    deed.ask()
    assert tree_of(changing) == before


def test_methods_are_said_saved_read_and_taken_away(qtbot: QtBot, changing: StudyPage, files: StudyFiles) -> None:
    before = tree_of(changing)
    deed = methods(changing)
    point(deed.missing.chooser, "yes")
    assert (deed.sets.text, deed.rounds.text, deed.seed.text) == ("20", "10", "1")
    assert not deed.replicates.isVisible()
    point(deed.optimism.chooser, "yes")
    assert (deed.replicates.text, deed.drawing.text) == ("500", "1")
    deed.sets.edit.setText("5")
    deed.drawing.edit.setText("20261201")
    deed.ask()
    assert "filled in: 5 sets, each after 10 rounds over the columns, seed 1" in changing.sheet.words
    assert "found by bootstrap: 500 samples, seed 20261201" in changing.sheet.words
    save(qtbot, changing)
    written = tomllib.loads(files.study.read_text(encoding="utf-8"))
    assert written.pop("imputation") == {"sets": 5, "rounds": 10, "seed": 1}
    assert written.pop("bootstrap") == {"replicates": 500, "seed": 20261201}
    assert written == before
    assert changing.state.opened is not None
    assert changing.state.opened.study.imputation == ImputationTable(5, 10, 1)
    assert changing.state.opened.study.bootstrap == BootstrapTable(500, 20261201)
    changing.show_step(Step.MODEL)
    assert "found by bootstrap: 500 samples, seed 20261201" in changing.sheet.words
    changing.sheet.buttons[Ask.CHANGE].click()
    rest(qtbot, changing)
    deed = methods(changing)
    assert (deed.sets.text, deed.drawing.text) == ("5", "20261201")
    point(deed.missing.chooser, "no")
    point(deed.optimism.chooser, "no")
    deed.ask()
    assert tree_of(changing) == before


@pytest.mark.parametrize(
    ("field", "text", "words"),
    [
        ("sets", "", "a number is missing for the sets"),
        ("sets", "1", "1 is outside 2–200 for the sets"),
        ("sets", "2.5", "“2.5” is no whole number for the sets"),
        ("sets", "-3", "“-3” is no whole number"),
        ("rounds", "201", "201 is outside 1–200 for the rounds"),
        ("seed", "one", "“one” is no whole number for the seed of the sets"),
        ("seed", "9" * 17, "is no whole number"),
        ("replicates", "19", "19 is outside 20–5,000 for the bootstrap samples"),
        ("replicates", "٣٠", "is no whole number"),
        ("drawing", "", "a number is missing for the seed of the samples"),
    ],
)
def test_figures_that_cannot_be_taken_are_refused_at_their_field(
    changing: StudyPage, field: str, text: str, words: str
) -> None:
    before = tree_of(changing)
    deed = methods(changing)
    point(deed.missing.chooser, "yes")
    point(deed.optimism.chooser, "yes")
    typed = getattr(deed, field).edit
    typed.setText(text[: typed.maxLength()] if len(text) < 17 else text)
    if len(text) >= 17:
        words = f"outside 0–{2**53:,}"
    deed.ask()
    assert words.casefold() in deed.form.refusal.text().casefold()
    assert typed.hasFocus()
    assert tree_of(changing) == before


def test_the_limits_are_those_of_a_study_file() -> None:
    """Each end can be read from a study file, and what lies beyond it cannot."""
    limits: tuple[tuple[type[msgspec.Struct], str, tuple[int, int]], ...] = (
        (ImputationTable, "sets", SETS),
        (ImputationTable, "rounds", ROUNDS),
        (BootstrapTable, "replicates", REPLICATES),
    )
    for table, name, (least, most) in limits:
        for good in (least, most):
            assert getattr(msgspec.convert({name: good}, table), name) == good
        for bad in (least - 1, most + 1):
            with pytest.raises(msgspec.ValidationError):
                msgspec.convert({name: bad}, table)


def test_fields_of_a_study_file_that_nobody_here_knows_stay_in_their_table(changing: StudyPage) -> None:
    """What a later version may say beside sets and rounds is not lost by this one."""
    assert changing.state.draft is not None
    tree = {**changing.state.draft.tree, "imputation": {"sets": 3, "more": "said"}}
    from clinicalc.operations.study_draft import changed

    changing.work.take_draft(changed(changing.state.draft, tree))
    deed = methods(changing)
    assert deed.sets.text == "3"
    deed.rounds.edit.setText("4")
    deed.ask()
    assert tree_of(changing)["imputation"] == {"sets": 3, "more": "said", "rounds": 4, "seed": 1}


def test_the_forms_are_filled_in_with_the_keys_alone(
    qtbot: QtBot, study_window: MainWindow, changing: StudyPage
) -> None:
    """Alt and the letter of a field leads to it, Enter on to the next that is shown, and at the end does it."""
    alt = Qt.KeyboardModifier.AltModifier
    press(study_window, Qt.Key.Key_I, alt)
    qtbot.waitUntil(lambda: isinstance(changing.right.currentWidget(), MethodsDeed), timeout=5000)
    deed = changing.right.currentWidget()
    assert isinstance(deed, MethodsDeed)
    press(study_window, Qt.Key.Key_L, alt)
    assert deed.missing.chooser.hasFocus()
    press(study_window, Qt.Key.Key_Down)
    assert deed.sets.isVisible()
    walked: list[QWidget | None] = []
    for _ in range(4):
        press(study_window, Qt.Key.Key_Return)
        walked.append(QApplication.focusWidget())
    assert walked == [deed.sets.edit, deed.rounds.edit, deed.seed.edit, deed.optimism.chooser]
    press(study_window, Qt.Key.Key_Down)
    for key, field in (
        (Qt.Key.Key_T, deed.sets),
        (Qt.Key.Key_R, deed.rounds),
        (Qt.Key.Key_D, deed.seed),
        (Qt.Key.Key_P, deed.replicates),
        (Qt.Key.Key_E, deed.drawing),
    ):
        press(study_window, key, alt)
        assert field.edit.hasFocus(), key
    press(study_window, Qt.Key.Key_Return)
    assert not isinstance(changing.right.currentWidget(), FormDeed)
    assert set(tree_of(changing)) >= {"imputation", "bootstrap"}
    assert changing.sheet.buttons[Ask.METHODS].hasFocus()
    press(study_window, Qt.Key.Key_H, alt)
    qtbot.waitUntil(lambda: isinstance(changing.right.currentWidget(), FittingDeed), timeout=5000)
    fit = changing.right.currentWidget()
    assert isinstance(fit, FittingDeed)
    press(study_window, Qt.Key.Key_P, alt)
    assert fit.penalty.chooser.hasFocus()
    press(study_window, Qt.Key.Key_Down)
    press(study_window, Qt.Key.Key_Return)
    assert fit.strength.edit.hasFocus()
    press(study_window, Qt.Key.Key_R, alt)
    assert fit.strength.edit.hasFocus()


def test_a_study_file_from_the_forms_alone_plans_everything(qtbot: QtBot, page: StudyPage, files: StudyFiles) -> None:
    """From a file of people with competing events to a Fine–Gray study with both methods, nothing edited by hand."""
    import pandas as pd

    table = pd.read_csv(files.people)
    table.loc[::7, "status"] = 2
    table.to_csv(files.people, index=False)
    page.work.begin_from(files.people)
    rest(qtbot, page)
    page.show_step(Step.DATA)
    assert page.state.draft is not None
    page.sheet.tables[0].go_to(page.state.draft.columns.index("status"))
    page.sheet.buttons[Ask.COLUMN].click()
    column = page.right.currentWidget()
    assert isinstance(column, ColumnDeed)
    column.happened.edit.setText("1")
    column.censored.edit.setText("0")
    column.competing.edit.setText("2")
    column.ask()
    page.show_step(Step.MODEL)
    deed = fitting(page)
    point(deed.kind.chooser, "fine-gray")
    deed.horizons.edit.setText("3")
    deed.which.edit.setText("death from another cause")
    deed.ask()
    chosen = methods(page)
    point(chosen.missing.chooser, "yes")
    point(chosen.optimism.chooser, "yes")
    chosen.replicates.edit.setText("20")
    chosen.ask()
    tree = tree_of(page)
    assert tree["estimate"]["all"] == {"kind": "fine-gray", "ties": "breslow", "covariance": "robust"}
    assert tree["equations"][0]["competing_events"] == {
        "handled": "subdistribution",
        "which": "death from another cause",
    }
    assert tree["bootstrap"] == {"replicates": 20, "seed": 1}
    assert Path(tree["cohort"]["file"]) == Path("people.csv")
