"""Somebody has been at the library's folder while a window shows a number: it goes, and the page says what to do."""

import os
import shutil
from collections.abc import Callable, Iterator
from datetime import datetime, timedelta
from pathlib import Path

import pytest
from PySide6.QtCore import Qt
from PySide6.QtTest import QTest
from pytestqt.qtbot import QtBot

from clinicalc.library.key_files import read_card
from clinicalc.library.places import short_model
from clinicalc.operations.joining_steps import bring_in_and_join, look_at_bundle
from clinicalc.operations.library_reading import now
from tests.cli.calling import call
from tests.cli.practices import FINGERPRINT
from tests.journeys import tampering
from tests.journeys.at_the_window import Seat
from tests.journeys.keyboard import ALT, CONTROL, ENTER, write
from tests.journeys.tampering import Folder
from tests.journeys.test_tampering_by_hand import STRAYS, today_in_records

pytestmark = pytest.mark.gui

WOMAN = ("n", "61", "f", "142", "n", "5.2", "1.3", "y", "n")
NUMBER = "12.3"
"""As test_practice.py holds it, of a sound library."""
TITLE = "Tarnwick cardiovascular disease, invented example, version 1.0.0"
FROM_A_COPY = "Put it back from another copy of the library."
FROM_THE_RECORDS = "Fetch the file whose name ends in these digits from another copy of the library."
LOOK_FIRST = "Look in another copy of the library for the record as it was"
TAKE_OUT = "Find out who put this file there, and take it out of the library’s folder."
EDITED = "Fetch the record again from where it came from; do not mend it by hand."
LACKS = "Bring it back from another copy of the library, or ask who looks after it."


def a_renamed_file(folder: Folder) -> None:
    """The model's file under the name of another one, byte for byte as it was."""
    folder.model_file.rename(folder.model_file.with_name(f"{'a' * 64}.json"))


def a_renamed_record(folder: Folder) -> None:
    """The approval under the digest of another record."""
    path = folder.one("approved")
    path.rename(path.with_name(path.name.replace(path.stem.partition("-")[2], "b" * 64)))


def an_older_bundle(folder: Folder) -> None:
    """The library carried out, the model withdrawn, and the folder made anew from what was carried out."""
    bundle = os.fspath(folder.desk.folder / "bundle.json")
    assert call("library", "export", "--out", bundle).status == 0
    tampering.withdraw(folder)
    shutil.rmtree(folder.place)
    settings = os.environ["CLINICALC_SETTINGS"]
    os.environ["CLINICALC_SETTINGS"] = os.fspath(folder.desk.folder / "another machine")
    try:
        bring_in_and_join(look_at_bundle(Path(bundle)), folder.place, folder.key("practice").id)
    finally:
        os.environ["CLINICALC_SETTINGS"] = settings


