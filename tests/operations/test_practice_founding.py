"""First run and trust: what is founded, joined and trusted, and what is said where it cannot be."""

from pathlib import Path

import pytest

from clinicalc.errors import ClinicalcError, FileNotWritten, KeyRefused, LibraryError, UsageError
from clinicalc.library.cards import write_card
from clinicalc.library.keys import group_key_id
from clinicalc.library.records import Approver
from clinicalc.operations import joining_steps, practice_founding
from clinicalc.operations.course import Course
from clinicalc.settings import FILE_NAME, read_settings, settings_folder
from tests.library.keys_at_hand import PASSPHRASE
from tests.operations.practice_kit import NOON, PEOPLE, WRONG, Room, empty_room

NORTHGATE = PEOPLE["practice"]


@pytest.fixture
def bare(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> Room:
    """Keys and cards, and no library yet."""
    return empty_room(tmp_path, monkeypatch)


def ada(room: Room) -> Approver:
    """The first approver."""
    return practice_founding.approver_of(room.card_file("ada"), "GP partner")


def test_a_library_is_founded_and_used_here(bare: Room) -> None:
    founded = practice_founding.found(
        bare.place, f" {NORTHGATE} ", bare.signer("practice"), (ada(bare),), moment=bare.clock()
    )
    card = practice_founding.look_at_key(bare.key("practice"))
    assert (founded.place, founded.practice, founded.practice_key) == (bare.place, NORTHGATE, card.id)
    view = bare.desk.read(Course())
    assert (view.practice, view.practice_key, view.rows) == (NORTHGATE, card.id, ())
    assert practice_founding.look_at_library(bare.place) == NORTHGATE


def test_what_needs_no_passphrase_is_refused_first(bare: Room) -> None:
    full = bare.folder / "full"
    full.mkdir()
    (full / "a letter.txt").write_text("Dear all")
    practice = practice_founding.approver_of(bare.card_file("practice"), "GP partner")
    signer = bare.signer("practice", WRONG)
    for place, name, people, why in (
        (full, NORTHGATE, (), "it holds 1 other thing"),
        (bare.folder / "no" / "such" / "folder", NORTHGATE, (), "no"),
        (bare.place, " ", (), "the practice is empty"),
        (bare.place, NORTHGATE, (practice,), "cannot be an approver’s as well"),
        (bare.place, NORTHGATE, (ada(bare), ada(bare)), "one key is given for two approvers"),
    ):
        with pytest.raises(ClinicalcError, match=why) as refused:
            practice_founding.found(place, name, signer, people)
        assert "passphrase" not in refused.value.what
        with pytest.raises(ClinicalcError, match=why):
            practice_founding.check_founding(place, name, signer.key_file, people)
    assert not bare.place.exists()
    assert [path.name for path in full.iterdir()] == ["a letter.txt"]
    with pytest.raises(KeyRefused, match="passphrase does not open"):
        practice_founding.found(bare.place, NORTHGATE, signer)
    assert not bare.place.exists()


def test_a_library_that_stands_though_the_settings_could_not_be_written_says_how_to_join(bare: Room) -> None:
    settings = bare.folder / "settings"
    settings.mkdir(exist_ok=True)
    (settings / FILE_NAME).symlink_to(bare.folder / "a disk that is not connected" / FILE_NAME)
    with pytest.raises(FileNotWritten) as refused:
        practice_founding.found(bare.place, NORTHGATE, bare.signer("practice"), (ada(bare),), moment=NOON)
    said = str(refused.value)
    card = practice_founding.look_at_key(bare.key("practice"))
    assert "the library was founded and stands, but this machine does not use it yet" in said
    assert str(bare.place) in said
    assert "Do not found it again" in said
    assert "clinicalc library join PLACE --practice-key-id DIGITS" in said
    # the digits are read off the key's own file, not off this sentence
    assert card.id not in said
    assert group_key_id(card.id) not in said
    (settings / FILE_NAME).unlink()
    assert practice_founding.join(bare.place, group_key_id(card.id), moment=NOON) == NORTHGATE
    assert [approver.name for approver in bare.desk.read(Course()).approvers] == [PEOPLE["ada"]]


@pytest.mark.parametrize("line", ["level = 95", "library = ", "printer = 2"], ids=["a slip", "no TOML", "unknown"])
def test_settings_with_something_that_cannot_be_taken_keep_every_hand_edit(room: Room, line: str) -> None:
    path = settings_folder() / FILE_NAME
    edited = f"# read by R. Osei\n{line}\n"
    path.write_text(edited, encoding="utf-8")
    said = group_key_id(practice_founding.look_at_key(room.card_file("practice")).id)
    place, signer = room.folder / "second", room.signer("practice", "a passphrase that is not tried")
    for deed in (
        lambda: practice_founding.join(room.place, said),
        lambda: practice_founding.check_founding(place, NORTHGATE, signer.key_file),
        lambda: practice_founding.found(place, NORTHGATE, signer),
        lambda: joining_steps.look_at_library(room.place),
    ):
        with pytest.raises(FileNotWritten, match=r"settings\.toml, line 2: .*Nothing was changed\."):
            deed()
    assert not place.exists()
    assert path.read_text(encoding="utf-8") == edited
    assert [one.name for one in path.parent.iterdir() if one.name.startswith("settings")] == [FILE_NAME]


def test_joining_changes_its_own_lines_of_the_settings_and_no_other(room: Room) -> None:
    said = group_key_id(practice_founding.look_at_key(room.card_file("practice")).id)
    path = settings_folder() / FILE_NAME
    path.write_text("# ours\nlevel = 0.9  # agreed in March\n", encoding="utf-8")
    practice_founding.join(room.place, said)
    assert path.read_text(encoding="utf-8").startswith("# ours\nlevel = 0.9  # agreed in March\n")
    assert read_settings().settings.library == str(room.place)
    assert read_settings().settings.level == 0.9


def test_another_machine_joins_by_the_digits_that_were_read_aloud(room: Room, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setenv("CLINICALC_SETTINGS", str(room.folder / "another machine"))
    card = practice_founding.look_at_key(room.card_file("practice"))
    with pytest.raises(UsageError, match="no id of a key is given"):
        practice_founding.join(room.place, " ")
    wrong = card.id[:-1] + ("0" if card.id[-1] != "0" else "1")
    with pytest.raises(KeyRefused, match="63 of its 64 digits agree") as refused:
        practice_founding.join(room.place, wrong)
    assert card.id[-8:] not in str(refused.value)
    assert read_settings().settings.library == ""
    assert practice_founding.join(room.place, group_key_id(card.id).upper(), moment=NOON) == NORTHGATE
    assert room.desk.read(Course()).practice == NORTHGATE


def test_a_folder_that_is_no_library_has_no_practice(bare: Room) -> None:
    with pytest.raises(LibraryError, match="no library here"):
        practice_founding.look_at_library(bare.folder)


def test_a_publisher_is_trusted_and_revoked(bare: Room) -> None:
    card = practice_founding.look_at_key(bare.card_file("press"))
    with pytest.raises(KeyRefused, match="the id does not agree"):
        practice_founding.trust_publisher(bare.card_file("press"), "0" * 64)
    practice_founding.trust_publisher(bare.card_file("press"), group_key_id(card.id))
    assert [publisher.card for publisher in practice_founding.publishers()] == [card]
    practice_founding.revoke_publisher(card.id)
    (publisher,) = practice_founding.publishers()
    assert publisher.revoked is not None
    with pytest.raises(KeyRefused, match="was revoked here"):
        practice_founding.trust_publisher(bare.card_file("press"), card.id)
    assert practice_founding.trust_publisher(bare.card_file("press"), card.id, again=True).revoked is None


def test_no_key_is_made_in_a_library_or_over_another_file(room: Room) -> None:
    for path, why in ((room.place / "mine.key", "inside a library"), (room.key("ada"), "of this name already")):
        with pytest.raises(KeyRefused, match=why):
            practice_founding.make_key(path, "Dr Ben Wick", PASSPHRASE)


def test_a_key_that_is_made_opens_with_its_own_passphrase_only(bare: Room) -> None:
    path = bare.folder / "ben.key"
    card = practice_founding.make_key(path, "Dr Ben Wick", PASSPHRASE)
    assert practice_founding.look_at_key(path) == card
    write_card(bare.folder / "ben-card.json", card)
    assert practice_founding.look_at_key(bare.folder / "ben-card.json") == card
    with pytest.raises(KeyRefused, match="passphrase does not open"):
        practice_founding.change_passphrase(path, WRONG, "a third passphrase of words")
    practice_founding.change_passphrase(path, PASSPHRASE, WRONG)
    with pytest.raises(KeyRefused, match="passphrase does not open"):
        practice_founding.change_passphrase(path, PASSPHRASE, WRONG)
