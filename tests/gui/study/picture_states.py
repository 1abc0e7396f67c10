"""The Study page in its states, for the pictures that are to be looked at."""

from collections.abc import Callable
from functools import partial
from pathlib import Path
from tempfile import TemporaryDirectory
from time import monotonic

from PySide6.QtCore import QPoint
from PySide6.QtTest import QTest

from clinicalc.gui.labels import Heading
from clinicalc.gui.main_window import MainWindow
from clinicalc.gui.page_tabs import Page
from clinicalc.gui.study.fitting_deed import FittingDeed
from clinicalc.gui.study.methods_deed import MethodsDeed
from clinicalc.gui.study.steps import Ask, Step
from clinicalc.gui.study.study_page import StudyPage
from clinicalc.gui.study.update_deed import UpdateDeed
from tests.gui.study.study_files import (
    StudyFiles,
    let_others_die,
    make_binary,
    plan_methods,
    separate,
    write_study_files,
)
from tests.gui.study.validation_files import write_validation_files

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


def _report(window: MainWindow) -> None:
    """The form in which a report is saved."""
    _step(Step.FIT, window).sheet.buttons[Ask.REPORT].click()


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


def _refuse_separated(window: MainWindow) -> None:
    """A fit that has no estimate without a penalty."""
    files = _files()
    make_binary(files)
    separate(files)
    page = _page(window)
    page.work.open_study(files.study)
    _rest(page)
    page.work.fit()
    _rest(page)


def _offer_firth(window: MainWindow) -> None:
    _refuse_separated(window)
    page = window.others.study()
    page.sheet.buttons[Ask.FIRTH].click()
    _rest(page)


def _fit_with_methods(heading: str, window: MainWindow) -> None:
    """A Fine–Gray fit with values filled in and a bootstrap, scrolled to one of its parts."""
    files = _files()
    let_others_die(files)
    plan_methods(files)
    page = _page(window)
    page.work.open_study(files.study)
    _rest(page)
    page.work.fit()
    _rest(page)
    _scroll_to(page, heading)


def _scroll_to(page: StudyPage, heading: str) -> None:
    """Scrolled to one of the headings of the sheet."""
    inside = page.sheet.widget()
    for part in page.sheet.findChildren(Heading):
        if inside is not None and part.label.text().startswith(heading):
            page.sheet.verticalScrollBar().setValue(part.mapTo(inside, QPoint(0, 0)).y() - 12)
            return


def _choose_methods(window: MainWindow) -> None:
    """Both methods chosen in their form, so that all of its fields are there."""
    _ask(Step.MODEL, Ask.METHODS, window)
    deed = window.others.study().right.currentWidget()
    if isinstance(deed, MethodsDeed):
        for field in (deed.missing, deed.optimism):
            field.chooser.setCurrentIndex(1)


def _choose_ridge(window: MainWindow) -> None:
    _ask(Step.MODEL, Ask.FITTING, window)
    deed = window.others.study().right.currentWidget()
    if isinstance(deed, FittingDeed):
        deed.penalty.chooser.setCurrentIndex(deed.penalty.chooser.findData("ridge"))


def _hold(step: Step, window: MainWindow, *, hurt: bool = False) -> StudyPage:
    """A validation file that was opened and looked at, at one of its steps."""
    folder = TemporaryDirectory()
    _FOLDERS.append(folder)
    files = write_validation_files(Path(folder.name))
    page = _page(window)
    page.work.open_study(files.validation)
    _rest(page)
    if step in (Step.VALIDATION, Step.UPDATE):
        page.validating.work.validate()
        _rest(page)
    if hurt:
        files.change_people("person,age", "person,agge")
        page.work.read_again()
        _rest(page)
    page.show_step(step)
    _rest(page)
    return page


def _hold_ready(window: MainWindow) -> None:
    _hold(Step.DATA, window).show_step(Step.VALIDATION)


def _hold_lower(heading: str, window: MainWindow) -> None:
    _scroll_to(_hold(Step.VALIDATION, window), heading)


def _hold_other(window: MainWindow) -> None:
    """Another model held against the people of a study."""
    page = _step(Step.VALIDATION, window)
    folder = TemporaryDirectory()
    _FOLDERS.append(folder)
    page.validating.work.hold_model(write_validation_files(Path(folder.name)).model)
    _rest(page)


def _ask_update(window: MainWindow) -> UpdateDeed:
    _hold(Step.UPDATE, window).foot.next.click()
    deed = window.others.study().right.currentWidget()
    assert isinstance(deed, UpdateDeed)
    return deed


def _update(heading: str, window: MainWindow) -> None:
    deed, page = _ask_update(window), window.others.study()
    deed.ask()
    _rest(page)
    if heading:
        _scroll_to(page, heading)


def _write_version(window: MainWindow) -> None:
    _update("", window)
    window.others.study().foot.next.click()


def _save_validation(ask: Ask, window: MainWindow) -> None:
    _hold(Step.VALIDATION, window).sheet.buttons[ask].click()


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
    "study-draft-ridge": _choose_ridge,
    "study-draft-methods": _choose_methods,
    "study-fit-separated": _refuse_separated,
    "study-fit-offered": _offer_firth,
    "study-fit-filled": partial(_fit_with_methods, "Values filled in"),
    "study-fit-optimism": partial(_fit_with_methods, "Optimism"),
    "study-fit-others": partial(_fit_with_methods, "Where other events"),
    "study-fit-calibration": partial(_fit_with_methods, "Predicted and observed at 3"),
    "study-report": _report,
    "study-held-data": partial(_hold, Step.DATA),
    "study-held-model": partial(_hold, Step.MODEL),
    "study-held-ready": _hold_ready,
    "study-held": partial(_hold, Step.VALIDATION),
    "study-held-figures": partial(_hold_lower, "Every figure"),
    "study-held-groups": partial(_hold_lower, "Groups"),
    "study-held-stale": partial(_hold, Step.VALIDATION, hurt=True),
    "study-held-other": _hold_other,
    "study-update-begin": partial(_hold, Step.UPDATE),
    "study-update-form": _ask_update,
    "study-update-made": partial(_update, ""),
    "study-update-lower": partial(_update, "Coefficients"),
    "study-update-write": _write_version,
    "study-held-report": partial(_save_validation, Ask.VALIDATION_REPORT),
    "study-held-tables": partial(_save_validation, Ask.TABLES),
    "study-held-drawings": partial(_save_validation, Ask.DRAWINGS),
}


def _then(name: str, window: MainWindow) -> None:
    _DONE[name](window)


STUDY_STATES: tuple[tuple[str, Callable[[MainWindow], None], Callable[[], MainWindow]], ...] = tuple(
    (name, partial(_then, name), _open_window) for name in _DONE
)
"""Name, what is done, and the window."""
