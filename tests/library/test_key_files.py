"""Private keys on disk: sealed at a cost, owner only, never over another file and never in a library."""

import json
import os
import stat
import time
import unicodedata
from collections.abc import Callable
from pathlib import Path
from typing import Any

import pytest
from cryptography.hazmat.primitives.ciphers.aead import AESGCM
from cryptography.hazmat.primitives.kdf.scrypt import Scrypt

from clinicalc.errors import FileNotWritten, KeyRefused
from clinicalc.library import base64url
from clinicalc.library.key_files import BEFORE_MAKING, COST, change_passphrase, make_key, open_key, read_card
from clinicalc.library.keys import encode_public, is_signature, signing_key
from tests.library.keys_at_hand import LOW_COST, PASSPHRASE, key_file, key_of

ANOTHER = "quite another passphrase"


def spoilt(path: Path, change: Callable[[dict[str, Any]], object]) -> Path:
    """The key file with something changed by hand."""
    tree = json.loads(path.read_bytes())
    change(tree)
    path.write_text(json.dumps(tree), encoding="utf-8")
    return path


def test_a_new_key_signs_after_its_passphrase(tmp_path: Path) -> None:
    path = tmp_path / "ada.key"
    card = key_file(path)
    key = open_key(path, PASSPHRASE)
    assert (key.card, card) == (card, read_card(path))
    assert card.name == "Dr Ada Tarn"
    assert is_signature(key.sign(b"text"), b"text", key.raw)
    assert stat.S_IMODE(path.stat().st_mode) == 0o600
    assert list(tmp_path.iterdir()) == [path]


def test_the_file_is_sealed_as_it_says(tmp_path: Path) -> None:
    # opened here by the standards' own functions: scrypt (RFC 7914), then AES-256-GCM over all else as RFC 8785 bytes
    path = tmp_path / "ada.key"
    card = key_file(path)
    tree = json.loads(path.read_bytes())
    sealed = base64url.decode(tree.pop("sealed")) or b""
    salt = base64url.decode(tree["derivation"]["salt"]) or b""
    nonce = base64url.decode(tree["cipher"]["nonce"]) or b""
    bound = json.dumps(tree, sort_keys=True, separators=(",", ":"), ensure_ascii=False).encode()
    derived = Scrypt(salt=salt, length=32, n=LOW_COST, r=8, p=1).derive(PASSPHRASE.encode())
    private = AESGCM(derived).decrypt(nonce, sealed, bound)
    assert signing_key(private, "").id == card.id
    assert private not in path.read_bytes()
    assert tree["derivation"] == {"name": "scrypt", "n": LOW_COST, "r": 8, "p": 1, "salt": tree["derivation"]["salt"]}
    assert (len(salt), len(nonce), len(sealed)) == (16, 12, 48)


def test_the_usual_cost_is_a_real_one(tmp_path: Path) -> None:
    # OWASP Password Storage Cheat Sheet: scrypt with N = 2^17, r = 8, p = 1; the time only shows that it is spent
    path = tmp_path / "ada.key"
    make_key(path, "Dr Ada Tarn", PASSPHRASE)
    derivation = json.loads(path.read_bytes())["derivation"]
    assert (derivation["n"], derivation["r"], derivation["p"]) == (COST, 8, 1) == (2**17, 8, 1)
    begun = time.process_time()
    open_key(path, PASSPHRASE)
    assert time.process_time() - begun > 0.05


def test_two_keys_share_nothing(tmp_path: Path) -> None:
    trees = []
    for name in ("one", "two"):
        key_file(tmp_path / name)
        trees.append(json.loads((tmp_path / name).read_bytes()))
    one, two = trees
    assert one["public"] != two["public"]
    assert one["derivation"]["salt"] != two["derivation"]["salt"]
    assert one["cipher"]["nonce"] != two["cipher"]["nonce"]


@pytest.mark.parametrize("wrong", ["", "x", PASSPHRASE + " ", PASSPHRASE.upper(), "a\ud800b", "\0" * 20])
def test_a_wrong_passphrase_is_a_sentence(tmp_path: Path, wrong: str) -> None:
    path = tmp_path / "ada.key"
    key_file(path)
    with pytest.raises(KeyRefused, match="the passphrase does not open this key"):
        open_key(path, wrong)


def test_an_accent_opens_however_the_keyboard_spells_it(tmp_path: Path) -> None:
    # RFC 8265, section 4.2.2: NFC, and a wide space is a space
    path = tmp_path / "ada.key"
    composed = unicodedata.normalize("NFC", "crème brûlée à midi")
    make_key(path, "Dr Ada Tarn", composed, cost=LOW_COST)
    assert open_key(path, unicodedata.normalize("NFD", composed)).id == open_key(path, composed).id
    assert open_key(path, composed.replace(" ", "\u3000")).id


