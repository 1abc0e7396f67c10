"""First run, settings and trust in states for the pictures."""

import os
from collections.abc import Callable
from functools import partial
from pathlib import Path
from tempfile import TemporaryDirectory

from PySide6.QtCore import Qt
from PySide6.QtTest import QTest
from PySide6.QtWidgets import QLineEdit, QWidget

from clinicalc.gui.form import Form
from clinicalc.gui.main_window import MainWindow
from clinicalc.gui.page_tabs import Page
from clinicalc.gui.practice.first_run import FirstRun
from clinicalc.gui.practice.founded_page import FoundedPage
from clinicalc.gui.practice.library_group import TrustForm
from clinicalc.gui.practice.publishers_form import PublishersForm
from clinicalc.gui.practice.settings_page import SettingsPage
from clinicalc.gui.scroller import Scroller
from clinicalc.library.cards import GROUP
from clinicalc.library.records import Approver
from clinicalc.library.trust_store import trust_publisher
from clinicalc.operations.founding_steps import FoundingPlan
from clinicalc.operations.library_reading import now
from clinicalc.operations.practice_founding import Founded
from clinicalc.settings import Settings, write_settings
from tests.gui.models.shelves import page_of, rest
from tests.gui.practice.settings_hands import kept
from tests.library.keys_at_hand import key_of
from tests.library.machines import make_shelf

SHARE = Path("/media/tarnwick-northgate/models")
KEY = key_of("R. Osei")


def open_without_library() -> MainWindow:
    """A window on a machine that has settings of its own and no library in them."""
    folder = TemporaryDirectory()
    os.environ["CLINICALC_SETTINGS"] = folder.name
    window = MainWindow(preferences=kept(), choose_open=lambda _: None, choose_save=lambda *_: None)
    window.setProperty("folder", folder)  # goes with the window
    return window


def _first_run(window: MainWindow) -> FirstRun:
    window.show_page(Page.MODELS)
    page = page_of(window)
    rest(page)
    (run,) = page.findChildren(FirstRun)
    run.plan = FoundingPlan("Tarnwick Northgate", SHARE, Approver("R. Osei", "partner", KEY.public), "", True)
    return run


def _start(window: MainWindow) -> None:
    _first_run(window)


def _steps(window: MainWindow) -> None:
    run = _first_run(window)
    run.plan = FoundingPlan("Tarnwick Northgate", SHARE, run.plan.approver)
    run.show_steps()
    run.focus_first()


def _step(step: int, window: MainWindow) -> None:
    run = _first_run(window)
    run.show_step(step)
    run.focus_first()


def _short_passphrase(window: MainWindow) -> None:
    run = _first_run(window)
    run.plan = FoundingPlan("Tarnwick Northgate", SHARE)
    run.show_step(1)
    _fill(run, "R. Osei", "partner", os.fspath(Path(window.property("folder").name) / "osei.key"), "short", "short")
    _ask(run)
    rest(page_of(window))


def _founded(window: MainWindow) -> None:
    run = _first_run(window)
    page = FoundedPage(Founded(SHARE, "Tarnwick Northgate", KEY.id, ""))
    run._show(page)
    page.focus_first()


def _join(digits: int, ending: str, window: MainWindow) -> None:
    """The form with this much of the id typed, then something else."""
    shelf = make_shelf(Path(window.property("folder").name) / "library")
    run = _first_run(window)
    run.show_joining()
    id = shelf.practice.key.id[:digits]
    said = " ".join(id[at : at + GROUP] for at in range(0, digits, GROUP)) + ending
    _fill(run, os.fspath(shelf.place))
    run.focus_first()
    rest(page_of(window))
    _fill(run, os.fspath(shelf.place), said)
    if ending:
        _ask(run)
        rest(page_of(window))


def _bundle(window: MainWindow) -> None:
    run = _first_run(window)
    run.show_bundle()
    run.focus_first()


def _first_file(window: MainWindow) -> None:
    run = _first_run(window)
    run.show_first_file()
    run.focus_first()
    rest(page_of(window))


