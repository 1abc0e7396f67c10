"""Publishers trusted and revoked, passphrases changed, keys made with their cards: by keyboard, with real files."""

from pathlib import Path

import pytest
from PySide6.QtCore import Qt
from PySide6.QtWidgets import QApplication, QLabel, QPushButton

from clinicalc.coefficients.fingerprint import group_fingerprint
from clinicalc.errors import KeyRefused
from clinicalc.gui.practice.change_passphrase_form import ChangePassphraseForm
from clinicalc.gui.practice.key_plate import KeyPlate
from clinicalc.gui.practice.make_key_form import MakeKeyForm
from clinicalc.gui.practice.publisher_forms import RevokePublisherForm, TrustPublisherForm
from clinicalc.gui.practice.publishers_form import PublishersForm
from clinicalc.gui.practice.sheet_page import SheetPage
from clinicalc.library.cards import read_card_file, write_card
from clinicalc.library.key_files import open_key, read_card
from clinicalc.library.trust_store import read_trust
from tests.gui.practice.desks import PASSPHRASE, Person, at, refusal_in, tree_of
from tests.library.keys_at_hand import PASSPHRASE as FOUR_WORDS
from tests.library.keys_at_hand import key_file, key_of

DESK = "Tarnwick research desk"


@pytest.fixture
def card(tmp_path: Path) -> Path:
    """A publisher's card, as it was handed out."""
    path = tmp_path / "desk.card.json"
    write_card(path, key_of(DESK).card)
    return path


@pytest.fixture
def said() -> str:
    return group_fingerprint(key_of(DESK).id)


def open_list(person: Person) -> PublishersForm:
    form = PublishersForm(person.errands, person.choose)
    person.show(form)
    form.focus_first()
    person.rest()
    return form


def trust(person: Person, form: PublishersForm, card: Path, said: str) -> None:
    at(form, SheetPage)
    at(form, SheetPage).focus_first()
    person.press(Qt.Key.Key_Return)
    at(form, TrustPublisherForm)
    person.type(str(card), said)


def words_in(form: PublishersForm) -> str:
    return "\n".join(label.text() for label in form.findChildren(QLabel) if label.isVisible())


def test_a_publisher_is_trusted_listed_revoked_and_trusted_again(person: Person, card: Path, said: str) -> None:
    form = open_list(person)
    assert "No publisher is trusted on this machine yet." in words_in(form)
    trust(person, form, card, said)
    at(form, SheetPage)
    assert DESK in words_in(form)
    assert said in words_in(form)
    (trusted,) = read_trust().publishers
    assert trusted.card == key_of(DESK).card
    (revoke,) = [b for b in form.findChildren(QPushButton) if b.isVisible() and "Revoke" in b.text()]
    revoke.setFocus()
    person.press(Qt.Key.Key_Return)
    at(form, RevokePublisherForm)
    at(form, RevokePublisherForm).form.deed.setFocus()
    person.press(Qt.Key.Key_Return)
    assert "its signatures do not count here" in words_in(form)
    assert read_trust().find_key(trusted.card.id) is None
    trust(person, form, card, said)
    at(form, TrustPublisherForm)
    assert "was revoked here" in refusal_in(form)
    assert read_trust().find_key(trusted.card.id) is None
    person.press(Qt.Key.Key_Y)
    at(form, TrustPublisherForm).form.deed.setFocus()
    person.press(Qt.Key.Key_Return)
    at(form, SheetPage)
    assert read_trust().find_key(trusted.card.id) is not None


def test_a_card_proves_nothing_until_its_id_was_heard(person: Person, card: Path, said: str) -> None:
    form = open_list(person)
    trust(person, form, card, f"{said[:-4]}{'0000' if said[-4:] != '0000' else '1111'}")
    page = at(form, TrustPublisherForm)
    assert "The 16th group differs." in refusal_in(form)
    assert page.name.text() == f"It calls itself “{DESK}”."
    assert "Nothing of it is proved" in page.unproved.text()
    assert read_trust().publishers == ()
    page.said.edit.setText(said)
    assert page.name.text() == DESK
    person.press(Qt.Key.Key_Escape)
    at(form, SheetPage)
    with person.qtbot.waitSignal(form.left):
        person.press(Qt.Key.Key_Escape)


def test_what_is_no_card_is_said_at_its_field(person: Person, tmp_path: Path) -> None:
    key_file(tmp_path / "osei.key")
    form = open_list(person)
    person.press(Qt.Key.Key_Return)
    page = at(form, TrustPublisherForm)
    person.type(str(tmp_path / "osei.key"))
    assert QApplication.focusWidget() is page.card.edit
    assert "this is not a key's card that can be used" in refusal_in(form)


