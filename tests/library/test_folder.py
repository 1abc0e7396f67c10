"""The library's folder: what is put there comes back, under names computed from contents; what disagrees is named."""

import hashlib
import json
import os
from collections.abc import Callable
from pathlib import Path

import pytest
import rfc8785

from clinicalc.errors import LibraryError, LibraryUnreachable
from clinicalc.library.folder import LibraryFolder
from clinicalc.library.listing import Listing
from clinicalc.library.places import RecordName
from clinicalc.library.records import ABOUT_THE_LIBRARY, Commented
from clinicalc.library.standing import Fault, FaultKind
from tests.library.shelf import comment, everything_in, found, founding, is_whole, model, sealed

FINGERPRINT, CONTENT = model("one")


@pytest.fixture
def library(tmp_path: Path) -> LibraryFolder:
    return found(tmp_path / "library")


def test_names_are_computed_from_contents(library: LibraryFolder) -> None:
    remark = comment(FINGERPRINT, "A remark.")
    library.put_model(FINGERPRINT, CONTENT)
    library.put_record(remark)
    first = founding()
    assert everything_in(library.path) == {
        "library.json": rfc8785.dumps({"format": "clinicalc.library/1", "library": first.digest}),
        "models": None,
        f"models/{hashlib.sha256(CONTENT).hexdigest()}.json": CONTENT,
        "records": None,
        f"records/{'0' * 64}-{hashlib.sha256(first.content).hexdigest()}.json": first.content,
        f"records/{FINGERPRINT}-{hashlib.sha256(remark.content).hexdigest()}.json": remark.content,
    }
    assert json.loads((library.path / "library.json").read_bytes())["library"] == library.library_id()


def test_what_was_put_comes_back(library: LibraryFolder) -> None:
    remarks = sorted((comment(FINGERPRINT, f"Remark {number}.") for number in range(3)), key=lambda one: one.digest)
    library.put_model(FINGERPRINT, CONTENT)
    for remark in remarks:
        library.put_record(remark)
    names = tuple(RecordName(FINGERPRINT, remark.digest) for remark in remarks)
    assert library.list_models() == Listing((FINGERPRINT,), ())
    assert library.list_records(FINGERPRINT) == Listing(names, ())
    assert library.list_records() == Listing(tuple(sorted((RecordName("0" * 64, founding().digest), *names))), ())
    assert library.read_model(FINGERPRINT) == CONTENT
    assert library.read_record(FINGERPRINT, remarks[0].digest) == remarks[0]
    assert library.read_records(FINGERPRINT) == (tuple(remarks), ())
    assert library.read_records(ABOUT_THE_LIBRARY) == ((founding(),), ())
    assert library.list_strays() == ()


def test_to_put_twice_changes_nothing(library: LibraryFolder) -> None:
    for _ in range(2):
        library.put_model(FINGERPRINT, CONTENT)
        library.put_record(comment(FINGERPRINT, "A remark."))
    assert len(library.list_models().names) == 1
    assert len(library.list_records(FINGERPRINT).names) == 1
    assert len(everything_in(library.path)) == 6


def test_bytes_that_have_another_fingerprint_are_not_put(library: LibraryFolder) -> None:
    before = everything_in(library.path)
    with pytest.raises(LibraryError, match="do not have this fingerprint"):
        library.put_model(FINGERPRINT, CONTENT + b" ")
    assert everything_in(library.path) == before


def test_a_record_of_another_library_is_not_put(library: LibraryFolder) -> None:
    before = everything_in(library.path)
    with pytest.raises(LibraryError, match="made for another library"):
        library.put_record(sealed("f" * 64, FINGERPRINT, Commented(text="A remark.")))
    with pytest.raises(LibraryError, match="made for another library"):
        library.put_record(founding("Another Practice"))
    assert everything_in(library.path) == before


def test_a_changed_model_is_named_and_not_given(library: LibraryFolder) -> None:
    library.put_model(FINGERPRINT, CONTENT)
    (library.path / "models" / f"{FINGERPRINT}.json").write_bytes(CONTENT.replace(b"one", b"two"))
    fault = library.read_model(FINGERPRINT)
    assert isinstance(fault, Fault)
    assert (fault.kind, fault.about, fault.stops) == (FaultKind.CHANGED_FILE, FINGERPRINT, True)
    with pytest.raises(LibraryError, match="a file was changed there"):
        library.put_model(FINGERPRINT, CONTENT)


