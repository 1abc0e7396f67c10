"""Somebody has been at the library's folder: there is no number, and the sentence says what happened."""

import os
import shutil
import subprocess
import sys
from collections.abc import Callable
from datetime import date, datetime, timedelta

import pytest

from clinicalc.units.days import day_words
from tests.cli.calling import call
from tests.cli.practices import TARNWICK, WOMAN
from tests.journeys import tampering
from tests.journeys.tampering import Folder

LINE = "\n12.3\u202f% within 10 years\n"
"""The number as test_practice.py holds it, of a sound library."""

NO_NUMBER: list[tuple[Callable[[Folder], str | None], str, str]] = [
    (tampering.one_byte_of_the_file, "models/e82d04a7ad40….json was changed after it was installed", ""),
    (tampering.a_coefficient_and_the_files_name, "models/e82d04a7ad40….json was not read: there is no such file", ""),
    (tampering.a_coefficient_the_files_name_and_every_record, " signed it: it was changed or made up", ""),
    (
        tampering.an_approval_for_another_file,
        "(approved, in the name of “Dr Ada Tarn”, {today}) is about another file (e82d04a7ad40…) than the one it lies",
        "holds the record whose name is records/e82d04a7ad40…-",
    ),
    (tampering.an_approvals_date, ".json was changed, or another file was given its name", ""),
    (tampering.an_approvals_date_and_its_name, "is not as Dr Ada Tarn signed it: it was changed or made up", ""),
    (tampering.a_record_from_the_middle, "Record missing: {approval}. The record", ""),
    (
        tampering.the_newest_record,
        "The library lacks the withdrawal of tarnwick-cvd-10y 1.0.0 that Cleo Fell signed",
        "",
    ),
    (tampering.the_whole_folder, "or an older copy of the library was put in place", ""),
    (tampering.two_histories, "Withdrawn by Cleo Fell on {today}: A misprint was found.", "stands beside a withdrawal"),
    (tampering.an_approval_by_a_stranger, "was signed with a key that was never an approver’s", ""),
    (tampering.an_approval_by_a_revoked_key, "does not count: its key was revoked on {today}", ""),
    (tampering.another_librarys_key, "another library lies where this machine’s library was.", ""),
    (tampering.the_founding_record, "…) lies in its place, which this machine never joined. Do not use", ""),
    (tampering.the_algorithm, 'its algorithm is "none"; only "Ed25519" is taken', ""),
    (tampering.the_type, 'it is of the type "clinicalc-model+1"; here "clinicalc-record+1" must stand', ""),
    (tampering.a_weak_key, "it is one of the weak keys under which one signature fits every text", ""),
    (tampering.a_record_from_the_future, "later than this machine’s clock. Set the clock right", ""),
    (tampering.another_models_name, "; the file itself is “General cardiovascular disease, lipid form”", ""),
    (tampering.a_link_in_a_records_place, ".json is a link, not a file, and was not opened.", ""),
    (tampering.a_fifo_in_a_models_place, "models/e82d04a7ad40….json is a pipe (FIFO), not a file, and was not", ""),
    (tampering.five_gigabytes_in_a_records_place, "it has 5,368,709,120 bytes, and at most 262,144 are read", ""),
]
"""What was done; what is said where the number would stand; what `verify` says, "" for the same."""

STRAYS: list[tuple[Callable[[Folder], str | None], str]] = [
    (tampering.a_stray_link, "models/notes.json is a link that does not belong there."),
    (tampering.a_stray_fifo, "records/notes.json is a pipe (FIFO) that does not belong there."),
    (tampering.a_stray_of_five_gigabytes, "records/backup.zip is a file that does not belong there."),
]
SETTLED = (tampering.two_histories, tampering.an_approval_by_a_revoked_key)
"""What the library settles by itself on the safe side, so that nothing is left to be mended."""


@pytest.fixture(scope="module")
def pristine(tmp_path_factory: pytest.TempPathFactory) -> Folder:
    """A practice with one model in use; a copy of all of it lies beside it."""
    return tampering.found_untouched(tmp_path_factory.mktemp("practice"))