def change(person: Person, *lines: str) -> ChangePassphraseForm:
    form = ChangePassphraseForm(person.errands, person.choose)
    person.show(form)
    form.focus_first()
    person.type(*lines)
    return form


def test_a_passphrase_is_changed(person: Person, tmp_path: Path) -> None:
    key = tmp_path / "osei.key"
    made = key_file(key, "R. Osei")
    done: list[object] = []
    form = ChangePassphraseForm(person.errands, person.choose)
    form.done.connect(done.append)
    person.show(form)
    form.focus_first()
    person.type(str(key), FOUR_WORDS, "five other words nobody guesses", "five other words nobody guesses")
    assert done == [None]
    assert open_key(key, "five other words nobody guesses").id == made.id
    with pytest.raises(KeyRefused):
        open_key(key, FOUR_WORDS)
    assert form.new.secret == form.old.secret == form.again.secret == ""


@pytest.mark.parametrize(
    ("old", "new", "again", "said", "field"),
    [
        ("", "five other words nobody guesses", "five other words nobody guesses", "so far is missing", "old"),
        ("not the passphrase", "five other words nobody", "five other words nobody", "does not open this key", "old"),
        (FOUR_WORDS, "short", "short", "it needs at least 12", "new"),
        (FOUR_WORDS, "five other words nobody", "five other words nobodi", "the two new passphrases differ", "new"),
    ],
)
def test_a_passphrase_that_will_not_do_leaves_the_key_as_it_is(
    person: Person, tmp_path: Path, old: str, new: str, again: str, said: str, field: str
) -> None:
    key_file(tmp_path / "osei.key")
    before = tree_of(tmp_path)
    form = change(person, str(tmp_path / "osei.key"), old, new, again)
    assert said in refusal_in(form) or said.capitalize() in refusal_in(form)
    assert QApplication.focusWidget() is getattr(form, field).edit
    assert tree_of(tmp_path) == before
    assert form.new.secret == form.old.secret == form.again.secret == ""


def test_a_key_is_made_with_its_card_and_its_id_is_shown(person: Person, tmp_path: Path) -> None:
    key, card = tmp_path / "wick.key", tmp_path / "wick.card.json"
    form = MakeKeyForm(person.errands, person.choose)
    done: list[object] = []
    form.done.connect(done.append)
    person.show(form)
    form.focus_first()
    person.type("Dr Ben Wick", str(key), PASSPHRASE, PASSPHRASE, str(card))
    assert form.shown is not None, refusal_in(form)
    made = read_card(key)
    assert read_card_file(card) == made
    (plate,) = form.shown.findChildren(KeyPlate)
    assert [label.text() for label in plate.findChildren(QLabel)][1:] == group_fingerprint(made.id).split(" ")
    assert open_key(key, PASSPHRASE).name == "Dr Ben Wick"
    person.press(Qt.Key.Key_Return)
    assert done == [None]


def test_the_card_of_a_key_that_is_there_needs_no_passphrase(person: Person, tmp_path: Path) -> None:
    key, card = tmp_path / "wick.key", tmp_path / "wick.card.json"
    made = key_file(key, "Dr Ben Wick")
    form = MakeKeyForm(person.errands, person.choose)
    person.show(form)
    form.focus_first()
    person.type("", str(key))
    assert form.name.text == "Dr Ben Wick"
    form.card.edit.setFocus()
    person.type(str(card))
    assert form.shown is not None, refusal_in(form)
    assert read_card_file(card) == made


def test_a_passphrase_that_is_not_needed_any_more_is_not_kept_out_of_sight(person: Person, tmp_path: Path) -> None:
    key_file(tmp_path / "wick.key", "Dr Ben Wick")
    form = MakeKeyForm(person.errands, person.choose)
    person.show(form)
    form.key.secret.edit.setText(PASSPHRASE)
    form.key.again.edit.setText(PASSPHRASE)
    form.focus_first()
    person.type("", str(tmp_path / "wick.key"))
    assert not form.key.secret.isVisible()
    assert form.key.secret.secret == form.key.again.secret == ""


def test_a_card_is_never_put_over_another_file(person: Person, tmp_path: Path) -> None:
    (tmp_path / "letter.txt").write_text("Dear colleague")
    form = MakeKeyForm(person.errands, person.choose)
    person.show(form)
    form.focus_first()
    person.type("Dr Ben Wick", str(tmp_path / "wick.key"), PASSPHRASE, PASSPHRASE, str(tmp_path / "letter.txt"))
    assert "there is a file of this name already" in refusal_in(form)
    assert not (tmp_path / "wick.key").exists()
    assert (tmp_path / "letter.txt").read_text() == "Dear colleague"