@pytest.mark.parametrize(
    ("passphrase", "reason"),
    [
        ("", "has 0 characters; it needs at least 12"),
        ("elevenchars", "has 11 characters; it needs at least 12"),
        ("é" * 6 + "abcde", "has 11 characters"),
        ("e\u0301" * 6, "has 6 characters"),
        (" " * 12, "nothing but spaces"),
        ("\u00a0\u3000" * 8, "nothing but spaces"),
        ("a" * 40, "one character over and over"),
        ("x" * 500 + "y" * 501, "at most 1000"),
        ("twelve chars\n", "U+000A"),
        ("twelve chars\x00", "U+0000"),
        ("twelve chars\ud800", "U+D800"),
    ],
)
def test_a_passphrase_that_will_not_do_is_refused_with_its_limit(tmp_path: Path, passphrase: str, reason: str) -> None:
    path = tmp_path / "ada.key"
    with pytest.raises(KeyRefused) as refused:
        make_key(path, "Dr Ada Tarn", passphrase, cost=LOW_COST)
    assert reason in str(refused.value)
    assert not path.exists()
    key_file(path)
    before = path.read_bytes()
    with pytest.raises(KeyRefused):
        change_passphrase(path, PASSPHRASE, passphrase, cost=LOW_COST)
    assert path.read_bytes() == before


def test_twelve_characters_are_enough(tmp_path: Path) -> None:
    make_key(tmp_path / "ada.key", "Dr Ada Tarn", "twelve chars", cost=LOW_COST)
    assert open_key(tmp_path / "ada.key", "twelve chars").name == "Dr Ada Tarn"


@pytest.mark.parametrize("name", ["", "   ", "x" * 121, "Dr\nAda", "Dr\u202eAda", "Dr\ud800Ada"])
def test_a_name_that_could_not_be_shown_is_refused(tmp_path: Path, name: str) -> None:
    with pytest.raises(KeyRefused):
        make_key(tmp_path / "ada.key", name, PASSPHRASE, cost=LOW_COST)
    assert list(tmp_path.iterdir()) == []


def test_no_key_is_put_over_another_file(tmp_path: Path) -> None:
    path = tmp_path / "ada.key"
    path.write_text("something else", encoding="utf-8")
    with pytest.raises(KeyRefused, match="never put over"):
        key_file(path)
    assert path.read_text(encoding="utf-8") == "something else"
    link = tmp_path / "link.key"
    link.symlink_to(tmp_path / "nowhere")
    with pytest.raises(KeyRefused, match="never put over"):
        key_file(link)
    assert link.is_symlink()