@pytest.mark.parametrize(
    "damage",
    [
        lambda content: content.replace(b"A remark", b"A remarK"),
        lambda content: content[:-1],
        lambda content: b"",
        lambda content: content + b"\n",
        lambda content: b"x" * 300_000,
    ],
)
def test_a_changed_record_is_named_and_not_given(library: LibraryFolder, damage: Callable[[bytes], bytes]) -> None:
    remark, other = comment(FINGERPRINT, "A remark."), comment(FINGERPRINT, "Another.")
    library.put_record(remark)
    library.put_record(other)
    path = library.path / "records" / RecordName(FINGERPRINT, remark.digest).file
    path.write_bytes(damage(remark.content))
    records, faults = library.read_records(FINGERPRINT)
    assert records == (other,)
    assert [(one.kind, one.about, one.record, one.stops) for one in faults] == [
        (FaultKind.CHANGED_FILE, FINGERPRINT, remark.digest, True)
    ]
    assert library.read_record(FINGERPRINT, remark.digest) == faults[0]


def test_a_record_under_another_fingerprint_is_misnamed(library: LibraryFolder) -> None:
    remark = comment(FINGERPRINT, "A remark.")
    name = RecordName("a" * 64, remark.digest)
    (library.path / "records" / name.file).write_bytes(remark.content)
    records, faults = library.read_records("a" * 64)
    assert records == ()
    assert [fault.kind for fault in faults] == [FaultKind.MISNAMED_RECORD]
    assert str(RecordName(FINGERPRINT, remark.digest)) in faults[0].sentence


def test_what_is_no_record_is_unreadable_under_its_own_digest(library: LibraryFolder) -> None:
    content = b'{"record":{}}'
    name = RecordName(FINGERPRINT, hashlib.sha256(content).hexdigest())
    (library.path / "records" / name.file).write_bytes(content)
    records, (fault,) = library.read_records(FINGERPRINT)
    assert records == ()
    assert (fault.kind, fault.record) == (FaultKind.UNREADABLE_RECORD, name.digest)


def test_what_is_missing_is_named(library: LibraryFolder) -> None:
    model_fault = library.read_model(FINGERPRINT)
    record_fault = library.read_record(FINGERPRINT, "b" * 64)
    assert isinstance(model_fault, Fault)
    assert isinstance(record_fault, Fault)
    assert (model_fault.kind, model_fault.about) == (FaultKind.MISSING_FILE, FINGERPRINT)
    assert (record_fault.kind, record_fault.record) == (FaultKind.MISSING_RECORD, "b" * 64)


def test_no_name_leads_out_of_the_folder(library: LibraryFolder) -> None:
    (library.path / "models" / "other.json").write_bytes(CONTENT)
    for name in ("../library", "other", FINGERPRINT.upper(), f"{FINGERPRINT}\n", ""):
        fault = library.read_model(name)
        assert isinstance(fault, Fault)
        assert fault.kind is FaultKind.MISSING_FILE
        assert isinstance(library.read_record(FINGERPRINT, name), Fault)


def test_strays_are_told_and_stop_nothing(library: LibraryFolder) -> None:
    library.put_model(FINGERPRINT, CONTENT)
    records = library.path / "records"
    (library.path / "notes.txt").write_text("buy tea")
    (records / f"{FINGERPRINT}-{'c' * 64} (1).json").write_text("{}")
    (records / f"{FINGERPRINT.upper()}-{'C' * 64}.json").write_text("{}")
    (library.path / "models" / f"{FINGERPRINT}.json.bak").write_bytes(CONTENT)
    (library.path / "models" / "folder").mkdir()
    (library.path / "models" / os.fsdecode(b"bad\xff\x1b[2J")).write_text("")
    told = [*library.list_strays(), *library.list_models().faults, *library.list_records().faults]
    assert [(one.kind, one.stops) for one in told] == [
        (FaultKind.STRAY, False),
        (FaultKind.STRAY, False),
        (FaultKind.STRAY, False),
        (FaultKind.NOT_A_FILE, False),
        (FaultKind.STRAY, False),
        (FaultKind.STRAY, False),
    ]
    assert "notes.txt" in told[0].sentence
    assert all(one.sentence.isprintable() for one in told), told
    assert len(library.list_records(FINGERPRINT).faults) == 1
    assert library.list_models().names == (FINGERPRINT,)