@pytest.fixture
def folder(pristine: Folder, monkeypatch: pytest.MonkeyPatch) -> Folder:
    """The same practice as it was at the beginning, at the same place, on a machine that has given its number."""
    tampering.put_back(pristine, monkeypatch)
    monkeypatch.setenv("CLINICALC_SETTINGS", os.fspath(pristine.desk.folder / "settings"))
    assert LINE in call("assess", "--approved", TARNWICK, *WOMAN).out
    return pristine


@pytest.mark.parametrize(("tamper", "says", "verified"), NO_NUMBER, ids=lambda part: getattr(part, "__name__", ""))
def test_there_is_no_number_and_it_is_said_why(
    folder: Folder, tamper: Callable[[Folder], str | None], says: str, verified: str
) -> None:
    approval = folder.one("approved").stem.partition("-")[2]
    model = tamper(folder) or TARNWICK
    said = says.format(today=today_in_records(), approval=approval)
    ended = call("assess", "--approved", model, *WOMAN)
    assert (ended.status in (3, 6), "%" in ended.out) == (True, False)
    assert said in joined(ended.out + ended.err)
    checked = call("library", "verify")
    assert (verified or said) in joined(checked.out + checked.err)
    assert checked.status == (0 if tamper in SETTLED else 6)
    assert "Everything agrees" not in checked.out


@pytest.mark.parametrize(("tamper", "says"), STRAYS, ids=lambda part: getattr(part, "__name__", ""))
def test_a_stranger_in_the_folder_is_named_and_the_number_stays(
    folder: Folder, tamper: Callable[[Folder], str | None], says: str
) -> None:
    tamper(folder)
    assert LINE in call("assess", "--approved", TARNWICK, *WOMAN).out
    checked = call("library", "verify")
    assert checked.status == 0
    assert f"To know: {says}" in joined(checked.out)
    assert "Nothing here stops a model." in checked.out


def test_a_bundle_older_than_the_library_brings_nothing_back(folder: Folder) -> None:
    bundle = os.fspath(folder.desk.folder / "bundle.json")
    assert call("library", "export", "--out", bundle).status == 0
    tampering.withdraw(folder)
    assert call("library", "import", bundle).status == 0  # nothing in it is new
    withdrawn = call("assess", "--approved", TARNWICK, *WOMAN)
    assert (withdrawn.status, "%" in withdrawn.out) == (3, False)
    shutil.rmtree(folder.place)
    refused = call("library", "import", bundle, "--library", os.fspath(folder.place))
    assert refused.status == 6
    assert "It lacks the record" in refused.err
    away = call("assess", "--approved", TARNWICK, *WOMAN)
    assert (away.status, "%" in away.out) == (3, False)
    assert "Withdrawn by Cleo Fell" in joined(away.out)


def test_a_clock_set_back_a_year(folder: Folder) -> None:
    """Another process, whose clock Debian's faketime sets: a review date that is over would come back."""
    faketime = shutil.which("faketime")
    if faketime is None:
        assert os.environ.get("CI") != "true", "the Debian package faketime is missing"
        pytest.skip("the Debian package faketime is not here")
    a_year_ago = f"{date.today() - timedelta(days=365)} 12:00:00"
    words = (faketime, a_year_ago, sys.executable, "-m", "clinicalc")
    ended = _run(*words, "assess", "--approved", TARNWICK, *WOMAN)
    assert (ended.returncode, "%" in ended.stdout) == (3, False)
    said = "and the library was last opened on this machine at"
    assert said in joined(ended.stdout)
    assert "Set the clock" in joined(ended.stdout)
    checked = _run(*words, "library", "verify")
    assert checked.returncode == 6
    assert said in joined(checked.stdout)
    assert LINE in call("assess", "--approved", TARNWICK, *WOMAN).out  # and the right clock gives it back


def _run(*words: str) -> subprocess.CompletedProcess[str]:
    return subprocess.run(words, capture_output=True, text=True, encoding="utf-8", timeout=60, check=False)


def today_in_records() -> str:
    """The day on which records are written, in words, by this machine's clock."""
    return day_words(datetime.now().astimezone())


def joined(text: str) -> str:
    """Folded lines as the sentences they were."""
    return " ".join(text.split())
