"""The Models page on a practice with several versions of one model, in states for the pictures."""

import os
from collections.abc import Callable
from functools import cache, partial
from pathlib import Path
from tempfile import TemporaryDirectory

import pytest
from PySide6.QtCore import QPoint
from PySide6.QtTest import QTest
from PySide6.QtWidgets import QLineEdit, QWidget

from clinicalc.gui.form import Form
from clinicalc.gui.main_window import MainWindow
from clinicalc.gui.models.card_sheet import CardSheet
from clinicalc.gui.models.deeds.history_deed import HistoryDeed
from clinicalc.gui.page_tabs import Page
from clinicalc.library.cards import GROUP
from clinicalc.operations.model_card import Deed
from tests.cli.practices import FINGERPRINT, TARNWICK
from tests.gui.models.card_shelf import POOLED, fill_practice, fingerprint_of
from tests.gui.models.shelves import page_of, rest

_FOLDERS: list[TemporaryDirectory[str]] = []
"""They go with the program."""


def open_versions() -> MainWindow:
    """A window in a practice where one version is withdrawn, one in use, one waits."""
    from clinicalc.gui.entry_state import EntryState
    from clinicalc.gui.model_library import ModelLibrary
    from clinicalc.library.machine import this_machine
    from clinicalc.operations.library_reading import now

    os.environ["CLINICALC_SETTINGS"] = os.fspath(_practice() / "settings")
    state = EntryState()
    library = ModelLibrary(state, this_machine, now)
    window = MainWindow(state, library=library, choose_open=lambda _: None, choose_save=lambda *_: None)
    library.start()
    return window


@cache
def _practice() -> Path:
    """Its folder. Nothing that the pictures show is written there, so that it is made once."""
    _FOLDERS.append(TemporaryDirectory())
    folder = Path(_FOLDERS[-1].name)
    with pytest.MonkeyPatch.context() as patch:
        fill_practice(folder, patch)
    return folder


def write_prints(folder: Path) -> tuple[Path, ...]:
    """An approval record, one with open figures, a difference, the history and a day that is past, each on A4."""
    from clinicalc.operations.course import Course
    from clinicalc.operations.library_reading import now
    from clinicalc.operations.vetting_desk import VettingDesk
    from clinicalc.operations.vetting_prints import (
        name_version,
        write_approval_pdf,
        write_as_of_pdf,
        write_difference_pdf,
        write_history_pdf,
    )

    os.environ["CLINICALC_SETTINGS"] = os.fspath(_practice() / "settings")
    desk, course = VettingDesk(), Course()
    view = desk.read(course)
    opened, old, new = view.opened, fingerprint_of("1.2.0"), fingerprint_of("1.3.0")
    paths = tuple(
        folder / f"vetting-{name}.pdf" for name in ("approval", "open-figures", "difference", "history", "day")
    )
    for path, fingerprint in zip(paths, (old, fingerprint_of("1.0.0", POOLED)), strict=False):
        card = desk.card(view, fingerprint, course)
        assert card.state is not None
        write_approval_pdf(path, opened, card.state, card.candidate, replace=True)
    found = desk.difference(view, old, new, course)
    names = name_version(found.old_model, opened), name_version(found.new_model, opened)
    write_difference_pdf(paths[2], *names, found.difference, found.effect, "Tarnwick Northgate", replace=True)
    write_history_pdf(paths[3], opened, desk.history(None, course), replace=True)
    write_as_of_pdf(paths[4], opened, desk.as_of(now().date(), course), replace=True)
    return paths


def _show(version: str, window: MainWindow, id: str = TARNWICK) -> CardSheet:
    window.show_page(Page.MODELS)
    page = page_of(window)
    rest(page)
    page.side.list.choose(FINGERPRINT if (version, id) == ("1.0.0", TARNWICK) else fingerprint_of(version, id))
    page.read_again()
    rest(page)
    page.go_across()
    assert page.card.view.sheet is not None
    return page.card.view.sheet


def _waiting(window: MainWindow) -> None:
    _show("1.3.0", window)


def _difference(window: MainWindow) -> None:
    sheet = _show("1.3.0", window)
    assert sheet.difference is not None
    assert sheet.difference.effect is not None
    _bring_up(window, sheet.difference.effect)


