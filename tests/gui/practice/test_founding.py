"""An empty machine is led to a library of its own, by keyboard; each step left, refused and taken up again."""

import os
from collections.abc import Callable
from pathlib import Path

import pytest
from PySide6.QtCore import Qt
from PySide6.QtWidgets import QApplication, QLabel

from clinicalc.coefficients.fingerprint import group_fingerprint
from clinicalc.errors import KeyRefused
from clinicalc.gui.practice.first_file_page import FirstFilePage
from clinicalc.gui.practice.first_run import FirstRun
from clinicalc.gui.practice.founded_page import FoundedPage
from clinicalc.gui.practice.own_key_form import OwnKeyForm
from clinicalc.gui.practice.place_form import PlaceForm
from clinicalc.gui.practice.practice_key_form import PracticeKeyForm
from clinicalc.gui.practice.rule_form import RuleForm
from clinicalc.gui.practice.start_page import StartPage
from clinicalc.gui.practice.steps_page import StepsPage
from clinicalc.library.key_files import open_key, read_card
from clinicalc.library.machine import this_machine
from clinicalc.library.opening import open_library
from clinicalc.operations.library_reading import now
from clinicalc.settings import Settings, read_settings, write_settings
from tests.gui.practice.desks import PASSPHRASE, Person, at, refusal_in, tree_of


@pytest.fixture
def stick(tmp_path: Path) -> Path:
    folder = tmp_path / "stick"
    folder.mkdir()
    return folder


@pytest.fixture
def share(tmp_path: Path) -> Path:
    folder = tmp_path / "share"
    folder.mkdir()
    return folder


def settle_place(person: Person, place: Path, practice: str = "Tarnwick Northgate") -> FirstRun:
    """As far as the second step."""
    run = person.sit_down()
    person.press(Qt.Key.Key_Return)
    at(run, PlaceForm)
    person.type(practice, str(place))
    at(run, OwnKeyForm)
    return run


def settle_three(person: Person, share: Path, stick: Path, rule: Qt.Key = Qt.Key.Key_S) -> FirstRun:
    """As far as the practice key."""
    run = settle_place(person, share / "models")
    person.type("R. Osei", "partner", str(stick / "osei.key"), PASSPHRASE, PASSPHRASE)
    at(run, RuleForm)
    person.press(rule)
    person.press(Qt.Key.Key_Return)
    at(run, PracticeKeyForm)
    return run


def test_the_whole_way_by_keyboard(person: Person, share: Path, stick: Path) -> None:
    run = settle_three(person, share, stick)
    with person.qtbot.waitSignal(run.founded, timeout=20_000):
        person.type(str(stick / "practice.key"), PASSPHRASE, PASSPHRASE)
    at(run, FoundedPage)
    opened = open_library(this_machine(), now())
    assert opened.authority.practice == "Tarnwick Northgate"
    assert [(one.name, one.role) for one in opened.authority.approvers] == [("R. Osei", "partner")]
    assert opened.authority.approvers[0].key == read_card(stick / "osei.key").public
    assert not opened.faults
    key = open_key(stick / "practice.key", PASSPHRASE)
    assert opened.authority.practice_key == key.id == read_settings().settings.practice_key
    shown = [label.text() for label in at(run, FoundedPage).plate.findChildren(QLabel)]
    assert shown[1:] == group_fingerprint(key.id).split(" ")
    assert read_settings().settings.practice == "Tarnwick Northgate"
    person.press(Qt.Key.Key_Return)
    at(run, FirstFilePage)


@pytest.mark.parametrize(("letter", "may"), [(Qt.Key.Key_S, False), (Qt.Key.Key_T, True)])
def test_the_rule_has_no_answer_at_first_and_is_signed_as_chosen(
    person: Person, share: Path, stick: Path, letter: Qt.Key, may: bool
) -> None:
    run = settle_place(person, share / "models")
    person.type("R. Osei", "partner", str(stick / "osei.key"), PASSPHRASE, PASSPHRASE)
    at(run, RuleForm)
    assert at(run, RuleForm).rule.answer is None
    person.press(Qt.Key.Key_Return)
    assert refusal_in(run).startswith("Nothing is chosen.")
    person.press(letter)
    person.press(Qt.Key.Key_Return)
    person.type(str(stick / "practice.key"), PASSPHRASE, PASSPHRASE)
    at(run, FoundedPage)
    assert open_library(this_machine(), now()).authority.policy.author_may_approve is may


