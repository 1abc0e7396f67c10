"""The Study page in its states, for the pictures that are to be looked at."""

from collections.abc import Callable
from functools import partial
from pathlib import Path
from tempfile import TemporaryDirectory
from time import monotonic

from PySide6.QtTest import QTest

from clinicalc.gui.main_window import MainWindow
from clinicalc.gui.page_tabs import Page
from clinicalc.gui.study.steps import Ask, Step
from clinicalc.gui.study.study_page import StudyPage
from tests.gui.study.study_files import StudyFiles, write_study_files

_PATIENCE = 60.0
_FOLDERS: list[TemporaryDirectory[str]] = []
"""The folders of the studies whose windows are open; they go with the program."""


def _open_window() -> MainWindow:
    return MainWindow(choose_open=lambda _: None, choose_save=lambda *_: None)


def _files() -> StudyFiles:
    folder = TemporaryDirectory()
    _FOLDERS.append(folder)
    return write_study_files(Path(folder.name))


def _rest(page: StudyPage) -> None:
    until = monotonic() + _PATIENCE
    QTest.qWait(20)
    while page.errands.is_busy and monotonic() < until:
        QTest.qWait(20)
    QTest.qWait(20)


def _page(window: MainWindow) -> StudyPage:
    window.show_page(Page.STUDY)
    return window.others.study()


def _step(step: Step, window: MainWindow) -> StudyPage:
    """A study that was opened and fitted, at one of its steps."""
    page = _page(window)
    page.work.open_study(_files().study)
    _rest(page)
    if step in (Step.FIT, Step.PACKAGE):
        page.work.fit()
        _rest(page)
    page.show_step(step)
    _rest(page)
    return page


def _write(window: MainWindow) -> None:
    _step(Step.PACKAGE, window).foot.next.click()


def _spoil(window: MainWindow) -> None:
    """People that cannot be used, and the fit that was made before."""
    files = _files()
    page = _page(window)
    page.work.open_study(files.study)
    _rest(page)
    page.work.fit()
    _rest(page)
    files.change_people("person,age", "person,agge")
    page.work.read_again()
    _rest(page)


def _spoil_and_look(window: MainWindow) -> None:
    _spoil(window)
    window.others.study().show_step(Step.FIT)


def _refuse(window: MainWindow) -> None:
    files = _files()
    page = _page(window)
    page.work.open_study(files.study)
    _rest(page)
    files.change_study('unit = "mm[Hg]"', 'unit = "mmol/L"')
    files.change_study('kind = "cox"', 'kind = "coxx"')
    page.work.read_again()
    _rest(page)


def _begin(step: Step, window: MainWindow) -> StudyPage:
    """A study file that is proposed for a file of people."""
    page = _page(window)
    page.work.begin_from(_files().people)
    _rest(page)
    page.show_step(step)
    return page


def _ask(step: Step, ask: Ask, window: MainWindow) -> None:
    page = _begin(step, window)
    if ask is Ask.COLUMN:
        page.sheet.tables[0].go_to(3)
    page.sheet.buttons[ask].click()


_DONE: dict[str, Callable[[MainWindow], object]] = {
    "study-begin": _page,
    **{f"study-{step.name.lower()}": partial(_step, step) for step in Step},
    "study-write": _write,
    "study-data-stop": _spoil,
    "study-fit-earlier": _spoil_and_look,
    "study-refused": _refuse,
    "study-draft-data": partial(_begin, Step.DATA),
    "study-draft-model": partial(_begin, Step.MODEL),
    "study-draft-column": partial(_ask, Step.DATA, Ask.COLUMN),
    "study-draft-term": partial(_ask, Step.MODEL, Ask.ADD_TERM),
    "study-draft-about": partial(_ask, Step.MODEL, Ask.ABOUT),
    "study-draft-answer": partial(_ask, Step.MODEL, Ask.ANSWER),
    "study-draft-fitting": partial(_ask, Step.MODEL, Ask.FITTING),
}


def _then(name: str, window: MainWindow) -> None:
    _DONE[name](window)


STUDY_STATES: tuple[tuple[str, Callable[[MainWindow], None], Callable[[], MainWindow]], ...] = tuple(
    (name, partial(_then, name), _open_window) for name in _DONE
)
"""Name, what is done, and the window."""
