"""The day beside "Approve…": where it stands, that the form takes it along, that one that is none is refused."""

import pytest
from PySide6.QtCore import Qt
from PySide6.QtTest import QTest
from pytestqt.qtbot import QtBot

from clinicalc.gui.form_fields import DayField
from clinicalc.gui.models.models_page import ModelsPage
from clinicalc.operations.model_card import Deed
from tests.gui.models.shelves import IN_USE, WAITING, WITHDRAWN, FullShelf, rest

A_YEAR_ON = "1 December 2027"
"""From the day of `tests.library.machines.NOW`."""


def choose(page: ModelsPage, full: FullShelf, title: str) -> None:
    page.side.list.choose(full.fingerprints[title])
    page.read_again()
    rest(page)


def ask(page: ModelsPage) -> None:
    page.foot.deeds[Deed.APPROVE].setFocus()
    QTest.keyClick(page.foot.deeds[Deed.APPROVE], Qt.Key.Key_Return)
    rest(page)


def day_in_form(page: ModelsPage) -> str:
    (field,) = [field for field in page.findChildren(DayField) if field.isVisible()]
    return field.read.text()


@pytest.mark.parametrize(
    ("title", "stands", "says", "style"),
    [
        (WAITING, True, "&Approve…", "primary"),
        (WITHDRAWN, True, "&Approve…", "primary"),
        (IN_USE, False, "&Approve again…", ""),
    ],
)
def test_it_stands_where_no_approval_does(
    page: ModelsPage, full: FullShelf, title: str, stands: bool, says: str, style: str
) -> None:
    choose(page, full, title)
    assert page.foot.until.isVisible() == stands
    assert (page.foot.deeds[Deed.APPROVE].text(), page.foot.deeds[Deed.APPROVE].objectName()) == (says, style)


def test_the_form_takes_the_day_along(page: ModelsPage, full: FullShelf) -> None:
    choose(page, full, WAITING)
    assert page.foot.until.edit.text() == A_YEAR_ON
    page.foot.until.edit.setText("2027-03-01")
    page.read_again()
    rest(page)
    assert page.foot.until.edit.text() == "2027-03-01"
    ask(page)
    assert day_in_form(page) == "1 March 2027"


def test_another_model_has_a_day_of_its_own(page: ModelsPage, full: FullShelf) -> None:
    choose(page, full, WAITING)
    page.foot.until.edit.setText("2027-03-01")
    choose(page, full, WITHDRAWN)
    assert page.foot.until.edit.text() == A_YEAR_ON


@pytest.mark.parametrize(("typed", "said"), [("31 June 2027", "“31 June 2027” is no day"), ("", "No day is given.")])
def test_a_day_that_is_none_is_refused_beside_it(page: ModelsPage, full: FullShelf, typed: str, said: str) -> None:
    choose(page, full, WAITING)
    page.foot.until.edit.setText(typed)
    ask(page)
    assert not page.deeds.is_open
    assert page.side.strip.words.text().startswith(said)
    assert page.foot.until.edit.hasFocus()


def test_in_a_window_with_little_room_only_the_form_asks(qtbot: QtBot, page: ModelsPage, full: FullShelf) -> None:
    choose(page, full, WAITING)
    page.window().resize(640, 400)
    qtbot.waitUntil(lambda: not page.foot.until.isVisible())
    page.go_across()
    ask(page)
    assert day_in_form(page) == A_YEAR_ON