STOPPED: list[tuple[Callable[[Folder], str | None], str, str, str]] = [
    (tampering.one_byte_of_the_file, "changed after approval", "was changed after it was installed", FROM_A_COPY),
    (a_renamed_file, "its file is missing", "….json was not read: there is no such file", FROM_A_COPY),
    (a_renamed_record, "a record was changed", "or another file was given its name", FROM_A_COPY),
    (tampering.a_coefficient_and_the_files_name, "its file is missing", "there is no such file", FROM_A_COPY),
    (
        tampering.a_coefficient_the_files_name_and_every_record,
        "a record seen here is gone",
        "The library lacks the remark of",
        LACKS,
    ),
    (tampering.an_approvals_date, "a record was changed", "its content has another digest.", FROM_A_COPY),
    (
        tampering.an_approvals_date_and_its_name,
        "a record was changed or made up",
        "is not as Dr Ada Tarn signed it",
        LOOK_FIRST,
    ),
    (
        tampering.a_record_from_the_middle,
        "a record is missing",
        "what the missing one says, a withdrawal perhaps, is not known here.",
        FROM_THE_RECORDS,
    ),
    (tampering.the_newest_record, "a record seen here is gone", "The library lacks the withdrawal of", LACKS),
    (tampering.the_whole_folder, "a record seen here is gone", "or an older copy of the library was put in", LACKS),
    (an_older_bundle, "a record seen here is gone", "The library lacks the withdrawal of", LACKS),
    (
        tampering.an_approval_by_a_stranger,
        "a record by somebody who may not approve",
        "was signed with a key that was never an approver’s",
        TAKE_OUT,
    ),
    (tampering.the_algorithm, "a record cannot be read", 'its algorithm is "none"; only "Ed25519" is taken', EDITED),
    (tampering.the_type, "a record cannot be read", 'it is of the type "clinicalc-model+1"', EDITED),
    (
        tampering.a_weak_key,
        "something is wrong with the whole library",
        "it is one of the weak keys under which one signature fits every text",
        EDITED,
    ),
    (
        tampering.the_founding_record,
        "something is wrong with the whole library",
        "lies in its place, which this machine never joined",
        "Do not use this library, and ask who looks after it.",
    ),
    (
        tampering.a_record_from_the_future,
        "a record from the future",
        "later than this machine’s clock",
        "Set the clock right, here or where it was written.",
    ),
    (
        tampering.a_link_in_a_records_place,
        "no file where a record should be",
        ".json is a link, not a file, and was not opened.",
        "Remove it, and put the file back from another copy of the library.",
    ),
    (
        tampering.a_fifo_in_a_models_place,
        "no file where its file should be",
        ".json is a pipe (FIFO), not a file, and was not opened.",
        "Remove it, and put the file back from another copy of the library.",
    ),
    (
        tampering.five_gigabytes_in_a_records_place,
        "a record was changed",
        "it has 5,368,709,120 bytes, and at most 262,144 are read.",
        FROM_A_COPY,
    ),
]
"""What was done; what the list says shortly; what the card says happened, and what it says is to be done."""

SETTLED: list[tuple[Callable[[Folder], str | None], str, str, str]] = [
    (
        tampering.two_histories,
        "Withdrawn {today}, Cleo Fell",
        "stands beside a withdrawal; neither knew of the other.",
        "The withdrawal wins until an approval follows both.",
    ),
    (
        tampering.an_approval_by_a_revoked_key,
        "Not vetted: its approval counts no more",
        "does not count: its key was revoked on {today}",
        "If it is right, another approver approves it anew.",
    ),
]
"""What the library settles itself on the safe side, and says on the card all the same."""

BESIDE: list[tuple[Callable[[Folder], str | None], str, str, str]] = [
    (
        tampering.an_approval_for_another_file,
        "General cardiovascular disease, lipid form, version 1.1.0. Refused: its records are of another model",
        "is about another file (e82d04a7ad40…) than the one it lies with.",
        TAKE_OUT,
    ),
    (
        tampering.another_models_name,
        "Tarnwick cardiovascular disease, version 2.0.0. Refused: its records are of another model",
        "the file itself is “General cardiovascular disease, lipid form”",
        "Ask who installed it, and install the right file under its own name.",
    ),
]
"""What befell another model: it is never offered, and the one in use goes on."""


@pytest.fixture(scope="module")
def pristine(tmp_path_factory: pytest.TempPathFactory) -> Folder:
    """A practice with one model in use; a copy of all of it lies beside it."""
    return tampering.found_untouched(tmp_path_factory.mktemp("practice"))


@pytest.fixture
def folder(pristine: Folder, monkeypatch: pytest.MonkeyPatch) -> Folder:
    """The same practice as it was at the beginning, at the same place."""
    tampering.put_back(pristine, monkeypatch)
    return pristine


