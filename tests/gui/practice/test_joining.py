"""Further machines: joining a share, bringing in a bundle, a first file; whose the library is has to be heard."""

from collections.abc import Callable
from pathlib import Path

import pytest
from PySide6.QtCore import Qt
from PySide6.QtWidgets import QApplication, QLabel, QWidget

from clinicalc.coefficients.fingerprint import group_fingerprint
from clinicalc.gui.practice.bundle_form import BundleForm
from clinicalc.gui.practice.first_file_page import FirstFilePage
from clinicalc.gui.practice.first_run import FirstRun
from clinicalc.gui.practice.join_form import JoinForm
from clinicalc.gui.practice.start_page import StartPage
from clinicalc.library.carrying import export_library
from clinicalc.library.folder import LibraryFolder
from clinicalc.library.machine import this_machine
from clinicalc.library.opening import open_library
from clinicalc.operations.course import Course
from clinicalc.operations.library_reading import now
from clinicalc.operations.shipped_models import list_shipped_models
from clinicalc.settings import Settings, read_settings, write_settings
from tests.gui.practice.desks import Person, at, buttons_in, refusal_in, tree_of
from tests.library.machines import Shelf, make_shelf


@pytest.fixture
def shelf(tmp_path: Path) -> Shelf:
    """A library on a share, founded elsewhere, with one file in it."""
    return make_shelf(tmp_path / "share")


@pytest.fixture
def said(shelf: Shelf) -> str:
    """The id as it is read aloud."""
    return group_fingerprint(shelf.practice.key.id)


def go_to_join(person: Person) -> tuple[FirstRun, JoinForm]:
    run = person.sit_down()
    person.press(Qt.Key.Key_Tab)
    person.press(Qt.Key.Key_Return)
    return run, at(run, JoinForm)


def words_in(widget: QWidget) -> str:
    return "\n".join(label.text() for label in widget.findChildren(QLabel) if label.isVisible())


def test_a_share_is_joined_by_keyboard(person: Person, shelf: Shelf, said: str) -> None:
    before = tree_of(shelf.place)
    run, form = go_to_join(person)
    person.type(str(shelf.place))
    practice = open_practice(shelf)
    assert form.practice.text() == f"It calls itself “{practice}”, 1 coefficient file."
    assert "Nothing of it is proved until all 64 digits agree" in form.unproved.text()
    with person.qtbot.waitSignal(run.founded, timeout=20_000):
        person.type(said)
    assert read_settings().settings.practice_key == shelf.practice.key.id
    assert Path(read_settings().settings.library) == shelf.place
    assert read_settings().settings.practice == practice
    assert open_library(this_machine(), now()).authority.practice == practice
    assert tree_of(shelf.place) == before


def open_practice(shelf: Shelf) -> str:
    from clinicalc.library.founding import read_founding

    return read_founding(shelf.place).practice


def test_the_verdict_runs_along_by_groups_and_shows_no_digit(person: Person, shelf: Shelf, said: str) -> None:
    _, form = go_to_join(person)
    person.type(str(shelf.place))
    groups = said.split(" ")
    edit = form.said.edit
    edit.setText(groups[0][:3])
    assert form.said.verdict.text() == "0 of 16 groups so far."
    edit.setText(groups[0])
    assert form.said.verdict.text() == "1 of 16 groups agrees so far."
    wrong = "0000" if groups[4] != "0000" else "1111"
    edit.setText("".join(groups[:4]) + wrong[:3])
    assert form.said.verdict.text() == "4 of 16 groups agree so far."
    edit.setText(" ".join([*groups[:4], wrong, *groups[5:]]))
    assert form.said.verdict.text() == "The 5th group differs. Have it read aloud again."
    assert not form.said.is_whole
    shown = words_in(form)
    assert all(group not in shown for group in groups)
    edit.setText(said.upper().replace(" ", "-"))
    assert form.said.verdict.text() == "All 64 digits agree."
    assert form.practice.text().startswith("The library of ")


def test_an_id_that_differs_in_its_fifth_group_changes_nothing(person: Person, shelf: Shelf, said: str) -> None:
    groups = said.split(" ")
    groups[4] = "0000" if groups[4] != "0000" else "1111"
    run, form = go_to_join(person)
    person.type(str(shelf.place), " ".join(groups))
    assert refusal_in(run) == (
        "The id does not agree. The 5th group differs. Have it read aloud again. Nothing was changed."
    )
    assert QApplication.focusWidget() is form.said.edit
    assert form.said.field.text == " ".join(groups)
    assert read_settings().settings == Settings()
    form.said.edit.setCursorPosition(0)
    person.press(Qt.Key.Key_Delete)
    assert refusal_in(run) == ""


@pytest.mark.parametrize("typed", ["", "12", "zz"])
def test_an_id_that_is_not_whole_is_refused(person: Person, shelf: Shelf, typed: str) -> None:
    run, _ = go_to_join(person)
    person.type(str(shelf.place), typed)
    assert refusal_in(run).startswith("No id is typed." if not typed else "The id ")
    assert read_settings().settings == Settings()