def test_a_name_for_prints_that_is_there_stays(person: Person, share: Path, stick: Path) -> None:
    write_settings(Settings(practice="Tarnwick Northgate, upstairs"))
    run = person.sit_down()
    person.press(Qt.Key.Key_Return)
    at(run, PlaceForm)
    assert at(run, PlaceForm).practice.text == "Tarnwick Northgate, upstairs"
    at(run, PlaceForm).practice.edit.selectAll()
    person.type("Tarnwick Northgate", str(share / "models"))
    person.type("R. Osei", "partner", str(stick / "osei.key"), PASSPHRASE, PASSPHRASE)
    person.press(Qt.Key.Key_Right)
    person.press(Qt.Key.Key_Return)
    person.type(str(stick / "practice.key"), PASSPHRASE, PASSPHRASE)
    at(run, FoundedPage)
    assert read_settings().settings.practice == "Tarnwick Northgate, upstairs"


@pytest.mark.parametrize(
    ("make", "said"),
    [
        (lambda place: (place.mkdir(), (place / "letter.txt").write_text("x")), "the folder is not empty"),
        (lambda place: place.write_text("x"), "This is not a folder"),
        (lambda place: None, ""),
    ],
)
def test_a_folder_is_looked_at_before_any_passphrase(
    person: Person, share: Path, make: Callable[[Path], object], said: str
) -> None:
    place = share / "models"
    make(place)
    before = tree_of(share)
    run = person.sit_down()
    person.press(Qt.Key.Key_Return)
    person.type("Tarnwick Northgate", str(place))
    assert tree_of(share) == before
    if said:
        at(run, PlaceForm)
        assert said in refusal_in(run)
        assert QApplication.focusWidget() is at(run, PlaceForm).place.edit
        assert at(run, PlaceForm).practice.text == "Tarnwick Northgate"
    else:
        at(run, OwnKeyForm)


def test_a_folder_that_is_not_there_is_named(person: Person, share: Path) -> None:
    run = person.sit_down()
    person.press(Qt.Key.Key_Return)
    person.type("Tarnwick Northgate", str(share / "no" / "models"))
    assert refusal_in(run).startswith(f"The folder {share / 'no'} is not there")
    assert not (share / "no").exists()


@pytest.mark.skipif(os.geteuid() == 0, reason="root may write everywhere")
def test_a_folder_without_the_right_to_write_is_refused(person: Person, share: Path) -> None:
    share.chmod(0o500)
    run = person.sit_down()
    person.press(Qt.Key.Key_Return)
    person.type("Tarnwick Northgate", str(share / "models"))
    assert "You may not do this there" in refusal_in(run)


@pytest.mark.skipif(not Path("/sys/kernel").is_dir(), reason="a folder in which not even root may make one")
def test_a_place_where_nothing_can_be_made_is_refused(person: Person) -> None:
    run = person.sit_down()
    person.press(Qt.Key.Key_Return)
    person.type("Tarnwick Northgate", "/sys/kernel/models")
    at(run, PlaceForm)
    assert "no library can be made here" in refusal_in(run)


def test_passphrases_that_differ_or_are_short_are_forgotten_and_nothing_else(
    person: Person, share: Path, stick: Path
) -> None:
    run = settle_place(person, share / "models")
    page = at(run, OwnKeyForm)
    person.type("R. Osei", "partner", str(stick / "osei.key"), "too short", "too short")
    assert refusal_in(run).startswith("The passphrase has 9 characters; it needs at least 12.")
    assert QApplication.focusWidget() is page.key.secret.edit
    person.type(PASSPHRASE, PASSPHRASE + "!")
    assert refusal_in(run).startswith("The two passphrases differ.")
    assert (page.key.secret.secret, page.key.again.secret) == ("", "")
    assert (page.name.text, page.role.text) == ("R. Osei", "partner")
    assert page.key.place.path() == stick / "osei.key"
    assert tree_of(stick) == {}


def test_a_key_is_never_put_into_the_library_or_over_another_file(person: Person, share: Path, stick: Path) -> None:
    (stick / "letter.txt").write_text("Dear colleague")
    run = settle_place(person, share / "models")
    person.type("R. Osei", "partner", str(share / "models" / "osei.key"))
    assert "never kept inside a library’s folder" in refusal_in(run)
    page = at(run, OwnKeyForm)
    page.key.place.edit.selectAll()
    person.type(str(stick / "letter.txt"))
    assert "not" in refusal_in(run)
    assert QApplication.focusWidget() is page.key.place.edit
    assert (stick / "letter.txt").read_text() == "Dear colleague"


