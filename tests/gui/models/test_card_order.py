"""What a card that waits says first, and in which words its difference is told."""

import pytest
from pytestqt.qtbot import QtBot

from clinicalc.gui.models.card_view import CardView
from tests.gui.models.card_shelf import CardShelf
from tests.gui.models.test_card_view import sheet_of, words_on
from tests.gui.walking import settle


@pytest.fixture
def view(qtbot: QtBot) -> CardView:
    """A view on screen, beside the list."""
    shown = CardView()
    qtbot.addWidget(shown)
    shown.resize(880, 700)
    with qtbot.waitExposed(shown):
        shown.show()
    return shown


def test_what_would_change_comes_first_on_a_card_that_waits(view: CardView, card_shelf: CardShelf) -> None:
    for which, first in (("waiting", True), ("in use", False)):
        view.show_card(card_shelf.cards[which])
        settle()
        sheet = sheet_of(view)
        assert sheet.difference is not None
        assert (sheet.difference.y() < sheet.cautions[0].y()) == first
        stops = sheet.tab_stops()
        assert sheet.given is not None
        assert stops[stops.index(sheet.given.edit) + 1] is sheet.difference.chooser.chooser


def test_standard_patients_are_told_by_the_labels_of_their_values(view: CardView, card_shelf: CardShelf) -> None:
    view.show_card(card_shelf.cards["waiting"])
    view.show_difference(card_shelf.difference)
    settle()
    (said,) = [words for words in words_on(view) if "Largest rise" in words]
    assert "systolic blood pressure 142 mmHg" in said
    assert "HDL cholesterol" in said
    assert "prior_cvd" not in said  # nobody among them is excluded
    assert "_" not in said
