"""A card as PDF: the record of its model and the difference it shows, written where somebody says."""

from collections.abc import Callable
from pathlib import Path
from time import sleep

import pytest
from PySide6.QtCore import Qt
from PySide6.QtTest import QTest
from PySide6.QtWidgets import QWidget
from pytestqt.qtbot import QtBot

from clinicalc.errors import ClinicalcError
from clinicalc.gui.errands import Errands
from clinicalc.gui.file_choosing import Wanted
from clinicalc.gui.models.card_prints import BUSY, CardPrints
from clinicalc.gui.models.card_view import CardView
from clinicalc.library.opening import OpenedLibrary
from tests.gui.models.card_shelf import CardShelf


class Place:
    """Says where to, and remembers what was asked."""

    def __init__(self, folder: Path) -> None:
        self.folder: Path | None = folder
        self.asked: list[tuple[Wanted, str]] = []

    def __call__(self, _: QWidget, wanted: Wanted, name: str) -> Path | None:
        self.asked.append((wanted, name))
        return None if self.folder is None else self.folder / name


@pytest.fixture
def place(tmp_path: Path) -> Place:
    return Place(tmp_path)


@pytest.fixture
def make(qtbot: QtBot, place: Place, card_shelf: CardShelf) -> Callable[[], tuple[CardView, CardPrints, Errands]]:
    def make_() -> tuple[CardView, CardPrints, Errands]:
        view, errands = CardView(), Errands()
        qtbot.addWidget(view)
        view.resize(880, 702)
        view.show()

        def opened() -> OpenedLibrary:
            return card_shelf.opened

        return view, CardPrints(view, errands, place, opened), errands

    return make_


Make = Callable[[], tuple[CardView, CardPrints, Errands]]


def test_the_record_of_a_model_is_saved(qtbot: QtBot, make: Make, place: Place, card_shelf: CardShelf) -> None:
    view, prints, errands = make()
    view.show_card(card_shelf.cards["in use"])
    assert view.sheet is not None
    assert view.sheet.save is not None
    with qtbot.waitSignal(prints.told, timeout=20_000) as told:
        QTest.keyClick(view.sheet.save, Qt.Key.Key_Return)
    ((wanted, name),) = place.asked
    assert wanted is Wanted.RECORD_PDF
    assert name.startswith("approval tarnwick-cvd-10y 1.2.0 ")
    assert told.args == [f"Saved as {name}."]
    assert place.folder is not None
    assert (place.folder / name).read_bytes().startswith(b"%PDF-")
    qtbot.waitUntil(lambda: not errands.is_busy)


def test_the_difference_that_is_shown_is_saved(qtbot: QtBot, make: Make, place: Place, card_shelf: CardShelf) -> None:
    view, prints, errands = make()
    view.show_card(card_shelf.cards["waiting"])
    assert view.sheet is not None
    assert view.sheet.difference is not None
    assert view.sheet.difference.save.isHidden()  # there is none yet
    view.show_difference(card_shelf.difference)
    with qtbot.waitSignal(prints.told, timeout=20_000) as told:
        QTest.keyClick(view.sheet.difference.save, Qt.Key.Key_Return)
    ((wanted, name),) = place.asked
    assert wanted is Wanted.DIFFERENCE_PDF
    assert name.startswith("difference tarnwick-cvd-10y 1.2.0 to 1.3.0 ")
    assert told.args == [f"Saved as {name}."]
    assert place.folder is not None
    assert (place.folder / name).read_bytes().startswith(b"%PDF-")
    qtbot.waitUntil(lambda: not errands.is_busy)


def test_nobody_chose_a_place_and_nothing_is_written(make: Make, place: Place, card_shelf: CardShelf) -> None:
    view, prints, errands = make()
    view.show_card(card_shelf.cards["in use"])
    place.folder = None
    prints.save_record()
    assert len(place.asked) == 1
    assert not errands.is_busy


def test_a_place_that_cannot_be_written_is_said(
    qtbot: QtBot, make: Make, place: Place, card_shelf: CardShelf, tmp_path: Path
) -> None:
    view, prints, errands = make()
    view.show_card(card_shelf.cards["in use"])
    place.folder = tmp_path / "nowhere"
    with qtbot.waitSignal(prints.told, timeout=20_000) as told:
        prints.save_record()
    assert "Choose a folder that exists" in told.args[0]
    qtbot.waitUntil(lambda: not errands.is_busy)


def test_while_something_else_is_done_that_is_said(qtbot: QtBot, make: Make, card_shelf: CardShelf) -> None:
    view, prints, errands = make()
    view.show_card(card_shelf.cards["in use"])

    def fail(_: ClinicalcError) -> None:
        raise AssertionError

    assert errands.run("Waiting", lambda _: sleep(0.2), lambda _: None, fail)
    with qtbot.waitSignal(prints.told) as told:
        prints.save_record()
    assert told.args == [BUSY]
    qtbot.waitUntil(lambda: not errands.is_busy)


def test_a_file_that_is_not_in_the_library_has_no_record(make: Make, place: Place, card_shelf: CardShelf) -> None:
    view, prints, _ = make()
    view.show_card(card_shelf.cards["candidate"])
    assert view.sheet is not None
    assert view.sheet.save is None
    prints.save_record()
    prints.save_difference()
    assert place.asked == []


def test_where_nobody_prints_nothing_is_offered(qtbot: QtBot, card_shelf: CardShelf) -> None:
    view = CardView()
    qtbot.addWidget(view)
    view.show_card(card_shelf.cards["waiting"])
    view.show_difference(card_shelf.difference)
    assert view.sheet is not None
    assert view.sheet.save is None
    assert view.sheet.difference is not None
    assert view.sheet.difference.save.isHidden()