def test_no_key_is_put_over_one_that_came_in_the_meantime(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    path = tmp_path / "ada.key"
    wait = os.fsync

    def overtaken(handle: int) -> None:
        path.write_text("came first", encoding="utf-8")
        wait(handle)

    monkeypatch.setattr(os, "fsync", overtaken)
    with pytest.raises(KeyRefused, match="never put over"):
        key_file(path)
    assert path.read_text(encoding="utf-8") == "came first"
    assert list(tmp_path.iterdir()) == [path]


@pytest.mark.parametrize("below", ["", "records", "a/b/c"])
def test_no_key_is_kept_in_a_library(tmp_path: Path, below: str) -> None:
    (tmp_path / "library.json").write_text("{}", encoding="utf-8")
    folder = tmp_path / below
    folder.mkdir(parents=True, exist_ok=True)
    with pytest.raises(KeyRefused, match="never kept inside a library"):
        key_file(folder / "ada.key")
    assert not (folder / "ada.key").exists()


def test_no_key_is_kept_in_a_library_by_way_of_a_link(tmp_path: Path) -> None:
    library = tmp_path / "library"
    library.mkdir()
    (library / "library.json").write_text("{}", encoding="utf-8")
    (tmp_path / "link").symlink_to(library)
    with pytest.raises(KeyRefused, match="never kept inside a library"):
        key_file(tmp_path / "link" / "ada.key")


def test_a_folder_that_is_not_there_is_a_sentence(tmp_path: Path) -> None:
    with pytest.raises(FileNotWritten, match="could not be written"):
        key_file(tmp_path / "nowhere" / "ada.key")


@pytest.mark.parametrize("name", ["a\0b", "a\0b/ada.key", "x" * 300, "loop/ada.key"])
def test_a_name_that_no_file_can_have_is_a_sentence(tmp_path: Path, name: str) -> None:
    (tmp_path / "loop").symlink_to(tmp_path / "loop")
    with pytest.raises(FileNotWritten, match="could not be written"):
        key_file(tmp_path / name)


@pytest.mark.parametrize("fault", [OSError("no room"), KeyboardInterrupt()])
def test_stopped_on_the_way_nothing_is_left(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch, fault: BaseException
) -> None:
    def stop(*_: object) -> None:
        raise fault

    with monkeypatch.context() as patch:
        patch.setattr(os, "fsync", stop)
        with pytest.raises((FileNotWritten, KeyboardInterrupt)):
            key_file(tmp_path / "ada.key")
    assert list(tmp_path.iterdir()) == []


def test_the_passphrase_changes_and_the_key_stays(tmp_path: Path) -> None:
    path, copy = tmp_path / "ada.key", tmp_path / "copy.key"
    card = key_file(path)
    copy.write_bytes(path.read_bytes())
    before = json.loads(path.read_bytes())
    assert change_passphrase(path, PASSPHRASE, ANOTHER, cost=LOW_COST) == card
    after = json.loads(path.read_bytes())
    assert open_key(path, ANOTHER).card == card
    assert open_key(copy, PASSPHRASE).card == card  # a backup is a copy, and keeps its own passphrase
    with pytest.raises(KeyRefused, match="does not open"):
        open_key(path, PASSPHRASE)
    assert before["derivation"]["salt"] != after["derivation"]["salt"]
    assert before["cipher"]["nonce"] != after["cipher"]["nonce"]
    assert stat.S_IMODE(path.stat().st_mode) == 0o600


def test_a_wrong_passphrase_changes_nothing(tmp_path: Path) -> None:
    path = tmp_path / "ada.key"
    key_file(path)
    before = path.read_bytes()
    with pytest.raises(KeyRefused, match="does not open"):
        change_passphrase(path, ANOTHER, "a third one altogether", cost=LOW_COST)
    assert path.read_bytes() == before


def test_a_change_stopped_on_the_way_leaves_the_key_as_it_was(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    def stop(*_: object) -> None:
        raise OSError("no room")

    path = tmp_path / "ada.key"
    key_file(path)
    with monkeypatch.context() as patch:
        patch.setattr(os, "replace", stop)
        with pytest.raises(FileNotWritten):
            change_passphrase(path, PASSPHRASE, ANOTHER, cost=LOW_COST)
    assert open_key(path, PASSPHRASE)
    assert list(tmp_path.iterdir()) == [path]


OTHER_PUBLIC = key_of("somebody else").public


@pytest.mark.parametrize(
    "change",
    [
        lambda tree: tree.update(name="Dr Bo Wick"),
        lambda tree: tree.update(public=OTHER_PUBLIC),
        lambda tree: tree["derivation"].update(n=2 * LOW_COST),
        lambda tree: tree["derivation"].update(salt="A" * 22),
        lambda tree: tree["cipher"].update(nonce="A" * 16),
        lambda tree: tree.update(sealed="A" * 64),
    ],
)
def test_nothing_in_the_file_can_be_exchanged(tmp_path: Path, change: Callable[[dict[str, Any]], object]) -> None:
    path = tmp_path / "ada.key"
    key_file(path)
    with pytest.raises(KeyRefused, match="the file was changed"):
        open_key(spoilt(path, change), PASSPHRASE)


@pytest.mark.parametrize(
    ("change", "reason"),
    [
        (lambda tree: tree.update(format="clinicalc.key/2"), "clinicalc.key/1"),
        (lambda tree: tree.update(extra=1), '"extra" is not known'),
        (lambda tree: tree.pop("cipher"), '"cipher" is missing'),
        (lambda tree: tree["cipher"].update(name="none"), "aes-256-gcm"),
        (lambda tree: tree["derivation"].update(name="plain"), "scrypt"),
        (lambda tree: tree["derivation"].update(n=2**40), "at most"),
        (lambda tree: tree["derivation"].update(n=12345), "power of 2"),
        (lambda tree: tree["derivation"].update(n=2**20, r=32), "at most 4194304"),
        (lambda tree: tree["derivation"].update(n=1), "at least 2"),
        (lambda tree: tree["derivation"].update(r=True), "whole number"),
        (lambda tree: tree["derivation"].update(salt="A" * 21 + "B"), "cannot be followed"),
        (lambda tree: tree.update(public=encode_public((1).to_bytes(32, "little"))), "weak"),
        (lambda tree: tree.update(sealed="A" * 63), "/sealed"),
        (lambda tree: tree.update(name=""), "empty"),
    ],
)
def test_another_file_is_refused_with_the_reason(
    tmp_path: Path, change: Callable[[dict[str, Any]], object], reason: str
) -> None:
    path = tmp_path / "ada.key"
    key_file(path)
    with pytest.raises(KeyRefused) as refused:
        open_key(spoilt(path, change), PASSPHRASE)
    assert reason in str(refused.value)
    assert str(path) in str(refused.value)


@pytest.mark.parametrize("data", [b"", b"{}", b"\xff\xfe", b"[" * 9000, b" " * 10_001, b'{"format":1,"format":1}'])
def test_what_is_no_key_file_is_refused(tmp_path: Path, data: bytes) -> None:
    path = tmp_path / "ada.key"
    path.write_bytes(data)
    with pytest.raises(KeyRefused):
        read_card(path)


def test_a_missing_file_a_folder_and_a_pipe_are_refused(tmp_path: Path) -> None:
    os.mkfifo(tmp_path / "pipe")
    for name, reason in (("nothing", "no such file"), (".", "a key file"), ("pipe", "not a file")):
        with pytest.raises(KeyRefused, match=reason):
            open_key(tmp_path / name, PASSPHRASE)


def test_what_is_final_is_said() -> None:
    assert "cannot be recovered" in BEFORE_MAKING
    assert "copy" in BEFORE_MAKING
