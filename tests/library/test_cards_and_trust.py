"""Cards that are handed out, ids that are read aloud, and the publishers trusted on this machine."""

import json
import os
import stat
from datetime import UTC, datetime, timedelta
from pathlib import Path

import pytest

from clinicalc.errors import FileNotWritten, KeyRefused
from clinicalc.library.cards import compare_id, find_card, make_card, read_card_file, require_same_id, write_card
from clinicalc.library.keys import encode_public, group_key_id
from clinicalc.library.trust_store import FILE_NAME, TrustStore, read_trust, revoke_publisher, trust_publisher
from tests.library.keys_at_hand import key_file, key_of

KEY, OTHER = key_of("Tarnwick Press"), key_of("somebody else")
CARD = KEY.card
NOW = datetime(2026, 12, 1, 10, 0, 0, tzinfo=UTC)
LATER = NOW + timedelta(days=3)


@pytest.fixture
def settings(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> Path:
    """A settings folder of its own, not made yet."""
    folder = tmp_path / "settings"
    monkeypatch.setenv("CLINICALC_SETTINGS", os.fspath(folder))
    return folder


def other_digit(digit: str) -> str:
    """Another hexadecimal digit."""
    return "0" if digit != "0" else "1"


def test_a_card_is_written_and_read(tmp_path: Path) -> None:
    path = tmp_path / "card.json"
    write_card(path, CARD)
    assert read_card_file(path) == CARD == find_card(str(path), "")
    assert json.loads(path.read_bytes()) == {
        "format": "clinicalc.card/1",
        "name": "Tarnwick Press",
        "public": KEY.public,
    }
    with pytest.raises(KeyRefused, match="already"):
        write_card(path, OTHER.card)
    with pytest.raises(FileNotWritten):
        write_card(tmp_path / "nowhere" / "card.json", CARD)


def test_a_public_key_by_itself_needs_a_name() -> None:
    assert find_card(KEY.public, "Tarnwick Press") == CARD
    with pytest.raises(KeyRefused, match="--name"):
        find_card(KEY.public, "")


def test_a_card_may_be_known_here_by_another_name(tmp_path: Path) -> None:
    write_card(tmp_path / "card.json", CARD)
    assert find_card(str(tmp_path / "card.json"), "The Press").name == "The Press"


@pytest.mark.parametrize("text", ["", "card.json", KEY.public[:-1], KEY.public + "=", "x" * 5000, "a\0b"])
def test_what_is_neither_is_said(text: str) -> None:
    with pytest.raises(KeyRefused, match="neither a card's file nor a public key"):
        find_card(text, "Tarnwick Press")


def test_a_private_keys_file_is_no_card(tmp_path: Path) -> None:
    key_file(tmp_path / "ada.key")
    with pytest.raises(KeyRefused, match=r"clinicalc\.card/1"):
        find_card(str(tmp_path / "ada.key"), "")


def test_a_card_with_a_weak_key_or_a_disguised_name_is_refused() -> None:
    with pytest.raises(KeyRefused, match="weak"):
        make_card(encode_public((1).to_bytes(32, "little")), "Tarnwick Press")
    for name in ("", " ", "x" * 121, "Tarn\u202ewick", "Tarn\ud800"):
        with pytest.raises(KeyRefused, match="owner's name"):
            make_card(KEY.public, name)


@pytest.mark.parametrize("spell", [str, str.upper, group_key_id, lambda id: group_key_id(id).replace(" ", "-") + "\n"])
def test_an_id_may_be_typed_in_groups(spell: object) -> None:
    assert callable(spell)
    require_same_id(spell(CARD.id), CARD.id)


@pytest.mark.parametrize("place", [0, 1, 31, 62, 63])
def test_one_wrong_digit_is_refused_and_counted(place: int) -> None:
    typed = CARD.id[:place] + other_digit(CARD.id[place]) + CARD.id[place + 1 :]
    assert compare_id(typed, CARD.id).digits == place
    with pytest.raises(KeyRefused) as refused:
        require_same_id(typed, CARD.id)
    assert f": {place} of its 64 digits do" in str(refused.value)
    assert f"in group {place // 4 + 1}." in str(refused.value)
    assert CARD.id[place // 4 * 4 :][:4] not in str(refused.value)  # never what it should be


@pytest.mark.parametrize("count", [0, 4, 8, 16, 63])
def test_the_first_digits_alone_are_never_enough(count: int) -> None:
    with pytest.raises(KeyRefused, match=f"{count} of its 64 digits do.* of {count} typed"):
        require_same_id(CARD.id[:count], CARD.id)


def test_more_digits_than_there_are_are_refused() -> None:
    with pytest.raises(KeyRefused, match=r"64 of its 64 digits do.* of 65 typed"):
        require_same_id(CARD.id + "0", CARD.id)


def test_nobody_is_trusted_at_first(settings: Path) -> None:
    assert read_trust() == TrustStore()
    assert not settings.exists()


def test_a_publisher_is_trusted_and_revoked(settings: Path) -> None:
    trust_publisher(CARD, group_key_id(CARD.id), NOW)
    trust_publisher(OTHER.card, OTHER.id, LATER)
    store = read_trust()
    assert [(p.card, p.added, p.revoked) for p in store.publishers] == [(CARD, NOW, None), (OTHER.card, LATER, None)]
    assert store.find_key(KEY.id) == KEY.raw
    assert store.find_key("0" * 64) is None
    assert stat.S_IMODE((settings / FILE_NAME).stat().st_mode) == 0o600
    assert revoke_publisher(group_key_id(CARD.id)[:14], LATER).revoked == LATER
    store = read_trust()
    assert store.find_key(KEY.id) is None
    assert store.find_key(OTHER.id) == OTHER.raw
    found = store.find(KEY.id)
    assert found is not None
    assert found.revoked == LATER


def test_a_revoked_key_comes_back_only_when_it_is_said(settings: Path) -> None:
    trust_publisher(CARD, CARD.id, NOW)
    revoke_publisher(CARD.id, NOW)
    with pytest.raises(KeyRefused, match="was revoked here on 1 December 2026"):
        trust_publisher(CARD, CARD.id, LATER)
    with pytest.raises(KeyRefused, match="does not agree"):
        trust_publisher(CARD, OTHER.id, LATER, again=True)
    assert read_trust().find_key(KEY.id) is None
    trust_publisher(CARD, CARD.id, LATER, again=True)
    assert read_trust().find_key(KEY.id) == KEY.raw
    assert len(read_trust().publishers) == 1


def test_what_changes_nothing_is_said(settings: Path) -> None:
    trust_publisher(CARD, CARD.id, NOW)
    before = (settings / FILE_NAME).read_bytes()
    with pytest.raises(KeyRefused, match="trusted here already"):
        trust_publisher(CARD, CARD.id, LATER)
    for typed, reason in (("", "at least 8"), (CARD.id[:7], "at least 8"), (CARD.id + "0", "64 digits"),
                          (OTHER.id, "no key")):  # fmt: skip
        with pytest.raises(KeyRefused, match=reason):
            revoke_publisher(typed, LATER)
    assert (settings / FILE_NAME).read_bytes() == before
    revoke_publisher(CARD.id, NOW)
    with pytest.raises(KeyRefused, match="already"):
        revoke_publisher(CARD.id, NOW)


ENTRY = {"name": "Tarnwick Press", "public": KEY.public, "added": "2026-12-01T10:00:00Z", "revoked": None}


@pytest.mark.parametrize(
    "content",
    [
        "",
        "{",
        "[]",
        json.dumps({"format": "clinicalc.trust/2", "publishers": []}),
        json.dumps({"format": "clinicalc.trust/1", "publishers": [], "more": 1}),
        json.dumps({"format": "clinicalc.trust/1", "publishers": [ENTRY, ENTRY]}),
        json.dumps({"format": "clinicalc.trust/1", "publishers": [ENTRY | {"added": "2026-02-30T10:00:00Z"}]}),
        json.dumps({"format": "clinicalc.trust/1", "publishers": [ENTRY | {"public": "A" * 43}]}),
        json.dumps({"format": "clinicalc.trust/1", "publishers": [{"name": "x", "public": KEY.public, "added": 1}]}),
        '{"format": "clinicalc.trust/1", "publishers": [], "publishers": []}',
    ],
)
def test_a_spoilt_list_trusts_nobody_and_is_not_written_over(settings: Path, content: str) -> None:
    settings.mkdir()
    (settings / FILE_NAME).write_text(content, encoding="utf-8")
    for use in (
        read_trust,
        lambda: trust_publisher(OTHER.card, OTHER.id, NOW),
        lambda: revoke_publisher(CARD.id, NOW),
    ):
        with pytest.raises(KeyRefused):
            use()
    assert (settings / FILE_NAME).read_text(encoding="utf-8") == content


def test_a_stop_on_the_way_leaves_the_list_as_it_was(settings: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    def stop(*_: object) -> None:
        raise OSError("no room")

    trust_publisher(CARD, CARD.id, NOW)
    with monkeypatch.context() as patch:
        patch.setattr(os, "replace", stop)
        with pytest.raises(FileNotWritten, match="could not be written"):
            trust_publisher(OTHER.card, OTHER.id, NOW)
    assert [p.card for p in read_trust().publishers] == [CARD]
    assert [path.name for path in settings.iterdir()] == [FILE_NAME]