def test_a_place_without_a_library_is_said_before_an_id_is_typed(person: Person, tmp_path: Path) -> None:
    (tmp_path / "empty").mkdir()
    run, form = go_to_join(person)
    person.type(str(tmp_path / "empty"))
    assert "there is no library here" in refusal_in(run)
    assert QApplication.focusWidget() is form.place.edit


def test_a_founding_that_was_tampered_with_is_refused(person: Person, shelf: Shelf, said: str) -> None:
    (founding,) = (shelf.place / "records").glob(f"{'0' * 64}-{LibraryFolder(shelf.place).library_id()}.json")
    founding.write_bytes(founding.read_bytes().replace(b"Tarnwick", b"Tarnwich", 1))
    run, _ = go_to_join(person)
    person.type(str(shelf.place))
    assert "its founding record cannot be used" in refusal_in(run)
    assert read_settings().settings == Settings()


def test_a_machine_whose_library_is_named_and_not_joined_begins_with_the_place(person: Person, shelf: Shelf) -> None:
    write_settings(Settings(library=str(shelf.place)))
    run = person.sit_down()
    at(run, StartPage)
    assert at(run, StartPage).title.text() == "This machine has not joined its library"
    person.press(Qt.Key.Key_Return)
    at(run, JoinForm)
    assert at(run, JoinForm).place.path() == shelf.place
    assert at(run, JoinForm).practice.text().startswith("It calls itself")


@pytest.fixture
def bundle(shelf: Shelf, tmp_path: Path) -> Path:
    """The library in one file."""
    path = tmp_path / "library.bundle.json"
    export_library(LibraryFolder(shelf.place), path, now())
    return path


def go_to_bundle(person: Person) -> tuple[FirstRun, BundleForm]:
    run = person.sit_down()
    person.press(Qt.Key.Key_Tab)
    person.press(Qt.Key.Key_Tab)
    person.press(Qt.Key.Key_Return)
    return run, at(run, BundleForm)


def test_a_bundle_is_brought_in_and_joined_at_once(
    person: Person, shelf: Shelf, bundle: Path, said: str, tmp_path: Path
) -> None:
    run, _ = go_to_bundle(person)
    with person.qtbot.waitSignal(run.founded, timeout=20_000):
        person.type(str(bundle), str(tmp_path / "copy"), said)
    opened = open_library(this_machine(), now())
    assert opened.place == tmp_path / "copy"
    assert [state.fingerprint for state in opened.models] == [shelf.fingerprint]


def test_nothing_is_written_of_a_bundle_whose_key_is_another(
    person: Person, bundle: Path, said: str, tmp_path: Path
) -> None:
    run, _ = go_to_bundle(person)
    person.type(str(bundle), str(tmp_path / "copy"), f"{said[:-4]}{'0000' if said[-4:] != '0000' else '1111'}")
    assert "The 16th group differs." in refusal_in(run)
    assert not (tmp_path / "copy").exists()
    assert read_settings().settings == Settings()


def test_the_first_file_is_chosen_from_what_ships_or_from_a_file_of_ones_own(
    person: Person, machine: Callable[[str], Path], tmp_path: Path
) -> None:
    empty = make_shelf(tmp_path / "another")
    write_settings(Settings(library=str(empty.place), practice_key=empty.practice.key.id))
    run = person.sit_down()
    person.rest()
    page = at(run, FirstFilePage)
    shown = words_in(page)
    for model in list_shipped_models(Course()):
        assert f"{model.title}  {model.version}" in shown
        assert model.outcome in shown
        assert model.source in shown
    assert "8 unconfirmed entries: figures that nobody has compared with the source yet." in shown
    with person.qtbot.waitSignal(run.install_asked) as asked:
        page.buttons[0].setFocus()
        person.press(Qt.Key.Key_Return)
    assert asked.args == [list_shipped_models(Course())[0].path]
    person.chosen = [tmp_path / "own.json"]
    with person.qtbot.waitSignal(run.install_asked) as asked:
        page.own.setFocus()
        person.press(Qt.Key.Key_Return)
    assert asked.args == [tmp_path / "own.json"]
    assert len([button for button in buttons_in(page) if "Look at it" in button.text()]) == len(page.buttons) == 8


def test_a_machine_with_a_library_is_led_to_another_one_and_back(person: Person, tmp_path: Path, shelf: Shelf) -> None:
    former = make_shelf(tmp_path / "former")
    write_settings(Settings(library=str(former.place), practice_key=former.practice.key.id))
    run = person.sit_down()
    run.show_start()
    assert at(run, StartPage).title.text() == "Use another library"
    with person.qtbot.waitSignal(run.left):
        person.press(Qt.Key.Key_Escape)
    assert Path(read_settings().settings.library) == former.place
    person.press(Qt.Key.Key_Tab)
    person.press(Qt.Key.Key_Return)
    assert at(run, JoinForm).place.field.text == ""
    person.type(str(shelf.place), group_fingerprint(shelf.practice.key.id))
    assert Path(read_settings().settings.library) == shelf.place
