"""A window with its Study page on screen, and a small study beside it."""

from collections.abc import Iterator
from pathlib import Path

import pytest
from pytestqt.qtbot import QtBot

from clinicalc.gui.file_choosing import FileChoices, Wanted
from clinicalc.gui.main_window import MainWindow
from clinicalc.gui.page_tabs import Page
from clinicalc.gui.study.steps import Ask, Step
from clinicalc.gui.study.study_page import StudyPage
from tests.gui.study.study_files import StudyFiles, write_study_files
from tests.gui.study.validation_files import ValidationFiles, write_validation_files


class Chooser:
    """Answers the dialogs: `answers` says which file is pointed to when one is asked for."""

    def __init__(self) -> None:
        self.answers: dict[Wanted, Path | None] = {}

    def choices(self) -> FileChoices:
        """The dialogs as the page takes them."""
        return FileChoices(
            which=lambda _, wanted: self.answers.get(wanted),
            where=lambda _, wanted, __: self.answers.get(wanted),
            folder=lambda _: None,
        )


@pytest.fixture
def files(tmp_path: Path) -> StudyFiles:
    """The study and its people."""
    return write_study_files(tmp_path)


@pytest.fixture
def chooser() -> Chooser:
    """What the dialogs answer; nothing at first."""
    return Chooser()


@pytest.fixture
def study_window(qtbot: QtBot, chooser: Chooser) -> Iterator[MainWindow]:
    """A window on its Study page."""
    window = MainWindow(choose_open=lambda _: None, choose_files=chooser.choices())
    qtbot.addWidget(window)
    window.resize(1280, 800)
    with qtbot.waitExposed(window):
        window.show()
    window.activateWindow()
    window.show_page(Page.STUDY)
    yield window
    window.close()


@pytest.fixture
def page(study_window: MainWindow) -> StudyPage:
    """The page itself."""
    return study_window.others.study()


@pytest.fixture
def opened(qtbot: QtBot, page: StudyPage, files: StudyFiles) -> StudyPage:
    """The page with the small study open."""
    page.work.open_study(files.study)
    rest(qtbot, page)
    return page


@pytest.fixture
def changing(qtbot: QtBot, opened: StudyPage) -> StudyPage:
    """The small study being changed, at the step Model."""
    opened.show_step(Step.MODEL)
    opened.sheet.buttons[Ask.CHANGE].click()
    rest(qtbot, opened)
    return opened


@pytest.fixture
def held_files(tmp_path: Path) -> ValidationFiles:
    """A validation file with its model and people, in a folder of their own."""
    folder = tmp_path / "held"
    folder.mkdir()
    return write_validation_files(folder)


@pytest.fixture
def held(qtbot: QtBot, page: StudyPage, held_files: ValidationFiles) -> StudyPage:
    """The page with the validation file open."""
    page.work.open_study(held_files.validation)
    rest(qtbot, page)
    assert page.state.people_only is not None, page.sheet.words
    return page


@pytest.fixture
def validated(qtbot: QtBot, held: StudyPage) -> StudyPage:
    """The page with the validation made."""
    held.show_step(Step.VALIDATION)
    held.foot.next.click()
    rest(qtbot, held)
    assert held.state.validating.made is not None, held.sheet.words
    return held


def rest(qtbot: QtBot, page: StudyPage) -> None:
    """Until nothing is being done any more."""
    qtbot.waitUntil(lambda: not page.errands.is_busy, timeout=60_000)