@pytest.mark.parametrize("part", ["", "models", "records"])
def test_what_systems_leave_everywhere_is_passed_over(library: LibraryFolder, part: str) -> None:
    for name in (".DS_Store", "Thumbs.db", "desktop.ini", "._x.json", ".nfs0000abcd", ".clinicalc-00.part"):
        (library.path / part / name).write_bytes(b"\0")
    (library.path / part / "@eaDir").mkdir()
    assert library.list_strays() == ()
    assert is_whole(library)


@pytest.mark.parametrize("part", ["models", "records"])
@pytest.mark.parametrize("instead", ["nothing", "link", "file"])
def test_a_part_that_is_gone_or_a_link_is_named(
    tmp_path: Path, library: LibraryFolder, part: str, instead: str
) -> None:
    library.put_model(FINGERPRINT, CONTENT)
    library.put_record(comment(FINGERPRINT, "A remark."))
    moved = tmp_path / "elsewhere"
    (library.path / part).rename(moved)
    if instead == "link":
        (library.path / part).symlink_to(moved)
    elif instead == "file":
        (library.path / part).write_bytes(b"")
    listing = library.list_models() if part == "models" else library.list_records()
    read = library.read_model(FINGERPRINT) if part == "models" else library.read_record(FINGERPRINT, "c" * 64)
    before = everything_in(tmp_path)
    kind = FaultKind.MISSING_FILE if instead == "nothing" else FaultKind.NOT_A_FILE
    assert listing.names == ()
    assert [(fault.kind, fault.stops) for fault in listing.faults] == [(kind, True)]
    assert isinstance(read, Fault)
    assert read.kind is kind
    with pytest.raises(LibraryError, match=part):
        library.put_model(*model("two")) if part == "models" else library.put_record(comment(FINGERPRINT, "Two."))
    assert everything_in(tmp_path) == before


@pytest.mark.parametrize(
    ("content", "says"),
    [
        (b"", "not as the founding"),
        (b'{"format":"clinicalc.library/1","library":"' + b"0" * 63 + b'"}', "not as the founding"),
        (b'{"format":"clinicalc.library/1","library":"' + b"0" * 64 + b'"}\n', "not as the founding"),
        (b'{"format":"clinicalc.library/2","library":"' + b"0" * 64 + b'","more":1}', "newer version"),
        (b" " * 5000, "at most 4,096"),
    ],
)
def test_a_changed_founding_file_is_refused(library: LibraryFolder, content: bytes, says: str) -> None:
    (library.path / "library.json").write_bytes(content)
    with pytest.raises(LibraryError, match=says) as raised:
        library.library_id()
    assert not isinstance(raised.value, LibraryUnreachable)


def test_without_its_founding_file_a_folder_is_no_library(library: LibraryFolder) -> None:
    (library.path / "library.json").unlink()
    with pytest.raises(LibraryError, match="removed, or the founding") as raised:
        library.library_id()
    assert not isinstance(raised.value, LibraryUnreachable)


def test_an_empty_folder_may_be_a_share_that_is_not_connected(tmp_path: Path) -> None:
    library = LibraryFolder(tmp_path)
    for ask in (library.library_id, library.list_models, library.list_records, library.read_records):
        with pytest.raises(LibraryUnreachable, match="share may not be connected"):
            ask()


def test_one_models_records_are_found_without_opening_others(
    library: LibraryFolder, monkeypatch: pytest.MonkeyPatch
) -> None:
    """Speed without a clock: one look through the folder, and one file opened for each record that is asked for."""
    for number in range(40):
        library.put_record(comment(model(f"model {number % 8}")[0], f"Remark {number}."))
    opened: list[str] = []
    system_open = os.open

    def count(path: str, *arguments: object, **options: object) -> int:
        opened.append(os.fspath(path))
        return system_open(path, *arguments, **options)  # type: ignore[arg-type]

    monkeypatch.setattr(os, "open", count)
    records, faults = library.read_records(model("model 3")[0])
    assert (len(records), faults) == (5, ())
    assert len(opened) == 2 + 5