def _typed(digits: int, wrong: str, window: MainWindow) -> None:
    sheet = _show("1.3.0", window)
    assert sheet.given is not None
    typed = fingerprint_of("1.3.0")[:digits]
    sheet.given.edit.setText(" ".join(typed[at : at + GROUP] for at in range(0, digits, GROUP)) + wrong)
    page_of(window).card.view.focus_given()


def _withdrawn(window: MainWindow) -> None:
    _show("1.0.0", window)


def _unconfirmed(window: MainWindow) -> None:
    sheet = _show("1.0.0", window, POOLED)
    assert sheet.unconfirmed is not None
    for row in sheet.unconfirmed.rows[: len(sheet.unconfirmed.rows) // 2]:
        assert row.edit is not None
        row.edit.setText("Cleo Fell")
    _bring_up(window, sheet.unconfirmed)
    page_of(window).card.view.focus_open_figure()


def _candidate(window: MainWindow) -> None:
    window.show_page(Page.MODELS)
    rest(page_of(window))
    page_of(window).reading.look_at(_practice() / "1.4.0.json")
    rest(page_of(window))


def _refused_candidate(window: MainWindow) -> None:
    window.show_page(Page.MODELS)
    rest(page_of(window))
    page_of(window).reading.look_at(_practice() / "ada-card.json")
    rest(page_of(window))


def _deed(deed: Deed, version: str, window: MainWindow) -> Form:
    _show(version, window)
    return _open(deed, window)


def _open(deed: Deed, window: MainWindow) -> Form:
    page = page_of(window)
    page.open_deed(deed, is_about_model=True)
    rest(page)
    return next(form for form in page.findChildren(Form) if form.isVisible())


def _only_open(deed: Deed, version: str, window: MainWindow) -> None:
    _deed(deed, version, window)


def _refuse(deed: Deed, version: str, texts: tuple[str, ...], window: MainWindow) -> None:
    """Type these into the fields from the top, then the key, and ask for it."""
    form = _deed(deed, version, window)
    fields = [edit for edit in form.findChildren(QLineEdit) if edit.isVisible()]
    key = (os.fspath(_practice() / "cleo.key"), "not the passphrase at all")
    for edit, text in zip(fields, (*texts, *key), strict=False):
        edit.setText(text)
    form.deed.click()
    rest(page_of(window))


def _install(window: MainWindow) -> None:
    _candidate(window)
    _open(Deed.INSTALL, window)


def _as_of(window: MainWindow) -> None:
    from clinicalc.gui.models.deeds.given import LibraryDeed
    from clinicalc.operations.library_reading import now

    window.show_page(Page.MODELS)
    page = page_of(window)
    rest(page)
    page.open_deed(LibraryDeed.HISTORY, is_about_model=False)
    rest(page)
    (deed,) = page.findChildren(HistoryDeed)
    deed.pane.day.fill(now().date())
    deed.pane.look_back.click()
    rest(page)


def _bring_up(window: MainWindow, part: QWidget) -> None:
    """A part of the card to the top of the sheet."""
    QTest.qWait(20)
    scroller = page_of(window).card.view.scroller
    body = scroller.widget()
    assert body is not None
    scroller.verticalScrollBar().setValue(part.mapTo(body, QPoint(0, 0)).y() - 8)


_REASON, _DAY = "read against its paper", "1 March 2027"

VERSIONS_STATES: tuple[tuple[str, Callable[[MainWindow], None], Callable[[], MainWindow]], ...] = tuple(
    (f"models-{name}", then, open_versions)
    for name, then in (
        ("version-waiting", _waiting),
        ("version-effect", _difference),
        ("fingerprint-so-far", partial(_typed, 21, "")),
        ("fingerprint-differs", partial(_typed, 16, " 0g")),
        ("version-withdrawn", _withdrawn),
        ("unconfirmed", _unconfirmed),
        ("candidate", _candidate),
        ("candidate-refused", _refused_candidate),
        ("install", _install),
        ("approve-refused", partial(_refuse, Deed.APPROVE, "1.3.0", (_REASON, _DAY))),
        ("extend", partial(_only_open, Deed.EXTEND, "1.2.0")),
        ("withdraw-refused", partial(_refuse, Deed.WITHDRAW, "1.2.0", (_REASON,))),
        ("comment", partial(_only_open, Deed.COMMENT, "1.2.0")),
        ("hold", partial(_only_open, Deed.HOLD, "1.2.0")),
        ("as-of", _as_of),
    )
)
"""Name, what is done, and the window."""
