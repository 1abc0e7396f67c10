"""Every deed, wide and narrow: nothing cut, nothing nameless, each letter once, the tab key all round, one window."""

from collections.abc import Callable, Iterator
from pathlib import Path

import pytest
from PySide6.QtCore import QEvent, QObject
from PySide6.QtWidgets import QApplication, QWidget
from pytestqt.qtbot import QtBot

from clinicalc.gui.deedlike import Deedlike
from clinicalc.gui.models.deeds.approve_deed import ApproveDeed
from clinicalc.gui.models.deeds.given import Given, LibraryDeed
from clinicalc.gui.models.deeds.people_deed import PeopleDeed
from clinicalc.operations.course import Course
from clinicalc.operations.model_card import Deed
from tests.cli.calling import example
from tests.cli.practices import FINGERPRINT, TARNWICK, found_practice
from tests.gui.models.deeds_kit import DeedRoom
from tests.gui.walking import access_letters, cut_texts, nameless, place_in, rich_texts, small_targets, tab_walk

OF_A_MODEL = (Deed.APPROVE, Deed.EXTEND, Deed.WITHDRAW, Deed.COMMENT, Deed.HOLD, Deed.RELEASE)
SIZES = ((880, 700), (664, 520), (600, 330))
"""At the right of a list in the usual window and in the smallest; and a window of 640 x 400 in which all is doubled."""


class _Windows(QObject):
    """Counts what is shown as a window of its own."""

    def __init__(self) -> None:
        super().__init__()
        self.shown: list[str] = []

    def eventFilter(self, watched: QObject, event: QEvent) -> bool:
        if event.type() is QEvent.Type.Show and isinstance(watched, QWidget) and watched.isWindow():
            self.shown.append(type(watched).__name__)
        return False


@pytest.fixture
def room(tmp_path: Path, monkeypatch: pytest.MonkeyPatch, qtbot: QtBot) -> Iterator[DeedRoom]:
    """A practice with one approved model."""
    made = DeedRoom(found_practice(tmp_path, monkeypatch), qtbot)
    made.practice.install()
    made.practice.approve("--fingerprint", FINGERPRINT, "--decision-point", "0.1;Talk about tablets;Practice meeting")
    yield made
    made.settle()


def _of_model(deed: Deed) -> Callable[[DeedRoom], Deedlike]:
    return lambda room: room.open(deed, Deedlike, room.card(), Given(FINGERPRINT))


def _of_library(deed: LibraryDeed) -> Callable[[DeedRoom], Deedlike]:
    return lambda room: room.open(deed, Deedlike)


def _install(room: DeedRoom) -> Deedlike:
    return room.open(Deed.INSTALL, Deedlike, room.desk.look_at(Path(example(TARNWICK)), Course()))


def _people(verb: str) -> Callable[[DeedRoom], Deedlike]:
    def open_(room: DeedRoom) -> Deedlike:
        people = room.open(LibraryDeed.PEOPLE, PeopleDeed)
        getattr(people, verb)()
        room.settle()
        return people

    return open_


def _approve_with_points(room: DeedRoom) -> Deedlike:
    deed = room.open(Deed.APPROVE, ApproveDeed, room.card())
    for _ in range(2):
        deed._points._add_empty()
    deed._points.rows[-1].risk.edit.setText("0.5")
    room.settle()
    return deed


DEEDS: dict[str, Callable[[DeedRoom], Deedlike]] = {
    "look": lambda room: room.open(Deed.INSTALL, Deedlike),
    "install": _install,
    **{deed.value: _of_model(deed) for deed in OF_A_MODEL},
    "points": _approve_with_points,
    **{deed.value: _of_library(deed) for deed in LibraryDeed},
    **{verb: _people(verb) for verb in ("_appoint", "_dismiss", "_revoke", "_change_policy")},
}


@pytest.mark.parametrize("name", DEEDS)
def test_a_deed_can_be_seen_heard_and_reached(room: DeedRoom, qapp: QApplication, name: str) -> None:
    windows = _Windows()
    qapp.installEventFilter(windows)
    try:
        deed = DEEDS[name](room)
    finally:
        qapp.removeEventFilter(windows)
    assert windows.shown == [type(deed).__name__]
    for width, height in SIZES:
        deed.resize(width, height)
        room.settle()
        assert not cut_texts(deed), (width, height)
        assert not small_targets(deed), (width, height)
    assert not nameless(deed)
    assert not rich_texts(deed)
    letters = access_letters(deed)
    assert len(letters) == len(set(letters)), letters
    first = deed.focusWidget()
    assert first is not None
    walked = tab_walk(deed, first)
    assert len(walked) >= 2
    assert len(walked) == len(set(walked))


def test_the_tab_key_goes_down_the_form_also_through_rows_that_were_added(room: DeedRoom) -> None:
    deed = _approve_with_points(room)
    assert isinstance(deed, ApproveDeed)
    inside = deed.form.scroller.widget()
    assert inside is not None
    walked = [w for w in tab_walk(deed, deed._reason.edit) if inside.isAncestorOf(w)]
    places = [place_in(w, inside) for w in walked]
    by_line = [(down // 12, right) for down, right in places]
    assert by_line == sorted(by_line)
    assert deed._points.rows[0].risk.edit in walked
    assert deed._key.secret.edit is walked[-1]
