"""The guide and the page about the program: plain text, by keyboard, with names, nothing too small."""

from collections.abc import Callable

import pytest
from PySide6.QtCore import Qt
from PySide6.QtGui import QAccessible
from PySide6.QtWidgets import (
    QAbstractButton,
    QAbstractScrollArea,
    QDialog,
    QLabel,
    QListWidget,
    QPlainTextEdit,
    QTextEdit,
    QWidget,
)
from pytestqt.qtbot import QtBot

from clinicalc import __version__
from clinicalc.gui.about_view import AboutView
from clinicalc.gui.guide_view import GuideView
from clinicalc.operations.about import About, read_about
from clinicalc.operations.guide import PAGES, Block, BlockKind, Page, read_guide
from tests.gui.bedside_hands import press

MARKUP = "<b>bold</b> & <a href='x'>link</a>"


def shown(qtbot: QtBot, dialog: QDialog) -> None:
    """Show a dialog and wait until it is on the screen."""
    qtbot.addWidget(dialog)
    with qtbot.waitExposed(dialog):
        dialog.show()
    dialog.activateWindow()


@pytest.fixture
def guide(qtbot: QtBot) -> GuideView:
    """The guide on its first page."""
    view = GuideView()
    shown(qtbot, view)
    return view


@pytest.fixture
def about(qtbot: QtBot) -> AboutView:
    """The page about the program."""
    view = AboutView()
    shown(qtbot, view)
    return view


def words_on(view: QWidget) -> list[str]:
    """The texts of all labels."""
    return [label.text() for label in view.findChildren(QLabel)]


@pytest.mark.parametrize("name", PAGES)
def test_a_page_shows_every_block(guide: GuideView, name: str) -> None:
    guide.show_page(name)
    page = next(page for page in read_guide() if page.name == name)
    shown_words = words_on(guide.reader)
    assert shown_words[0] == page.title
    assert [word for word in shown_words[1:] if word not in ("–", *(f"{n}." for n in range(1, 10)))] == [
        block.text for block in page.blocks
    ]
    assert {label.textFormat() for label in guide.findChildren(QLabel)} == {Qt.TextFormat.PlainText}
    assert guide.findChildren(QTextEdit) == []
    assert guide.reader.accessibleName() == page.title
    assert guide.reader.accessibleDescription() == page.text


def test_markup_in_a_page_is_shown_letter_for_letter(qtbot: QtBot) -> None:
    kinds = (BlockKind.HEADING, BlockKind.PARAGRAPH, BlockKind.ITEM, BlockKind.CODE)
    page = Page("one", MARKUP, tuple(Block(kind, MARKUP, "–") for kind in kinds))
    view = GuideView(pages=(page,))
    shown(qtbot, view)
    assert words_on(view.reader).count(MARKUP) == 5
    assert view.list.item(0).text() == MARKUP
    assert {label.textFormat() for label in view.findChildren(QLabel)} == {Qt.TextFormat.PlainText}


def test_the_guide_is_used_by_keyboard_alone(qtbot: QtBot, guide: GuideView) -> None:
    assert guide.focusWidget() is guide.list
    press(guide.list, Qt.Key.Key_Down)
    assert guide.reader.accessibleName() == guide.guide_pages[1].title
    guide.show_page("findings")
    press(guide, Qt.Key.Key_F6)
    assert guide.focusWidget() is guide.reader
    bar = guide.reader.verticalScrollBar()
    qtbot.waitUntil(lambda: bar.maximum() > 0)
    press(guide.reader, Qt.Key.Key_Down)
    assert bar.value() > 0
    press(guide.list, Qt.Key.Key_Down)
    assert guide.reader.verticalScrollBar().value() == 0
    press(guide, Qt.Key.Key_F6)
    assert guide.focusWidget() is guide.list
    press(guide.list, Qt.Key.Key_Tab)
    assert guide.focusWidget() is guide.reader
    press(guide.reader, Qt.Key.Key_Tab)
    assert guide.focusWidget() is guide.close_button
    press(guide, Qt.Key.Key_Escape)
    assert not guide.isVisible()


def test_a_page_that_is_not_there_changes_nothing(guide: GuideView) -> None:
    guide.show_page("keyboard")
    guide.show_page("nowhere")
    assert guide.reader.accessibleName() == "Keyboard"


def test_the_window_beside_them_stays_usable(guide: GuideView, about: AboutView) -> None:
    assert not guide.isModal()
    assert not about.isModal()


def test_no_title_is_cut_short(guide: GuideView) -> None:
    metrics = guide.list.fontMetrics()
    for page in guide.guide_pages:
        assert metrics.horizontalAdvance(page.title) < guide.list.viewport().width() - 24


def test_about_says_what_it_must(about: AboutView) -> None:
    said = read_about()
    words = words_on(about)
    assert words[:4] == [f"clinicalc {__version__}", said.purpose, said.no_approval, said.hazards]
    assert about.notices.toPlainText() == said.notices
    assert about.notices.isReadOnly()
    press(about, Qt.Key.Key_Escape)
    assert not about.isVisible()


def test_markup_in_the_notices_is_shown_letter_for_letter(qtbot: QtBot) -> None:
    view = AboutView(about=About(MARKUP, "1", MARKUP, MARKUP, MARKUP, MARKUP))
    shown(qtbot, view)
    assert view.notices.toPlainText() == MARKUP
    assert words_on(view).count(MARKUP) == 3
    assert {label.textFormat() for label in view.findChildren(QLabel)} == {Qt.TextFormat.PlainText}


@pytest.mark.parametrize("make", [GuideView, AboutView])
def test_every_control_has_a_name_and_is_large_enough(qtbot: QtBot, make: Callable[[], QDialog]) -> None:
    view = make()
    shown(qtbot, view)
    kinds = (QAbstractButton, QListWidget, QPlainTextEdit, QAbstractScrollArea)
    controls = {c for kind in kinds for c in view.findChildren(kind) if not c.objectName().startswith("qt_")}
    assert len(controls) >= 2
    for control in controls:
        face = QAccessible.queryAccessibleInterface(control)
        assert face is not None
        assert face.text(QAccessible.Text.Name).strip(), control
        assert min(control.width(), control.height()) >= 24
    for listed in view.findChildren(QListWidget):
        assert all(listed.visualItemRect(listed.item(n)).height() >= 24 for n in range(listed.count()))
    assert [w.toolTip() for w in view.findChildren(QWidget) if w.toolTip()] == []


@pytest.mark.parametrize("width", [760, 480, 400])
@pytest.mark.parametrize("name", PAGES)
def test_no_text_is_wider_than_the_smallest_dialog(qtbot: QtBot, guide: GuideView, name: str, width: int) -> None:
    guide.resize(width, 480)
    assert guide.width() <= max(width, 640)  # the usual window at 200 % text
    guide.show_page(name)
    reader = guide.reader
    body = reader.widget()
    assert body is not None
    qtbot.waitUntil(lambda: body.width() == reader.viewport().width())
    for label in reader.findChildren(QLabel):
        if label.isVisibleTo(reader):
            right = label.mapTo(reader.viewport(), label.rect().topRight()).x()
            assert right <= reader.viewport().width()
            assert label.height() >= label.heightForWidth(label.width()), label.text()
            assert label.width() >= label.minimumSizeHint().width(), label.text()