def _settings(window: MainWindow) -> SettingsPage:
    window.show_page(Page.SETTINGS)
    return window.others.settings()


def _only_settings(window: MainWindow) -> None:
    _settings(window)


def _settings_end(window: MainWindow) -> None:
    write_settings(Settings(practice="Tarnwick Northgate", library=os.fspath(SHARE), practice_key=KEY.id))
    page = _settings(window)
    page.library.passphrase.setFocus(Qt.FocusReason.TabFocusReason)
    QTest.qWait(20)
    page.scroller.verticalScrollBar().setValue(page.scroller.verticalScrollBar().maximum())


def _settings_refused(window: MainWindow) -> None:
    page = _settings(window)
    edit = page.numbers.findChildren(QLineEdit)[0]
    edit.setText("12")
    QTest.keyClick(edit, Qt.Key.Key_Return)


def _settings_damaged(window: MainWindow) -> None:
    folder = Path(window.property("folder").name)
    (folder / "settings.toml").write_text('practice = "Tarnwick Northgate"\nband_level = "wide"\n', encoding="utf-8")
    _settings(window)


def _trust(form: TrustForm, window: MainWindow) -> None:
    trust_publisher(key_of("Tarnwick Press").card, key_of("Tarnwick Press").id, now())
    page = _settings(window)
    page.trust.show(form)
    _wait(page)


def _trust_another(window: MainWindow) -> None:
    _trust(TrustForm.PUBLISHERS, window)
    form = window.others.settings().trust.form
    assert isinstance(form, PublishersForm)
    form.show_trusting()
    form.focus_first()


def _make_key_refused(window: MainWindow) -> None:
    _trust(TrustForm.MAKE_KEY, window)
    form = window.others.settings().trust.form
    _ask(form)
    _wait(window.others.settings())


def _wait(page: SettingsPage) -> None:
    QTest.qWait(100)
    while page.trust.errands.is_busy:
        QTest.qWait(20)


def _form_in(page: QWidget | None) -> Form:
    assert page is not None
    return next(form for form in page.findChildren(Form) if form.isVisible())


def _fill(page: QWidget, *texts: str) -> None:
    """Texts into the fields from the top; what does not fit any more is scrolled to the end."""
    form = _form_in(page)
    fields = [edit for edit in form.findChildren(QLineEdit) if edit.isVisible()]
    for edit, text in zip(fields, texts, strict=False):
        edit.setText(text)
    last = fields[min(len(fields), len(texts)) - 1]
    last.setFocus(Qt.FocusReason.TabFocusReason)
    for scroller in form.findChildren(Scroller):
        scroller.ensureWidgetVisible(last)


def _ask(page: QWidget | None) -> None:
    _form_in(page).deed.click()


FIRST_STATES: tuple[tuple[str, Callable[[MainWindow], None], Callable[[], MainWindow]], ...] = tuple(
    (name, then, open_without_library)
    for name, then in (
        ("first-run", _start),
        ("first-steps", _steps),
        ("first-place", partial(_step, 0)),
        ("first-own-key", _short_passphrase),
        ("first-rule", partial(_step, 2)),
        ("first-practice-key", partial(_step, 3)),
        ("first-founded", _founded),
        ("first-file", _first_file),
        ("join-so-far", partial(_join, 22, "")),
        ("join-differs", partial(_join, 21, "x")),
        ("join-agrees", partial(_join, 64, "")),
        ("bundle", _bundle),
        ("settings", _only_settings),
        ("settings-library", _settings_end),
        ("settings-refused", _settings_refused),
        ("settings-damaged", _settings_damaged),
        ("publishers", partial(_trust, TrustForm.PUBLISHERS)),
        ("publishers-trust", _trust_another),
        ("make-key-refused", _make_key_refused),
        ("change-passphrase", partial(_trust, TrustForm.PASSPHRASE)),
    )
)
"""Name, what is done, and the window."""