def test_a_founding_that_was_left_after_a_key_was_made_goes_on_with_its_file(
    person: Person, share: Path, stick: Path
) -> None:
    first = settle_three(person, share, stick)
    first.close()
    made = tree_of(stick)
    assert list(made) == ["osei.key"]
    assert tree_of(share) == {}
    run = settle_place(person, share / "models")
    page = at(run, OwnKeyForm)
    person.press(Qt.Key.Key_Tab)
    person.type("partner", str(stick / "osei.key"))
    assert page.key.says.text().startswith("The key of R. Osei,")
    assert not page.key.secret.isVisible()
    assert page.name.text == "R. Osei"
    assert QApplication.focusWidget() is page.form.deed
    person.press(Qt.Key.Key_Return)
    at(run, RuleForm)
    assert tree_of(stick) == made


def test_a_practice_key_whose_founding_failed_is_used_at_the_next_try(person: Person, share: Path, stick: Path) -> None:
    run = settle_three(person, share, stick)
    (share / "models").mkdir()
    (share / "models" / "somebody.txt").write_text("was quicker")
    person.type(str(stick / "practice.key"), PASSPHRASE, PASSPHRASE)
    assert "the folder is not empty" in refusal_in(run)
    assert not (stick / "practice.key").exists()
    (share / "models" / "somebody.txt").unlink()
    page = at(run, PracticeKeyForm)
    page.key.secret.edit.setFocus()
    person.type(PASSPHRASE, PASSPHRASE)
    at(run, FoundedPage)


def test_a_practice_key_that_is_there_needs_its_passphrase_once(person: Person, share: Path, stick: Path) -> None:
    from clinicalc.library.key_files import make_key

    card = make_key(stick / "practice.key", "Tarnwick Northgate", PASSPHRASE, cost=2**4)
    before = tree_of(stick)
    run = settle_three(person, share, stick)
    page = at(run, PracticeKeyForm)
    person.type(str(stick / "practice.key"))
    assert not page.key.again.isVisible()
    page.key.secret.edit.setFocus()
    person.type("another passphrase entirely")
    assert "does not open this key" in refusal_in(run)
    assert QApplication.focusWidget() is page.key.secret.edit
    assert not (share / "models").exists()
    person.type(PASSPHRASE)
    at(run, FoundedPage)
    assert read_settings().settings.practice_key == card.id
    assert tree_of(stick)["practice.key"] == before["practice.key"]


def test_a_persons_key_cannot_be_the_practice_key(person: Person, share: Path, stick: Path) -> None:
    run = settle_three(person, share, stick)
    person.type(str(stick / "osei.key"))
    page = at(run, PracticeKeyForm)
    page.key.secret.edit.setFocus()
    person.type(PASSPHRASE)
    assert "keys of approvers belong to persons" in refusal_in(run)
    assert tree_of(share) == {}


def test_a_step_is_left_with_escape_and_its_state_stands_in_the_list(person: Person, share: Path, stick: Path) -> None:
    run = settle_three(person, share, stick)
    person.press(Qt.Key.Key_Escape)
    at(run, StepsPage)
    place, own, rule, last = at(run, StepsPage).states
    assert place == f"Tarnwick Northgate, in {share / 'models'}"
    assert own.startswith("R. Osei (partner), key ")
    assert rule == "Somebody else than who made or brought a file must approve it"
    assert last == ""
    assert QApplication.focusWidget() is at(run, StepsPage).buttons[3]
    person.press(Qt.Key.Key_Escape)
    at(run, StartPage)
    person.press(Qt.Key.Key_Return)
    at(run, StepsPage)


def test_what_was_typed_is_there_when_the_page_is_shown_again(person: Person, share: Path) -> None:
    run = settle_place(person, share / "models")
    page = at(run, OwnKeyForm)
    person.type("R. Osei")
    run.begin()
    assert run.page is page
    assert page.name.text == "R. Osei"
    page.key.secret.edit.setText(PASSPHRASE)
    run.forget()
    assert page.key.secret.secret == ""


def test_what_is_said_before_the_practice_key_is_made(person: Person, share: Path, stick: Path) -> None:
    run = settle_three(person, share, stick)
    said = " ".join(label.text() for label in run.findChildren(QLabel) if label.isVisible())
    assert "A lost passphrase is final" in said
    assert "safe" in said
    with pytest.raises(KeyRefused):
        read_card(stick / "practice.key")
