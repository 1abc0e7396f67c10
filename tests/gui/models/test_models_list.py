"""The list of models: its groups, what can be chosen, the filter, what is read aloud, and the forms of the spines."""

from collections.abc import Sequence
from pathlib import Path

import pytest
from PySide6.QtCore import QModelIndex, Qt
from PySide6.QtGui import QAccessible, QImage, QPainter
from PySide6.QtWidgets import QApplication, QListView
from pytestqt.qtbot import QtBot

from clinicalc.gui.models.list_entries import ENTRY, GroupHeading
from clinicalc.gui.models.models_list import ModelsList
from clinicalc.gui.models.spine import HEIGHT, WIDTH, paint_spine
from clinicalc.gui.tokens import DARK, LIGHT, Tokens
from clinicalc.library.standing import Standing
from clinicalc.operations.library_view import LibraryView
from tests.gui.bedside_hands import press
from tests.gui.models.shelves import (
    HELD,
    IN_USE,
    OVERDUE,
    REFUSED,
    WAITING,
    WITHDRAWN,
    FullShelf,
    many_rows,
    reading_of,
)

pytestmark = pytest.mark.gui


@pytest.fixture
def listed(qtbot: QtBot, full: FullShelf) -> ModelsList:
    """The list of a library with a model in every state."""
    made = ModelsList()
    qtbot.addWidget(made)
    made.resize(400, 600)
    made.show_view(full.view())
    with qtbot.waitExposed(made):
        made.show()
    return made


def lines(made: ModelsList) -> list[str]:
    """Everything in the list, from top to bottom."""
    model = made.entries
    entries = [model.index(place).data(ENTRY) for place in range(model.rowCount())]
    return [f"[{entry.words}]" if isinstance(entry, GroupHeading) else entry.title for entry in entries]


def many(folder: Path, count: int = 1000) -> LibraryView:
    return reading_of(many_rows(count), folder)


def titles(made: ModelsList) -> Sequence[str]:
    return [row.title for row in made.entries.rows]


def test_models_stand_in_their_groups(listed: ModelsList) -> None:
    in_use, waiting = ["[In use]", IN_USE], ["[Waiting for approval]", WAITING]
    assert lines(listed) == [*in_use, *waiting, "[Out of use]", OVERDUE, REFUSED, HELD, WITHDRAWN]


def test_headings_are_passed_over_by_keys_and_cannot_be_chosen(listed: ModelsList) -> None:
    told: list[str] = []
    listed.chosen.connect(told.append)
    for _ in range(8):  # more than there are: the last stays chosen
        press(listed, Qt.Key.Key_Down)
    rows = listed.entries.rows
    assert told == [row.fingerprint for row in rows]
    press(listed, Qt.Key.Key_Home)
    assert listed.fingerprint == rows[0].fingerprint
    for place in range(listed.entries.rowCount()):
        index = listed.entries.index(place)
        is_heading = isinstance(index.data(ENTRY), GroupHeading)
        assert bool(listed.entries.flags(index) & Qt.ItemFlag.ItemIsSelectable) is not is_heading
    assert not listed.entries.flags(QModelIndex())


def test_every_row_is_read_aloud_with_its_state(listed: ModelsList) -> None:
    spoken = [
        listed.entries.index(place).data(Qt.ItemDataRole.AccessibleTextRole)
        for place in range(listed.entries.rowCount())
    ]
    assert spoken[0] == "In use"
    assert spoken[1] == f"{IN_USE}, version 1.0.0. Approved until 30 June 2027. In use."
    assert f"{WAITING}, version 1.3.0. Not vetted, installed 1 December 2026. Waiting for approval." in spoken
    assert f"{REFUSED}, version 0.9.2. Refused: changed after approval. Out of use." in spoken
    whole = QAccessible.queryAccessibleInterface(listed)
    assert whole is not None
    assert whole.text(QAccessible.Text.Name) == "Models of the library"
    assert whole.child(1).text(QAccessible.Text.Name) == spoken[1]


@pytest.mark.parametrize(
    ("words", "found"),
    [
        ("lipid", [WAITING, WITHDRAWN]),
        ("LIPID older", [WITHDRAWN]),
        ("form 1.3", [WAITING]),
        ("falls-after-65", [OVERDUE]),
        ("overdue", [OVERDUE]),
        ("waiting", [WAITING]),
        ("not vetted", [WAITING]),
        ("withdrawn", [WITHDRAWN]),
        ("held", [HELD]),
        ("osei", []),
        ("  ", [IN_USE, WAITING, OVERDUE, REFUSED, HELD, WITHDRAWN]),
    ],
)
def test_the_filter_keeps_what_has_every_word(listed: ModelsList, words: str, found: list[str]) -> None:
    listed.keep(words)
    assert titles(listed) == found


