"""A practice manager's whole path through the window, by keyboard, and what it does on a second machine."""

import csv
from collections.abc import Iterator
from io import StringIO
from math import exp, log
from pathlib import Path
from typing import Any

import pytest
from pypdf import PdfReader
from PySide6.QtCore import Qt
from PySide6.QtTest import QTest
from PySide6.QtWidgets import QApplication, QLineEdit
from pytestqt.qtbot import QtBot

from clinicalc.coefficients.fingerprint import group_fingerprint
from clinicalc.coefficients.reader import read_bytes
from clinicalc.gui import model_library
from clinicalc.library.key_files import read_card
from tests.cli.calling import example
from tests.journeys.at_the_window import LONG, Seat
from tests.journeys.keyboard import ALT, ENTER, TAB, focused_name, write
from tests.library import versions
from tests.library.keys_at_hand import PASSPHRASE

pytestmark = [
    pytest.mark.gui,
    # the screenless platform says so when a menu opens
    pytest.mark.qt_log_ignore("This plugin does not support"),
]
LIPIDS = "general-cvd-2008-lipids"
TITLE = "General cardiovascular disease, lipid form"
# D'Agostino et al., Circulation 2008;117:743-753: woman of 61, total cholesterol 180 mg/dL, HDL 47 mg/dL, untreated
# systolic 124 mmHg, smoker, no diabetes; printed 10.5 % (from memory)
WOMAN = ("n", "61", "f", "180", "47", "124", "n", "y", "n")
FIRST = "10.5"
CORRECTED, MISREAD = "the coefficient of age for women was corrected", "a figure of the source was misread"
AT_A_TIME = 1_000
"""Milliseconds between two readings on the second machine; the program's own 30 s are too long to wait for."""


def second_number() -> str:
    """Her number after the change, by the published form: 1 - S0 ** exp(x'b - mean)."""
    by_age, by_total, by_hdl, by_untreated, smoker = 2.42, 1.20904, -0.70833, 2.76157, 0.52873
    predictor = by_age * log(61) + by_total * log(180) + by_hdl * log(47) + by_untreated * log(124) + smoker
    return f"{100 * (1 - 0.95012 ** exp(predictor - 26.1931)):.1f}"


def dearer_age(model: Any) -> None:
    """A later version: one coefficient of the women is another one."""
    model["version"] = "1.2.0"
    (term,) = (term for term in model["equations"][0]["terms"] if term["id"] == "ln_age")
    assert term["coefficient"] == 2.32888
    term["coefficient"] = 2.42


