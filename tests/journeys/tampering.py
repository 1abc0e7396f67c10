"""What somebody with a text editor, and no key, can do to a library's folder: each way once, on a practice's own."""

import hashlib
import os
import shutil
from dataclasses import dataclass
from datetime import UTC, date, datetime, timedelta
from pathlib import Path

import msgspec
import pytest

from clinicalc.coefficients.reader import read_file
from clinicalc.library import base64url
from clinicalc.library.key_files import open_key
from clinicalc.library.keys import SigningKey
from clinicalc.library.records import Approved, Follows, Founding, Installed, Record, RecordFile
from clinicalc.library.sealing import seal
from tests.cli.calling import LIPIDS, call
from tests.cli.practices import FINGERPRINT, TARNWICK, Desk, found_practice
from tests.library.keys_at_hand import PASSPHRASE, key_file

LIBRARY = "0" * 64
OTHER_MODEL = "general-cvd-2008-lipids"
WEAK_KEY = "A" * 43
"""32 zero bytes: y = 0, a point of order 4, under which one signature fits every text it was made for."""


@dataclass(frozen=True, slots=True)
class Folder:
    """The library's folder of a practice, as somebody finds it in a file manager."""

    desk: Desk
    model: str
    """The fingerprint of the model in use."""

    @property
    def place(self) -> Path:
        """Where it lies."""
        return Path(self.desk.place)

    @property
    def model_file(self) -> Path:
        """The model's file."""
        return self.place / "models" / f"{self.model}.json"

    def records(self, kind: str, about: str = "") -> list[Path]:
        """The files of the records of one kind."""
        found = (self.place / "records").glob(f"{about or self.model}-*.json")
        return sorted(path for path in found if f'"kind":"{kind}"'.encode() in path.read_bytes())

    def one(self, kind: str, about: str = "") -> Path:
        """The file of the only record of its kind."""
        (found,) = self.records(kind, about)
        return found

    def put(self, about: str, content: bytes) -> None:
        """A record put in by hand, under the name that its bytes want."""
        digest = hashlib.sha256(content).hexdigest()
        (self.place / "records" / f"{about}-{digest}.json").write_bytes(content)

    def edit(self, path: Path, old: bytes, new: bytes) -> None:
        """A record changed and renamed to its new digest."""
        content = path.read_bytes()
        assert content.count(old) == 1
        path.unlink()
        self.put(path.name.partition("-")[0], content.replace(old, new))

    def sign(self, key: SigningKey, like: Path, **changes: object) -> None:
        """A record like that one, signed anew by a key as a program could that asks nothing."""
        record = msgspec.json.decode(like.read_bytes(), type=RecordFile).record
        body = msgspec.structs.replace(record, by=key.id, **changes)
        self.put(body.about, seal(body, key).content)

    def record(self, path: Path) -> Record:
        """What a file says."""
        return msgspec.json.decode(path.read_bytes(), type=RecordFile).record

    def key(self, name: str) -> SigningKey:
        """A key of the practice, opened."""
        return open_key(Path(self.desk.key(name)), PASSPHRASE)


def withdraw(folder: Folder) -> None:
    """The manager withdraws the model, on this machine and lawfully."""
    words = ("--key", folder.desk.key("cleo"), "--reason", "A misprint was found.")
    assert folder.desk.library("withdraw", TARNWICK, *words).status == 0