@pytest.fixture
def seat(folder: Folder, qtbot: QtBot, monkeypatch: pytest.MonkeyPatch) -> Iterator[Seat]:
    """A window of this practice in which a patient has a number."""
    seat = Seat(qtbot, monkeypatch, folder.desk.folder / "settings")
    seat.sit_down()
    type_patient(seat)
    assert seat.at.sheet.number.figure == NUMBER
    yield seat
    seat.leave()


def type_patient(seat: Seat) -> None:
    """Every value of the woman, from the first field on."""
    seat.hit(Qt.Key.Key_N, ALT)
    QTest.qWait(150)
    for typed in WOMAN:
        write(typed)
        seat.hit(ENTER)


def require_no_number(seat: Seat, *, says: str) -> None:
    """Neither the number nor any figure that came with it stands on the Patient page, and it is said why."""
    if not seat.at.bedside.isVisible():
        seat.hit(Qt.Key.Key_F2)
    said = seat.words()
    assert seat.at.sheet.number.figure == ""
    assert NUMBER not in said
    assert says in said
    assert "clinicalc library" not in said  # no command: nobody at a window has a prompt
    assert not seat.at.foot.copy.isEnabled()


def read_models(seat: Seat) -> str:
    """All that the Models page says, of every model of its list."""
    seat.hit(Qt.Key.Key_F3)
    seat.rest()
    said = [seat.words()]
    rows = said[0].count(", version ") + said[0].count("A file without a record of its installation. Refused")
    for _ in range(rows):
        seat.hit(Qt.Key.Key_Down)
        QTest.qWait(30)
        seat.rest()
        said.append(seat.words())
    told = "\n".join(said)
    assert "clinicalc library" not in told
    assert NUMBER not in told
    return told


@pytest.mark.parametrize(
    ("tamper", "shortly", "happened", "do"), STOPPED, ids=lambda part: getattr(part, "__name__", "")
)
def test_the_number_goes_and_the_models_page_says_what_to_do(
    seat: Seat, folder: Folder, tamper: Callable[[Folder], str | None], shortly: str, happened: str, do: str
) -> None:
    tamper(folder)
    seat.hit(Qt.Key.Key_F3)
    told = read_models(seat)
    assert f"{TITLE}. Refused: {shortly}. Out of use." in told
    assert "Refused: it gives no number" in told
    sentence = next(line for line in told.split("\n") if happened in line)
    assert do in sentence
    require_no_number(seat, says=happened)


@pytest.mark.parametrize(
    ("tamper", "shortly", "happened", "do"), SETTLED, ids=lambda part: getattr(part, "__name__", "")
)
def test_what_the_library_settles_itself_is_said_on_the_card(
    seat: Seat, folder: Folder, tamper: Callable[[Folder], str | None], shortly: str, happened: str, do: str
) -> None:
    tamper(folder)
    told = read_models(seat)
    today = today_in_records()
    assert f"{TITLE}. {shortly.format(today=today)}." in told
    sentences = [line for line in told.split("\n") if happened.format(today=today) in line]
    assert do in sentences[0]
    assert any(line.startswith("    The record ") for line in sentences)  # in the history, at the record
    require_no_number(seat, says="No number")


@pytest.mark.parametrize(("tamper", "row", "happened", "do"), BESIDE, ids=lambda part: getattr(part, "__name__", ""))
def test_a_model_beside_it_is_refused_and_never_offered(
    seat: Seat, folder: Folder, tamper: Callable[[Folder], str | None], row: str, happened: str, do: str
) -> None:
    tamper(folder)
    told = read_models(seat)
    assert row in told
    sentence = next(line for line in told.split("\n") if happened in line)
    assert do in sentence
    seat.hit(Qt.Key.Key_F2)
    assert seat.at.sheet.number.figure == NUMBER
    assert seat.at.library is not None
    assert [offered.fingerprint for offered in seat.at.library.offered()] == [FINGERPRINT]