def test_a_fingerprint_is_found_by_how_it_begins(listed: ModelsList, full: FullShelf) -> None:
    fingerprint = full.fingerprints[HELD]
    grouped = " ".join(fingerprint[at : at + 4] for at in range(0, 64, 4))
    for typed in (fingerprint[:4], grouped[:14], grouped, fingerprint.upper()):
        listed.keep(typed)
        assert titles(listed) == [HELD], typed
    listed.keep(fingerprint[8:20])
    assert titles(listed) == []


def test_a_group_without_rows_has_no_heading(listed: ModelsList) -> None:
    listed.keep("withdrawn")
    assert lines(listed) == ["[Out of use]", WITHDRAWN]


def test_the_chosen_model_stays_chosen_while_the_filter_leaves_it_out(listed: ModelsList, full: FullShelf) -> None:
    told: list[str] = []
    listed.choose(full.fingerprints[HELD])
    listed.chosen.connect(told.append)
    listed.keep("waiting")
    assert listed.fingerprint == full.fingerprints[HELD]
    assert not listed.currentIndex().isValid()
    listed.keep("")
    assert listed.currentIndex().data(ENTRY).title == HELD
    assert told == []


def test_choice_and_place_stay_when_the_library_is_read_again(qtbot: QtBot, tmp_path: Path) -> None:
    view = many(tmp_path)
    made = ModelsList()
    qtbot.addWidget(made)
    made.resize(400, 600)
    made.show_view(view)
    with qtbot.waitExposed(made):
        made.show()
    chosen = view.rows[500]
    made.choose(chosen.fingerprint)
    made.verticalScrollBar().setValue(made.verticalScrollBar().value() - 60)
    place = made.verticalScrollBar().value()
    assert place > 1000
    told: list[str] = []
    made.chosen.connect(told.append)
    made.show_view(view)
    QApplication.processEvents()
    assert made.currentIndex().data(ENTRY) == chosen
    assert made.verticalScrollBar().value() == place
    assert told == []


def test_a_model_that_is_gone_is_chosen_no_more(listed: ModelsList, full: FullShelf, tmp_path: Path) -> None:
    listed.choose(full.fingerprints[HELD])
    listed.show_view(many(tmp_path / "other", 30))
    assert listed.fingerprint == ""
    assert not listed.selectionModel().hasSelection()


def test_enter_goes_on_and_chooses_nothing_else(listed: ModelsList) -> None:
    went: list[bool] = []
    listed.entered.connect(lambda: went.append(True))
    press(listed, Qt.Key.Key_Return)
    assert went == []  # nothing is chosen yet
    press(listed, Qt.Key.Key_Down)
    press(listed, Qt.Key.Key_Return)
    assert went == [True]
    assert listed.fingerprint == listed.entries.rows[0].fingerprint


def test_rows_are_as_high_as_their_letters_need(listed: ModelsList) -> None:
    row = listed.visualRect(listed.entries.index(1))
    heading = listed.visualRect(listed.entries.index(0))
    assert row.height() >= 44  # two lines and room to hit them
    assert heading.height() < row.height()
    assert isinstance(listed, QListView)


def spine(standing: Standing, tokens: Tokens) -> QImage:
    """A spine on the ground of the window, with room round it."""
    image = QImage(WIDTH + 12, HEIGHT + 8, QImage.Format.Format_RGB32)
    image.fill(tokens.ground)
    painter = QPainter(image)
    paint_spine(painter, 4, 4, standing, tokens)
    painter.end()
    return image


@pytest.mark.parametrize("tokens", [LIGHT, DARK])
def test_no_two_states_have_the_same_spine(tokens: Tokens) -> None:
    images = [spine(standing, tokens) for standing in Standing]
    for place, image in enumerate(images):
        for other in images[place + 1 :]:
            assert _different(image, other) > 40  # pixels of some 300


def test_spines_differ_without_their_colour() -> None:
    """Withdrawn is empty and in edge; the others are told apart by form, so a grey print tells them apart too."""
    in_ink = [standing for standing in Standing if standing is not Standing.WITHDRAWN]
    dark = [_dark_pixels(spine(standing, LIGHT)) for standing in in_ink]
    assert dark[in_ink.index(Standing.IN_USE)] == max(dark)
    half = dark[in_ink.index(Standing.REVIEW_OVERDUE)]
    assert 0.4 * max(dark) < half < 0.8 * max(dark)


def _different(one: QImage, other: QImage) -> int:
    return sum(
        abs(one.pixelColor(x, y).lightness() - other.pixelColor(x, y).lightness()) > 60
        for x in range(one.width())
        for y in range(one.height())
    )


def _dark_pixels(image: QImage) -> int:
    return sum(image.pixelColor(x, y).lightness() < 100 for x in range(image.width()) for y in range(image.height()))
