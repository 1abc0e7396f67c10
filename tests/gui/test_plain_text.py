"""Nothing that comes from a file or a person is ever taken as markup; every field has a name."""

import html
from collections.abc import Callable

import msgspec
import pytest
from PySide6.QtCore import Qt
from PySide6.QtGui import QAccessible
from PySide6.QtWidgets import (
    QAbstractButton,
    QComboBox,
    QLabel,
    QLineEdit,
    QPlainTextEdit,
    QPushButton,
    QTextEdit,
    QWidget,
)
from pytestqt.qtbot import QtBot

from clinicalc.assessment.model import Model, prepare_model
from clinicalc.coefficients.reader import ReadFile
from clinicalc.coefficients.schema import CoefficientFile, NumberPredictor
from clinicalc.gui.access_keys import mark_letters
from clinicalc.gui.main_window import MainWindow
from tests.gui.bedside_hands import fill_2008, number_row, retype_number

pytestmark = pytest.mark.gui

MARKUP = '<b>Bold</b> & <img src="x"> form'


@pytest.fixture
def marked_up(lipids: Model) -> Model:
    """The lipid form with markup in its title, its outcome, a group and a label."""
    content = lipids.content
    first = content.predictors[0]
    assert isinstance(first, NumberPredictor)
    predictors = (msgspec.structs.replace(first, label="<i>Age</i> & more", group=MARKUP), *content.predictors[1:])
    changed = msgspec.structs.replace(content, title=MARKUP, outcome=f"First event: {MARKUP}", predictors=predictors)
    return prepare_model(
        ReadFile(lipids.name, CoefficientFile("clinicalc.coefficients/1", changed, ()), b"", lipids.fingerprint)
    )


def test_every_label_is_plain_text(qtbot: QtBot, window: MainWindow) -> None:
    fill_2008(window)
    retype_number(window, "total_cholesterol", "<b>5</b>")
    labels = window.findChildren(QLabel)
    assert len(labels) > 30
    assert {label.textFormat() for label in labels} == {Qt.TextFormat.PlainText}
    assert window.findChildren(QTextEdit) == []


def test_no_tool_tip_anywhere(window: MainWindow) -> None:
    """Qt guesses whether a tool tip is markup, so there are none."""
    assert [w.toolTip() for w in window.findChildren(QWidget) if w.toolTip()] == []


def test_markup_is_shown_letter_for_letter(
    qtbot: QtBot, open_window: Callable[[Model | None], MainWindow], marked_up: Model
) -> None:
    window = open_window(marked_up)
    assert window.model_bar.chooser.title == MARKUP
    window.model_bar.chooser.show_title(MARKUP * 3)
    # the tip of a title that is cut is markup of our own, with the title in it letter for letter
    assert window.model_bar.chooser.tip == f"<qt>{html.escape(MARKUP * 3)}</qt>"
    assert window.sheet.headline.text() == "No number yet"
    assert window.sheet.outcome.text() == f"Event: {MARKUP}."
    assert MARKUP in [label.text() for label in window.values.findChildren(QLabel)]
    row = number_row(window, "age")
    assert row.label.text() == "<&i>Age</i> && more"  # one access mark; the ampersand of the label is doubled
    assert row.edit.accessibleName() == "<i>Age</i> & more"
    retype_number(window, "age", "<b>5")
    assert "“<b>5”" in " ".join(label.text() for label in window.sheet.findings.findChildren(QLabel))


def test_every_control_has_an_accessible_name(window: MainWindow) -> None:
    controls = [
        control
        for kind in (QLineEdit, QComboBox, QAbstractButton, QPlainTextEdit)
        for control in window.findChildren(kind)
        if control.isVisibleTo(window) and not control.objectName().startswith("qt_")
    ]
    assert len(controls) > 20
    for control in controls:
        face = QAccessible.queryAccessibleInterface(control)
        assert face is not None
        assert face.text(QAccessible.Text.Name).strip(), control


def test_labels_are_buddies_of_their_fields(window: MainWindow) -> None:
    for id, row in window.values.rows.items():
        buddies = [label.buddy() for label in row.findChildren(QLabel) if label.buddy() is not None]
        assert len(buddies) == 1, id
        assert row.isAncestorOf(buddies[0])


def test_access_letters_do_not_clash(window: MainWindow) -> None:
    texts = [b.text() for b in window.findChildren(QPushButton) if b.isVisible()]
    texts += [label.text() for label in window.findChildren(QLabel) if label.buddy() is not None]
    open_file = window.model_bar.chooser.open_action
    assert "Alt+O" in [keys.toString() for keys in open_file.shortcuts()]
    texts.append(open_file.text())
    letters = [
        text.replace("&&", "")[text.replace("&&", "").index("&") + 1].lower()
        for text in texts
        if "&" in text.replace("&&", "")
    ]
    assert sorted(letters) == sorted(set(letters))
    assert {"o", "n", "v"} <= set(letters)


def test_letters_of_commands_are_kept_and_others_given_once() -> None:
    assert mark_letters(["Nose", "Sex", "Sex & Co", "9"]) == ("No&se", "S&ex", "Se&x && Co", "9")