@pytest.mark.parametrize(("tamper", "says"), STRAYS, ids=lambda part: getattr(part, "__name__", ""))
def test_a_stranger_in_the_folder_is_named_and_the_number_stays(
    seat: Seat, folder: Folder, tamper: Callable[[Folder], str | None], says: str
) -> None:
    tamper(folder)
    assert f"{says} It is not read; remove it if nobody needs it." in read_models(seat)
    seat.hit(Qt.Key.Key_F2)
    assert seat.at.sheet.number.figure == NUMBER


def test_a_file_that_nobody_here_installed_is_named_by_its_own_name(seat: Seat, folder: Folder) -> None:
    fingerprint = tampering.a_coefficient_the_files_name_and_every_record(folder)
    told = read_models(seat)
    assert "A file without a record of its installation. Refused: a record was changed or made up. Out of use." in told
    do = "Find out who put it there, and take it out of the library's folder"
    assert f"{short_model(fingerprint)}: its file is not the one that its records are about. {do}" in told


def test_another_library_in_its_place_is_not_read_at_all(seat: Seat, folder: Folder) -> None:
    tampering.another_librarys_key(folder)
    told = read_models(seat)
    assert "another library lies where this machine’s library was." in told
    do = "Bring the former one back. If the practice founded a new one, join that: Settings, “Join or found…”."
    assert do in told
    assert TITLE not in told
    require_no_number(seat, says=do)
    seat.hit(Qt.Key.Key_Comma, CONTROL)
    seat.alt("j")
    seat.wait_for("Use another library")  # so the words lead where they say
    seat.alt("j")
    seat.enter(os.fspath(folder.place))
    seat.enter(read_card(folder.desk.folder / "thief" / "practice.key").id)
    seat.wait_for("This machine uses the library now.")
    assert "The library holds no file yet." in seat.words()
    require_no_number(seat, says="This model is no longer in the practice’s library.")


def test_a_clock_set_back_a_year(folder: Folder, qtbot: QtBot, monkeypatch: pytest.MonkeyPatch) -> None:
    """A review date that is over would come back: what was seen here later says that it cannot be."""
    behind = [timedelta(0)]

    def clock() -> datetime:
        return now() - behind[0]

    seat = Seat(qtbot, monkeypatch, folder.desk.folder / "settings", clock)
    seat.sit_down()
    type_patient(seat)
    assert seat.at.sheet.number.figure == NUMBER
    behind[0] = timedelta(days=365)
    told = read_models(seat)
    sentence = next(line for line in told.split("\n") if "and the library was last opened on this machine at" in line)
    assert "Set the clock" in sentence
    require_no_number(seat, says="Set the clock")
    behind[0] = timedelta(0)
    seat.hit(Qt.Key.Key_F3)
    seat.hit(Qt.Key.Key_F2)
    assert seat.at.sheet.number.figure == NUMBER  # and the right clock gives it back
    seat.leave()


def test_a_window_opened_after_the_deed_never_had_a_number(
    folder: Folder, qtbot: QtBot, monkeypatch: pytest.MonkeyPatch
) -> None:
    tampering.one_byte_of_the_file(folder)
    seat = Seat(qtbot, monkeypatch, folder.desk.folder / "settings")
    seat.sit_down()
    assert seat.at.state.model is None
    seat.wait_for("No model is in use")
    assert seat.at.sheet.number.figure == ""
    told = read_models(seat)
    assert f"{TITLE}. Refused: changed after approval." in told
    seat.leave()


def test_the_file_put_back_gives_the_number_back(seat: Seat, folder: Folder) -> None:
    """What the page says is to be done does what it promises."""
    sound = folder.model_file.read_bytes()
    tampering.one_byte_of_the_file(folder)
    assert "changed after approval" in read_models(seat)
    folder.model_file.write_bytes(sound)
    seat.hit(Qt.Key.Key_F2)
    assert seat.at.sheet.number.figure == NUMBER
    seat.hit(Qt.Key.Key_F3)
    seat.wait_for("Approved until")