@pytest.fixture
def folder(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> Path:
    """A stick, a share, a desktop, and a later version of the model on the stick."""
    monkeypatch.delenv("CLINICALC_LIBRARY", raising=False)
    for name in ("stick", "share", "desktop"):
        (tmp_path / name).mkdir()
    (tmp_path / "stick" / "later.json").write_bytes(versions.proved(LIPIDS, dearer_age))
    return tmp_path


@pytest.fixture
def manager(qtbot: QtBot, monkeypatch: pytest.MonkeyPatch, folder: Path) -> Iterator[Seat]:
    """The machine on which the practice begins."""
    seat = Seat(qtbot, monkeypatch, folder / "manager")
    yield seat
    seat.leave()


@pytest.fixture
def second(qtbot: QtBot, monkeypatch: pytest.MonkeyPatch, folder: Path) -> Iterator[Seat]:
    """Another machine, with settings of its own."""
    seat = Seat(qtbot, monkeypatch, folder / "second")
    yield seat
    seat.leave()


def found(seat: Seat, folder: Path) -> str:
    """F3 on an empty machine, and the four steps; the id of the practice key as it is read off the screen."""
    stick = folder / "stick"
    seat.hit(Qt.Key.Key_F3)
    seat.wait_for("No model library yet")
    seat.alt("f")
    seat.enter("Tarnwick Northgate", str(folder / "share" / "models"))
    seat.enter("R. Osei", "partner", str(stick / "osei.key"), PASSPHRASE, PASSPHRASE)
    seat.hit(Qt.Key.Key_T)  # "The same person may"
    seat.hit(ENTER)
    seat.enter(str(stick / "practice.key"), PASSPHRASE, PASSPHRASE)
    seat.wait_for("The library of Tarnwick Northgate is founded")
    lines = seat.words().split("\n")
    at = lines.index("Id of the practice key of Tarnwick Northgate")
    groups = " ".join(lines[at + 1 : at + 17])
    assert groups == group_fingerprint(read_card(stick / "practice.key").id)
    return groups


def install_first(seat: Seat) -> None:
    """A shipped example, chosen, looked at, its fingerprint typed as it was given on paper, and installed."""
    seat.hit(ENTER)  # "Install a first file"
    seat.wait_for("7 unconfirmed entries")
    seat.tab_to(f"Look at {TITLE}")
    seat.hit(ENTER)
    seat.wait_for("Not in the library: this file was only looked at")
    assert "13 of 13 recomputed within tolerance" in seat.words()
    assert "Unconfirmed figures: 0 of 7 compared" in seat.words()
    give_fingerprint(seat, read_bytes(Path(example(LIPIDS)).read_bytes(), LIPIDS).fingerprint)
    seat.alt("n")
    seat.enter("it came with the program")
    sign(seat)
    seat.wait_for("Not vetted, installed")
    seat.rest()
    assert focused_name() == "Models of the library"


def give_fingerprint(seat: Seat, fingerprint: str) -> None:
    """The fingerprint that somebody was given on paper, typed on the card."""
    seat.tab_to("Fingerprint you were given")
    write(group_fingerprint(fingerprint).upper())
    assert "Equal: all 64 characters" in seat.words()


def sign(seat: Seat) -> None:
    """The passphrase; the key file stands there, since it was named in this window before."""
    assert focused_name() == "Your key file"
    field = QApplication.focusWidget()
    assert isinstance(field, QLineEdit)
    assert field.text().endswith("osei.key")
    seat.enter("", PASSPHRASE)
    QTest.qWait(20)
    seat.rest()


def compare_and_approve(seat: Seat) -> None:
    """From the list to the card: who compared each figure; then the approval."""
    seat.hit(Qt.Key.Key_F6)
    assert "Equal: all 64 characters" in seat.words()  # typed before it was installed, and not asked again
    seat.tab_to("Compared by")
    seat.enter("R. Osei")
    assert "Unconfirmed figures: 1 of 7 compared" in seat.words()
    assert focused_name().startswith("Compared by, equation men: 10 years")
    write("L. Brandt")
    seat.hit(Qt.Key.Key_Backtab, Qt.KeyboardModifier.ShiftModifier)
    assert focused_name() == "Same name, R. Osei, for 5 open figures below"
    seat.hit(ENTER)
    assert "Unconfirmed figures: 7 of 7 compared" in seat.words()
    seat.alt("a")
    assert "on the card it is said of 7 who compared them" in seat.words()
    seat.enter("agreed at the meeting", "")
    sign(seat)
    seat.wait_for("Approved until")


def read_patient(seat: Seat, version: str) -> str:
    """The Patient page has the model already; a patient is typed, and the number read."""
    if not seat.at.bedside.isVisible():
        seat.hit(Qt.Key.Key_F2)
    seat.wait_for("No number yet")
    assert seat.at.model_bar.chooser.title == TITLE
    assert version in seat.words().split("\n")
    seat.hit(Qt.Key.Key_N, ALT)
    QTest.qWait(150)
    for typed in WOMAN:
        write(typed)
        seat.hit(ENTER)
    return seat.at.sheet.number.figure


def look_at_later(seat: Seat, folder: Path) -> str:
    """The later version from the stick: its difference is read before anything is signed."""
    later = folder / "stick" / "later.json"
    seat.hit(Qt.Key.Key_F3)
    seat.alt("i")
    seat.enter(str(later))
    seat.wait_for("Difference from 1.1.0, in use")
    seat.wait_for("equation women: coefficient ln_age | 2.32888 | 2.42")
    said = seat.words()
    assert "version | 1.1.0 | 1.2.0" in said
    assert "Same: title and outcome (2)" in said
    assert "What it does to standard patients" in said
    assert "Largest rise: 56.52" in said  # a woman, since only their coefficient changed
    assert "Largest fall: nobody." in said
    seat.chosen.append(folder / "desktop" / "difference.pdf")
    seat.tab_to("Save PDF")
    seat.hit(ENTER)
    seat.wait_for("Saved as difference.pdf.")
    return read_bytes(later.read_bytes(), "later").fingerprint


def approve_later(seat: Seat, fingerprint: str) -> None:
    """Installed, its figures compared, and approved beside the former version, which is then withdrawn."""
    give_fingerprint(seat, fingerprint)
    seat.alt("n")
    assert "The library holds version 1.1.0 of this model: Approved until" in seat.words()
    seat.enter("handed over on a stick")
    sign(seat)
    seat.wait_for("1.2.0: Not vetted, installed")
    seat.hit(Qt.Key.Key_F6)
    seat.tab_to("Compared by")
    write("R. Osei")
    seat.hit(TAB)
    seat.hit(ENTER)
    seat.alt("a")
    seat.enter(CORRECTED, "")
    sign(seat)
    seat.wait_for("1.2.0: Approved until")
    choose(seat, "1.1.0")
    seat.alt("w")
    seat.enter("1.2.0 takes its place")
    sign(seat)
    seat.wait_for("1.1.0: Withdrawn")


def choose(seat: Seat, version: str) -> None:
    """The arrow keys in the list, until the card of this version is shown."""
    seat.hit(Qt.Key.Key_Home)
    for _ in range(4):
        QTest.qWait(50)
        seat.rest()
        if shown_version(seat) == version:
            return
        seat.hit(Qt.Key.Key_Down)
    raise AssertionError(f"{version} is not shown: {seat.words()}")


def shown_version(seat: Seat) -> str:
    """The version of the card on screen."""
    card = seat.at.others.models().card.shown
    return "" if card is None else card.version


def extend_hold_and_release(seat: Seat) -> None:
    """What is done with a model that goes on; while it is held the Patient page says so."""
    seat.hit(Qt.Key.Key_F2)
    assert "1.2.0 takes its place" in seat.words()  # the version that was in use here
    assert seat.at.sheet.number.figure == ""
    seat.tab_to("Model: ")
    seat.hit(ENTER)
    seat.hit(ENTER)  # the first of its menu, the only one in use
    assert read_patient(seat, "1.2.0") == second_number()
    seat.hit(Qt.Key.Key_F3)
    choose(seat, "1.2.0")
    seat.alt("x")
    seat.enter("reviewed, nothing new", "31 December 2028")
    sign(seat)
    seat.wait_for("1.2.0: Approved until 31 December 2028")
    seat.alt("o")
    seat.enter("the printer shows other figures")
    seat.wait_for("1.2.0: Held here since")
    seat.hit(Qt.Key.Key_F2)
    assert second_number() not in seat.words()
    assert "the printer shows other figures" in seat.words()
    assert seat.at.sheet.number.figure == ""
    seat.hit(Qt.Key.Key_F3)
    seat.alt("e")
    seat.hit(ENTER)
    seat.wait_for("1.2.0: Approved until 31 December 2028")


def read_prints(seat: Seat, folder: Path, fingerprint: str) -> None:
    """The approval record of the version in use, and the difference that was saved before; both are read back."""
    seat.chosen.append(folder / "desktop" / "record.pdf")
    seat.hit(Qt.Key.Key_F6)
    seat.tab_to("Save this record as PDF")
    seat.hit(ENTER)
    seat.wait_for("Saved as record.pdf.")
    record = text_of(folder / "desktop" / "record.pdf")
    assert f"Approval record, page 1 of 3 {TITLE} 1.2.0" in record
    assert "Approved by R. Osei (partner), who also made or brought the file, until 31 December 2028." in record
    assert f"Fingerprint {group_fingerprint(fingerprint)}" in record
    assert "Figures that the file calls unconfirmed: 7 entries, all compared" in record
    assert "Reason reviewed, nothing new" in record
    difference = text_of(folder / "desktop" / "difference.pdf")
    assert f"{TITLE}, 1.1.0 and 1.2.0" in difference
    assert "/model/equations/0/terms/0/coefficient 2.32888 2.42" in difference
    assert "Largest rise: 56.52" in difference


def text_of(path: Path) -> str:
    """The words of a PDF, its lines joined."""
    return " ".join(" ".join(page.extract_text() for page in PdfReader(path).pages).split())


def join(second: Seat, folder: Path, said: str) -> None:
    """The folder, and the id as it is read aloud."""
    second.sit_down()
    second.hit(Qt.Key.Key_F3)
    second.wait_for("No model library yet")
    second.alt("j")
    second.enter(str(folder / "share" / "models"))
    second.wait_for("It calls itself “Tarnwick Northgate”")
    second.enter(said)
    second.wait_for("1.2.0. Approved until 31 December 2028")


def withdraw(seat: Seat) -> None:
    """Everywhere, with a reason that everybody reads."""
    seat.hit(Qt.Key.Key_F6)
    choose(seat, "1.2.0")
    seat.alt("w")
    seat.enter(MISREAD)
    sign(seat)
    seat.wait_for("1.2.0: Withdrawn")


def require_history(seat: Seat, folder: Path) -> None:
    """The history of the library as a table and as a print, read back."""
    table, pages = folder / "desktop" / "history.csv", folder / "desktop" / "history.pdf"
    seat.chosen += [table, pages]
    seat.alt("l")
    seat.hit(Qt.Key.Key_H)
    seat.wait_for("9 records")
    seat.alt("c")
    seat.wait_for("Saved as history.csv.")
    seat.alt("p")
    seat.wait_for("Saved as history.pdf.")
    rows = list(csv.DictReader(StringIO(table.read_text(encoding="utf-8-sig"))))
    said = [(row["kind"], row["model"].removeprefix(f"{LIPIDS} "), row["why"]) for row in rows]
    # one deed writes both, of two models and within one second: nothing in the records says which came first
    said[5:7] = sorted(said[5:7])
    assert said == [
        ("founding", "", ""),
        ("approvers", "", ""),
        ("installed", "1.1.0", ""),
        ("approved", "1.1.0", "agreed at the meeting"),
        ("installed", "1.2.0", ""),
        ("approved", "1.2.0", CORRECTED),
        ("withdrawn", "1.1.0", "1.2.0 takes its place"),
        ("approved", "1.2.0", "reviewed, nothing new"),
        ("withdrawn", "1.2.0", MISREAD),
    ]
    assert "/equations/1/horizons/0/mean_linear_predictor compared by L. Brandt" in rows[3]["what"]
    assert {row["faults"] for row in rows} == {""}
    printed = text_of(pages)
    assert "9 records, nothing found wrong." in printed
    assert f"Why: {MISREAD}" in printed


def test_from_an_empty_machine_to_a_withdrawal_on_a_second_one(
    manager: Seat, second: Seat, monkeypatch: pytest.MonkeyPatch, folder: Path
) -> None:
    manager.sit_down()
    said = found(manager, folder)
    install_first(manager)
    compare_and_approve(manager)
    assert read_patient(manager, "1.1.0") == FIRST
    later = look_at_later(manager, folder)
    approve_later(manager, later)
    extend_hold_and_release(manager)
    read_prints(manager, folder, later)
    monkeypatch.setattr(model_library, "EVERY", AT_A_TIME)
    join(second, folder, said)
    assert read_patient(second, "1.2.0") == second_number()
    manager.sit_down()
    withdraw(manager)
    second.sit_down()
    second.qtbot.waitUntil(lambda: second.at.sheet.number.figure == "", timeout=LONG)
    second.wait_for("Withdrawn by R. Osei")
    assert MISREAD in second.words()
    assert second_number() not in second.words()
    second.hit(Qt.Key.Key_F3)
    second.wait_for("1.2.0. Withdrawn")
    manager.sit_down()
    require_history(manager, folder)