def one_byte_of_the_file(folder: Folder) -> None:
    content = bytearray(folder.model_file.read_bytes())
    content[len(content) // 2] ^= 1
    folder.model_file.chmod(0o644)
    folder.model_file.write_bytes(content)


def a_coefficient_and_the_files_name(folder: Folder) -> None:
    content = folder.model_file.read_bytes().replace(b'"coefficient":0.', b'"coefficient":1.', 1)
    fingerprint = hashlib.sha256(content).hexdigest()
    assert fingerprint != folder.model
    folder.model_file.unlink()
    (folder.place / "models" / f"{fingerprint}.json").write_bytes(content)


def a_coefficient_the_files_name_and_every_record(folder: Folder) -> str:
    old = list((folder.place / "records").glob(f"{folder.model}-*.json"))
    a_coefficient_and_the_files_name(folder)
    (new,) = (folder.place / "models").iterdir()
    for path in old:
        folder.put(new.stem, path.read_bytes().replace(folder.model.encode(), new.stem.encode()))
        path.unlink()
    return new.stem


def an_approval_for_another_file(folder: Folder) -> str:
    assert folder.desk.install(LIPIDS).status == 0
    approval = folder.one("approved")
    other = next(path.stem for path in (folder.place / "models").iterdir() if path.stem != folder.model)
    shutil.copyfile(approval, approval.with_name(approval.name.replace(folder.model, other)))
    return OTHER_MODEL


def an_approvals_date(folder: Folder) -> None:
    path = folder.one("approved")
    path.chmod(0o644)
    until = folder.record(path).statement
    assert isinstance(until, Approved)
    path.write_bytes(path.read_bytes().replace(until.review_until.encode(), b"2099-12-31"))


def an_approvals_date_and_its_name(folder: Folder) -> None:
    path = folder.one("approved")
    until = folder.record(path).statement
    assert isinstance(until, Approved)
    folder.edit(path, until.review_until.encode(), b"2099-12-31")


def a_record_from_the_middle(folder: Folder) -> None:
    folder.one("approved").unlink()


def the_newest_record(folder: Folder) -> None:
    withdraw(folder)
    folder.one("withdrawn").unlink()


def the_whole_folder(folder: Folder) -> None:
    older = folder.desk.folder / "older"
    shutil.copytree(folder.place, older)
    withdraw(folder)
    shutil.rmtree(folder.place)
    shutil.copytree(older, folder.place)


def two_histories(folder: Folder) -> None:
    """One copy of the folder saw a withdrawal, another one an extension; the files of both are put together."""
    other = folder.desk.folder / "other"
    shutil.copytree(folder.place, other)
    words = (
        "--key",
        folder.desk.key("ada"),
        "--reason",
        "Reviewed.",
        "--review-until",
        f"{date.today() + timedelta(days=400)}",
    )
    assert folder.desk.library("extend", TARNWICK, *words).status == 0
    extended = folder.place.rename(folder.desk.folder / "extended")
    other.rename(folder.place)
    settings = os.environ["CLINICALC_SETTINGS"]
    os.environ["CLINICALC_SETTINGS"] = os.fspath(folder.desk.folder / "another machine")
    try:
        key = folder.key("practice").id
        assert call("library", "join", os.fspath(folder.place), "--practice-key-id", key).status == 0
        withdraw(folder)
    finally:
        os.environ["CLINICALC_SETTINGS"] = settings
    shutil.copytree(extended, folder.place, dirs_exist_ok=True)


def an_approval_by_a_stranger(folder: Folder) -> None:
    withdraw(folder)
    _approve_after_withdrawal(folder, "press")


def an_approval_by_a_revoked_key(folder: Folder) -> None:
    words = ("--reason", "The stick was stolen.", "--practice-key", folder.desk.key("practice"))
    assert folder.desk.library("revoke-key", folder.key("ada").id, *words).status == 0
    approval = folder.one("approved")
    folder.sign(folder.key("ada"), approval, follows=_after(folder, folder.one("commented"), approval))


def another_librarys_key(folder: Folder) -> None:
    """Everything founded and signed anew by somebody else, in the same names."""
    thief = folder.desk.folder / "thief"
    thief.mkdir()
    settings = os.environ["CLINICALC_SETTINGS"]
    os.environ["CLINICALC_SETTINGS"] = os.fspath(thief / "settings")
    try:
        key_file(thief / "practice.key", "Tarnwick Northgate")
        words = ("--practice", "Tarnwick Northgate", "--practice-key", os.fspath(thief / "practice.key"))
        cards = ("--approver", folder.desk.card("ada"), "--role", "GP partner")
        assert call("library", "init", os.fspath(thief / "library"), *words, *cards).status == 0
    finally:
        os.environ["CLINICALC_SETTINGS"] = settings
    shutil.rmtree(folder.place)
    shutil.copytree(thief / "library", folder.place)


def the_founding_record(folder: Folder) -> None:
    """Only the practice key in it, and every name that stands for it."""
    mallory = key_file(folder.desk.folder / "mallory.key", "Mallory")
    founding = folder.one("founding", LIBRARY)
    old = folder.record(founding).statement
    assert isinstance(old, Founding)
    folder.edit(founding, old.key.encode(), mallory.public.encode())


def the_algorithm(folder: Folder) -> None:
    _edit_header(folder, b'"Ed25519"', b'"none"')


def the_type(folder: Folder) -> None:
    _edit_header(folder, b"clinicalc-record+1", b"clinicalc-model+1")


def a_weak_key(folder: Folder) -> None:
    path = folder.one("approvers", LIBRARY)
    folder.edit(path, folder.key("ada").public.encode(), WEAK_KEY.encode())


def a_record_from_the_future(folder: Folder) -> None:
    later = f"{datetime.now(UTC) + timedelta(days=365):%Y-%m-%dT%H:%M:%SZ}"
    approval = folder.one("approved")
    after = _after(folder, folder.one("commented"), approval)
    folder.sign(folder.key("ada"), approval, follows=after, written=later)


def another_models_name(folder: Folder) -> str:
    """The installation calls the file what it is not; only whoever has an approver's key can do that."""
    read = read_file(Path(LIPIDS))
    (folder.place / "models" / f"{read.fingerprint}.json").write_bytes(read.canonical)
    installed, approval = folder.one("installed"), folder.one("approved")
    said = Installed(TARNWICK, "2.0.0", "Tarnwick cardiovascular disease", "by hand")
    folder.sign(folder.key("cleo"), installed, about=read.fingerprint, statement=said)
    brought = folder.one("installed", read.fingerprint)
    after = _after(folder, brought, approval)
    folder.sign(folder.key("ada"), approval, about=read.fingerprint, follows=after)
    return read.fingerprint


def a_link_in_a_records_place(folder: Folder) -> None:
    path = folder.one("approved")
    path.rename(folder.desk.folder / "approval.json")
    path.symlink_to(folder.desk.folder / "approval.json")


def a_fifo_in_a_models_place(folder: Folder) -> None:
    folder.model_file.unlink()
    os.mkfifo(folder.model_file)


def five_gigabytes_in_a_records_place(folder: Folder) -> None:
    path = folder.one("approved")
    path.chmod(0o644)
    os.truncate(path, 5 * 1024**3)


def a_stray_link(folder: Folder) -> None:
    (folder.place / "models" / "notes.json").symlink_to("/etc/hostname")


def a_stray_fifo(folder: Folder) -> None:
    os.mkfifo(folder.place / "records" / "notes.json")


def a_stray_of_five_gigabytes(folder: Folder) -> None:
    path = folder.place / "records" / "backup.zip"
    path.touch()
    os.truncate(path, 5 * 1024**3)


def _after(folder: Folder, path: Path, knowing: Path) -> Follows:
    return Follows(folder.record(knowing).follows.library, (path.stem.partition("-")[2],))


def _approve_after_withdrawal(folder: Folder, name: str) -> None:
    approval = folder.one("approved")
    folder.sign(folder.key(name), approval, follows=_after(folder, folder.one("withdrawn"), approval))


def _edit_header(folder: Folder, old: bytes, new: bytes) -> None:
    path = folder.one("approved")
    signature = msgspec.json.decode(path.read_bytes(), type=RecordFile).signatures[0]
    header = base64url.decode(signature.protected)
    assert header is not None
    assert old in header
    folder.edit(path, signature.protected.encode(), base64url.encode(header.replace(old, new)).encode())


def found_untouched(parent: Path) -> Folder:
    """A practice with one model in use: installed, approved and remarked on; a copy of all of it lies beside it."""
    folder = parent / "work"
    folder.mkdir()
    with pytest.MonkeyPatch.context() as patch:
        desk = found_practice(folder, patch)
        assert desk.install().status == 0
        assert desk.approve("--fingerprint", FINGERPRINT).status == 0
        remark = ("Read by the partners.", "--key", desk.key("cleo"))
        assert desk.library("comment", TARNWICK, *remark).status == 0
    shutil.copytree(folder, folder.with_name("pristine"))
    return Folder(desk, FINGERPRINT)


def put_back(found: Folder, patch: pytest.MonkeyPatch) -> None:
    """The practice as `found_untouched` left it, at the same place."""
    desk = found.desk
    shutil.rmtree(desk.folder)
    shutil.copytree(desk.folder.with_name("pristine"), desk.folder)
    patch.setenv("CLINICALC_PASSPHRASE", PASSPHRASE)
    patch.delenv("CLINICALC_LIBRARY", raising=False)
