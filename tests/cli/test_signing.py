"""`sign` and `trust`: from a new key to a signature that another machine trusts."""

import json
import os
from dataclasses import dataclass
from pathlib import Path

import pytest
from cryptography.hazmat.primitives.asymmetric.ed25519 import Ed25519PrivateKey

from clinicalc.coefficients.reader import read_file
from clinicalc.library.keys import decode_public, encode_public, group_key_id, key_id
from tests.cli.calling import Ended, call, example
from tests.library.keys_at_hand import PASSPHRASE, key_file

TARNWICK = example("tarnwick-cvd-10y")


@dataclass(frozen=True, slots=True)
class Bench:
    """A folder with a key of its own and settings that trust nobody yet."""

    folder: Path
    id: str

    def at(self, name: str) -> str:
        """The path of a file in the folder."""
        return str(self.folder / name)

    def sign(self, *words: str) -> Ended:
        """Sign the shipped example; the signed file is signed.json."""
        return call("sign", TARNWICK, "--key", self.at("press.key"), "--out", self.at("signed.json"), *words)


@pytest.fixture
def bench(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> Bench:
    """A key file press.key of the Tarnwick Press, with its passphrase in the environment."""
    monkeypatch.setenv("CLINICALC_SETTINGS", os.fspath(tmp_path / "settings"))
    monkeypatch.setenv("CLINICALC_PASSPHRASE", PASSPHRASE)
    return Bench(tmp_path, key_file(tmp_path / "press.key", "Tarnwick Press").id)


def signatures_shown(path: str) -> str:
    """What `inspect` says under "Signatures"."""
    ended = call("inspect", path)
    assert (ended.status, ended.err) == (0, "")
    return ended.out.split("\nSignatures\n")[1].split("\n\n")[0]


def test_from_a_signature_to_trust_and_back(bench: Bench) -> None:
    assert "nobody has signed" in signatures_shown(TARNWICK)
    signed = bench.sign()
    assert (signed.status, signed.err) == (0, "")
    assert group_key_id(bench.id)[:39] in signed.out
    assert read_file(Path(bench.at("signed.json"))).fingerprint == read_file(Path(TARNWICK)).fingerprint
    assert "not checked: its key is not trusted on this machine" in signatures_shown(bench.at("signed.json"))

    assert call("trust", "card", bench.at("press.key"), "--out", bench.at("card.json")).status == 0
    added = call("trust", "add", bench.at("card.json"), "--id", group_key_id(bench.id))
    assert (added.status, added.err) == (0, "")
    shown = signatures_shown(bench.at("signed.json"))
    assert "Tarnwick Press, whose key is trusted on this machine" in shown
    assert f"key {group_key_id(bench.id)[:39]}" in shown
    assert group_key_id(bench.id)[40:] in shown

    assert call("trust", "revoke", bench.id[:12]).status == 0
    assert "does not count: the key of Tarnwick Press was revoked" in signatures_shown(bench.at("signed.json"))
    listed = call("trust", "list")
    assert "Revoked" in listed.out


def test_a_changed_model_shows_that_its_signature_does_not_count(bench: Bench) -> None:
    bench.sign()
    call("trust", "add", call("trust", "card", bench.at("press.key"), "--json").record["public"], "--name", "The Press",
         "--id", bench.id)  # fmt: skip
    path = Path(bench.at("signed.json"))
    path.write_text(path.read_text("utf-8").replace('"version": "1.0.0"', '"version": "1.0.1"'), encoding="utf-8")
    assert "does not count: the signature does not fit" in signatures_shown(str(path))


def test_an_unreadable_list_of_publishers_is_said_and_trusts_nobody(bench: Bench) -> None:
    bench.sign()
    (bench.folder / "settings").mkdir()
    (bench.folder / "settings" / "trust.json").write_text("{", encoding="utf-8")
    shown = signatures_shown(bench.at("signed.json"))
    assert "No publisher is trusted now." in shown
    assert "not checked" in shown


def test_everything_is_said_to_a_program_too(bench: Bench) -> None:
    signed = bench.sign("--json").record
    assert signed["fingerprint"] == read_file(Path(TARNWICK)).fingerprint
    assert (signed["key"], signed["signatures"]) == (bench.id, 1)
    card = call("trust", "card", bench.at("press.key"), "--json").record
    assert (card["id"], card["name"]) == (bench.id, "Tarnwick Press")
    added = call("trust", "add", card["public"], "--name", "The Press", "--id", bench.id, "--json").record
    assert (added["id"], added["revoked"]) == (bench.id, None)
    assert call("trust", "list", "--json").record == {"publishers": [added]}
    revoked = call("trust", "revoke", bench.id, "--json").record
    assert revoked["revoked"] is not None
    assert call("trust", "list", "--json").record == {"publishers": [revoked]}


def test_a_key_is_made_and_what_is_final_is_said_first(bench: Bench) -> None:
    made = call("trust", "make-key", "--name", "Dr Ada Tarn", "--out", bench.at("ada.key"), "--json")
    assert made.status == 0
    assert "cannot be recovered" in made.err
    assert made.record["id"] == call("trust", "card", bench.at("ada.key"), "--json").record["id"]


@pytest.mark.parametrize(
    ("words", "sentence"),
    [
        (("--out", "press.key"), "never put over another file"),
        (("--out", "library/mine.key"), "never kept inside a library"),
        (("--out", "nowhere/mine.key"), "could not be written"),
    ],
)
def test_no_key_is_made_where_it_must_not_be(
    bench: Bench, monkeypatch: pytest.MonkeyPatch, words: tuple[str, ...], sentence: str
) -> None:
    (bench.folder / "library").mkdir()
    (bench.folder / "library" / "library.json").write_text("{}", encoding="utf-8")
    monkeypatch.chdir(bench.folder)
    before = (bench.folder / "press.key").read_bytes()
    ended = call("trust", "make-key", "--name", "Dr Ada Tarn", *words)
    assert ended.status in (5, 6)
    assert ended.out == ""
    assert sentence in ended.err
    assert (bench.folder / "press.key").read_bytes() == before
    assert not (bench.folder / "library" / "mine.key").exists()


@pytest.mark.parametrize(
    ("passphrase", "sentence"),
    [("short", "at least 12"), (" " * 14, "nothing but spaces"), ("z" * 14, "over and over")],
)
def test_a_weak_passphrase_makes_no_key(
    bench: Bench, monkeypatch: pytest.MonkeyPatch, passphrase: str, sentence: str
) -> None:
    monkeypatch.setenv("CLINICALC_PASSPHRASE", passphrase)
    ended = call("trust", "make-key", "--name", "Dr Ada Tarn", "--out", bench.at("ada.key"))
    assert (ended.status, ended.out) == (6, "")
    assert sentence in ended.err
    assert not (bench.folder / "ada.key").exists()


def test_the_passphrase_changes(bench: Bench, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setenv("CLINICALC_NEW_PASSPHRASE", "quite another passphrase")
    assert call("trust", "change-passphrase", bench.at("press.key")).status == 0
    refused = bench.sign()
    assert refused.status == 6
    assert "the passphrase does not open this key" in refused.err
    assert not Path(bench.at("signed.json")).exists()
    Path(bench.at("passphrase")).write_text("quite another passphrase\r\n", encoding="utf-8")
    assert bench.sign("--passphrase-file", bench.at("passphrase")).status == 0


@pytest.mark.parametrize(
    ("data", "sentence"),
    [
        (None, "no such file"),
        (b"", "one line"),
        (b"\n", "one line"),
        (b"one line\nand another\n", "one line"),
        (b"\xff\xfe", "UTF-8"),
        (b"x" * 5000, "larger than"),
    ],
)
def test_a_passphrase_file_is_one_line(bench: Bench, data: bytes | None, sentence: str) -> None:
    if data is not None:
        Path(bench.at("passphrase")).write_bytes(data)
    ended = bench.sign("--passphrase-file", bench.at("passphrase"))
    assert (ended.status, ended.out) == (6, "")
    assert sentence in ended.err


def test_signing_in_place_adds_and_never_twice(bench: Bench) -> None:
    path = Path(bench.at("model.json"))
    path.write_bytes(Path(TARNWICK).read_bytes())
    other = key_file(bench.folder / "other.key", "Dr Ada Tarn")
    assert call("sign", str(path), "--key", bench.at("press.key")).status == 0
    assert call("sign", str(path), "--key", bench.at("other.key")).status == 0
    before = path.read_bytes()
    again = call("sign", str(path), "--key", bench.at("press.key"))
    assert (again.status, again.out) == (6, "")
    assert "has signed this file already" in again.err
    assert path.read_bytes() == before
    assert group_key_id(other.id)[:39] in signatures_shown(str(path))


def test_a_refused_file_is_not_signed_and_no_passphrase_is_asked(bench: Bench, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.delenv("CLINICALC_PASSPHRASE")  # to ask would end in "Stopped"
    tree = json.loads(Path(TARNWICK).read_bytes())
    tree["model"]["worked_examples"][0]["probability"] *= 1.01
    path = Path(bench.at("wrong.json"))
    path.write_text(json.dumps(tree), encoding="utf-8")
    before = path.read_bytes()
    ended = call("sign", str(path), "--key", bench.at("press.key"))
    assert (ended.status, ended.out) == (4, "")
    assert "/model/worked_examples/0" in ended.err
    assert path.read_bytes() == before


def test_no_file_is_written_over(bench: Bench) -> None:
    Path(bench.at("signed.json")).write_text("mine", encoding="utf-8")
    ended = bench.sign()
    assert (ended.status, ended.out) == (2, "")
    assert "is there already" in ended.err
    assert Path(bench.at("signed.json")).read_text(encoding="utf-8") == "mine"


def test_a_wrong_id_trusts_nobody(bench: Bench) -> None:
    public = call("trust", "card", bench.at("press.key"), "--json").record["public"]
    for typed in ("", bench.id[:16], bench.id[:-1] + ("0" if bench.id[-1] != "0" else "1"), "é" * 64):
        ended = call("trust", "add", public, "--name", "The Press", "--id", typed)
        assert (ended.status, ended.out) == (6, "")
        assert "of its 64 digits do" in ended.err
    assert call("trust", "list").out == "No publisher is trusted on this machine.\n"


def test_a_public_key_may_begin_with_a_dash() -> None:
    public = ""
    while not public.startswith("-"):
        public = encode_public(Ed25519PrivateKey.generate().public_key().public_bytes_raw())
    id = key_id(decode_public(public))
    assert call("trust", "add", public, "--name", "The Press", "--id", id, "--json").record["id"] == id
    for begins in ("-h", "--", "-i"):
        ended = call("trust", "add", begins + public[2:], "--name", "The Press", "--id", id)
        assert (ended.status, ended.out) == (6, ""), begins
        assert "No such option" not in ended.err


def test_words_that_are_missing_end_with_2() -> None:
    for words in (("sign", TARNWICK), ("trust", "add", "x"), ("trust", "make-key"), ("trust", "nothing")):
        ended = call(*words)
        assert (ended.status, ended.out) == (2, "")
        assert "Traceback" not in ended.err


def test_without_a_keyboard_the_question_ends_in_a_sentence(bench: Bench, monkeypatch: pytest.MonkeyPatch) -> None:
    import io
    import sys

    monkeypatch.delenv("CLINICALC_PASSPHRASE")
    monkeypatch.setattr(sys, "stdin", io.StringIO(""))
    monkeypatch.setattr("getpass.getpass", lambda *_, **__: (_ for _ in ()).throw(EOFError()))
    ended = bench.sign()
    assert ended.status == 5
    assert "nothing was written" in ended.err
