"""Pictures of the window in every state, and of prints, to be looked at: `python -m tests.gui.pictures FOLDER`.

Light and dark; 1280 x 800, 1024 x 640, and 200 % text, which is a window of 640 x 400 on a screen that doubles
everything. Offscreen, so no picture shows the desktop of whoever makes them. The prints need pdftoppm (poppler-utils);
without it they are left out, and the last line says so.
"""

import argparse
import os
import shutil
import subprocess
import sys
from collections.abc import Callable, Iterator, Mapping
from dataclasses import dataclass, field
from datetime import timedelta
from pathlib import Path
from tempfile import TemporaryDirectory

from PySide6.QtCore import QMessageLogContext, QPoint, QSize, Qt, QtMsgType, qInstallMessageHandler
from PySide6.QtWidgets import QApplication, QDialog, QWidget

from clinicalc.assessment.entry import Typed, entry_from_texts
from clinicalc.gui import theme
from clinicalc.gui.about_view import AboutView
from clinicalc.gui.application import dress
from clinicalc.gui.guide_view import GuideView
from clinicalc.gui.main_window import NARROWEST, SMALLEST, MainWindow
from clinicalc.operations.bedside import open_example
from clinicalc.operations.documents import save_pdf
from clinicalc.resources import read_shipped
from clinicalc.settings import Paper, PracticePoint, ThemeChoice
from tests.assessment.cases import DEMO, MAN_50, WOMAN_61, WOMAN_EGFR_90, run
from tests.gui.approving import Surgery
from tests.gui.models.picture_states import MODELS_STATES
from tests.gui.models.picture_versions import write_prints
from tests.gui.study.picture_states import STUDY_STATES
from tests.library.records_kit import POINT

TARNWICK, LIPIDS, REGIONAL = "tarnwick-cvd-10y", "general-cvd-2008-lipids", "cvd-2021-regional"
TOTAL = "total-cvd-2024-base"
SCALE = "QT_SCALE_FACTOR"
USUAL = QSize(1280, 800)
THEMES = (ThemeChoice.LIGHT, ThemeChoice.DARK)
_DOTS_PER_INCH = 100
_LOW = {"age": "36", "smoker": "no", "systolic_bp": "100", "hdl_cholesterol": "2.2"}
_HIGH = {"age": "72", "sex": "male", "total_cholesterol": "230", "hdl_cholesterol": "38", "systolic_bp": "150"} | {
    "bp_treated": "yes",
    "diabetes": "yes",
}


def _leave_alone(window: MainWindow) -> None:
    """A state that needs nothing but its entry."""


def _choose_low_risk(window: MainWindow) -> None:
    chooser = window.model_bar.recalibration.chooser
    chooser.setCurrentIndex(chooser.findData("low"))


def _refuse(window: MainWindow) -> None:
    """Open a file with a misspelt field, and so without one that it needs."""
    with TemporaryDirectory() as folder:
        path = Path(folder) / "tarnwick-draft.json"
        path.write_bytes(read_shipped(f"example_models/{TARNWICK}.json").replace(b'"title"', b'"titel"', 1))
        window.open_path(path)


def _focus_finding(window: MainWindow) -> None:
    window.sheet.findings.tab_stops()[0].setFocus(Qt.FocusReason.TabFocusReason)


def _show_text(window: MainWindow) -> None:
    window.sheet.views.toggle_text()


def _open_shares(window: MainWindow) -> None:
    window.sheet.views.open(window.sheet.views.shares)
    _scroll_to(window, window.sheet.views)


def _ask_matching_age(window: MainWindow) -> None:
    window.sheet.views.open(window.sheet.views.shares)
    window.sheet.views.shares.ask.click()
    _scroll_to(window, window.sheet.views)


def _open_comparison(window: MainWindow) -> None:
    window.sheet.views.open(window.sheet.views.comparison)
    _scroll_to(window, window.sheet.views)


def _compare(window: MainWindow) -> None:
    window.state.type_change("smoker", Typed("no"))
    window.state.type_change("systolic_bp", Typed("132"))
    window.use_model(window.state.model or open_example(f"{TARNWICK}.json"), window.state.entry)
    window.sheet.views.open(window.sheet.views.comparison)


def _compare_and_scroll(window: MainWindow) -> None:
    _compare(window)
    _scroll_to(window, window.sheet.views)


def _compare_in_vain(window: MainWindow) -> None:
    window.state.type_change("systolic_bp", Typed("13"))
    window.use_model(window.state.model or open_example(f"{TARNWICK}.json"), window.state.entry)
    window.sheet.views.open(window.sheet.views.comparison)
    _scroll_to(window, window.sheet.views)


def _show_assumptions(window: MainWindow) -> None:
    window.sheet.assumptions.link.click()
    window.sheet.assumptions.link.setFocus(Qt.FocusReason.TabFocusReason)
    _scroll_to(window, window.sheet.assumptions)


def _add_practice_points(window: MainWindow) -> None:
    """As many as are drawn, and one more."""
    assert window.state.model is not None
    points = [
        PracticePoint(window.state.model.content.id, 10, "a", at, label, "practice meeting of May")
        for at, label in ((0.05, "Talk it over"), (0.123, "Offer"), (0.2, "Refer"))
    ]
    window.state.use_practice_points(points)


_SURGERIES: list[tuple[Surgery, TemporaryDirectory[str]]] = []
"""The practices whose windows are open; their folders go with the last of them."""


def _open_alone() -> MainWindow:
    """A window on a machine without a library."""
    return MainWindow(choose_open=lambda _: None, choose_save=lambda *_: None)


def _open_in_surgery() -> MainWindow:
    """A window that works from a practice's library with one approved model."""
    folder = TemporaryDirectory()
    surgery = Surgery(Path(folder.name))
    _SURGERIES.append((surgery, folder))
    return surgery.open()


def _open_with_choices() -> MainWindow:
    """A window of a practice that approved two models; in one of them it chose recalibration and decision point."""
    folder = TemporaryDirectory()
    surgery = Surgery(Path(folder.name))
    _SURGERIES.append((surgery, folder))
    surgery.add_model(f"{REGIONAL}.json", recalibration="low", points=(POINT,))
    return surgery.open()


def _type(window: MainWindow, texts: Mapping[str, str]) -> None:
    """A patient's values, with the approved model that is chosen."""
    approved = window.state.approved
    assert approved is not None
    window.state.use_model(approved.model, entry_from_texts(texts, "F 2031"), approved)


def _approve(window: MainWindow) -> None:
    _type(window, DEMO)


def _choose_regional(window: MainWindow) -> None:
    assert window.library is not None
    chosen = next(one for one in window.library.offered() if "A score" not in one.title)
    window.library.choose(chosen.fingerprint)
    _type(window, MAN_50)


def _withdraw(window: MainWindow) -> None:
    _type(window, DEMO)
    _SURGERIES[-1][0].withdraw()
    assert window.library is not None
    window.library.check()


def _lose_library(window: MainWindow) -> None:
    surgery = _SURGERIES[-1][0]
    surgery.lose()
    surgery.now += timedelta(hours=2)
    assert window.library is not None
    window.library.check()
    _type(window, DEMO)


def _lose_library_for_long(window: MainWindow) -> None:
    _lose_library(window)
    _SURGERIES[-1][0].now += timedelta(hours=30)
    assert window.library is not None
    window.library.check()


def _try_out(window: MainWindow) -> None:
    window.use_model(open_example(f"{LIPIDS}.json"), entry_from_texts(WOMAN_61, "F 2031"))


def _scroll_to(window: MainWindow, part: QWidget) -> None:
    """Bring a part of the sheet to the top of whatever scrolls it."""
    _settle()
    area = window.patient.one_column if window.patient.is_narrow else window.sheet.scroller
    body = area.widget()
    assert body is not None
    area.verticalScrollBar().setValue(part.mapTo(body, QPoint(0, 0)).y() - 8)


@dataclass(frozen=True, slots=True)
class State:
    """One thing to be seen: a shipped model or none, what is typed, and what is done then."""

    name: str
    model: str | None
    typed: Mapping[str, str] = field(default_factory=dict)
    then: Callable[[MainWindow], None] = _leave_alone
    make: Callable[[], MainWindow] = _open_alone


STATES = (
    State("valid-band", TARNWICK, DEMO),
    State("rebuilt-band", LIPIDS, WOMAN_61),
    State("valid-no-band", TOTAL, WOMAN_EGFR_90),
    State("stop", TARNWICK, DEMO | {"total_cholesterol": "5.2 mg/dL"}),
    State("excluded", TARNWICK, DEMO | {"prior_cvd": "yes"}),
    State("no-number-yet", TARNWICK, {"prior_cvd": "no", "age": "61"}),
    State("under-1", TARNWICK, DEMO | _LOW),
    State("over-80", LIPIDS, WOMAN_61 | _HIGH),
    State("outside-derivation", TARNWICK, DEMO | {"systolic_bp": "210"}),
    State("too-old", TARNWICK, DEMO | {"age": "80", "systolic_bp": "210"}),
    State("recalibration-open", REGIONAL, MAN_50),
    State("recalibration-chosen", REGIONAL, MAN_50, _choose_low_risk),
    State("finding-in-focus", TARNWICK, DEMO | {"total_cholesterol": "5.2 mg/dL"}, _focus_finding),
    State("charts-as-text", TARNWICK, DEMO, _show_text),
    State("practice-points", TARNWICK, DEMO, _add_practice_points),
    State("not-measured", LIPIDS, WOMAN_61 | {"smoker": "not measured"}),
    State("shares", TARNWICK, DEMO, _open_shares),
    State("shares-matching-age", TARNWICK, DEMO, _ask_matching_age),
    State("shares-without-number", TARNWICK, {"prior_cvd": "no"}, _open_shares),
    State("comparison-how", TARNWICK, DEMO, _open_comparison),
    State("comparison", TARNWICK, DEMO, _compare_and_scroll),
    State("comparison-top", TARNWICK, DEMO, _compare),
    State("comparison-in-vain", TARNWICK, DEMO, _compare_in_vain),
    State("band-assumptions", LIPIDS, WOMAN_61, _show_assumptions),
    State("refused-file", TARNWICK, DEMO, _refuse),
    State("no-file", None),
    State("approved", None, then=_approve, make=_open_in_surgery),
    State("approved-none-chosen", None, make=_open_with_choices),
    State("approved-choices", None, then=_choose_regional, make=_open_with_choices),
    State("approved-withdrawn", None, then=_withdraw, make=_open_in_surgery),
    State("approved-copy", None, then=_lose_library, make=_open_in_surgery),
    State("approved-copy-too-old", None, then=_lose_library_for_long, make=_open_in_surgery),
    State("approved-tried-out", None, then=_try_out, make=_open_in_surgery),
    *(State(name, None, then=then, make=make) for name, then, make in (*MODELS_STATES, *STUDY_STATES)),
)


def _pass_on(_: QtMsgType, __: QMessageLogContext, message: str) -> None:
    """What Qt says, but for what the offscreen platform says of every window."""
    if not message.startswith("This plugin does not support"):
        sys.stderr.write(f"{message}\n")


def _settle() -> None:
    for _ in range(5):
        QApplication.processEvents()


def _open(state: State, size: QSize) -> MainWindow:
    window = state.make()
    window.resize(size)
    window.show()
    window.activateWindow()
    if state.model is not None:
        window.use_model(open_example(f"{state.model}.json"), entry_from_texts(state.typed, "F 2031"))
    _settle()
    state.then(window)
    _settle()
    return window


def _keep(widget: QWidget, path: Path) -> None:
    if not widget.grab().save(str(path)):
        raise OSError(f"{path} could not be written")


def _picture_dialogs(folder: Path, suffix: str) -> Iterator[Path]:
    window = _open(STATES[0], USUAL)
    window.page_bar.guide.click()
    window.page_bar.about.trigger()
    _settle()
    kinds: Mapping[type[QDialog], str] = {GuideView: "guide", AboutView: "about"}
    for view in window.findChildren(QDialog):
        path = folder / f"{kinds[type(view)]}-{suffix}.png"
        _keep(view, path)
        yield path
    window.close()
    window.deleteLater()


def picture_windows(folder: Path, sizes: Mapping[str, QSize], beginning: str = "") -> Iterator[Path]:
    """Every state in every size, light and dark, then guide and about; yields the files as they are written.

    With a `beginning` only the states whose names begin with it.
    """
    for choice in THEMES:
        theme.choose(choice)
        for label, size in sizes.items():
            for state in STATES:
                if not state.name.startswith(beginning):
                    continue
                window = _open(state, size)
                path = folder / f"{state.name}-{choice}-{label}.png"
                _keep(window, path)
                yield path
                window.close()
                window.deleteLater()
        if not beginning:
            yield from _picture_dialogs(folder, f"{choice}-{next(iter(sizes))}")


def picture_prints(folder: Path) -> Iterator[Path]:
    """Prints of patients on A4 and Letter, those of the library on A4 and in grey. Nothing without pdftoppm."""
    tool = shutil.which("pdftoppm")
    if tool is None:
        return
    for name, model, typed in (
        ("valid-band", TARNWICK, DEMO),
        ("rebuilt-band", LIPIDS, WOMAN_61),
        ("valid-no-band", TOTAL, WOMAN_EGFR_90),
    ):
        for paper in Paper:
            pdf = folder / f"print-{name}-{paper}.pdf"
            save_pdf(pdf, run(model, typed), practice="Tarnwick Northgate", paper=paper)
            subprocess.run([tool, "-r", str(_DOTS_PER_INCH), "-png", str(pdf), str(pdf.with_suffix(""))], check=True)
            yield from sorted(folder.glob(f"{pdf.stem}-*.png"))
    for pdf in write_prints(folder):
        for ending, more in (("", ()), ("-grey", ("-gray",))):
            stem = str(pdf.with_suffix("")) + ending
            subprocess.run([tool, "-r", str(_DOTS_PER_INCH), "-png", *more, str(pdf), stem], check=True)
            yield from sorted(folder.glob(f"{Path(stem).name}-[0-9]*.png"))


def main() -> None:
    """Make them all; the doubled windows in a process of their own, since Qt reads the scale when it starts."""
    parser = argparse.ArgumentParser(prog="python -m tests.gui.pictures", description="Pictures of every state.")
    parser.add_argument("folder", type=Path, help="where the pictures go; made if need be")
    parser.add_argument("--doubled-only", action="store_true", help="only the windows at 200 %% text")
    parser.add_argument(
        "--states", default="", metavar="BEGINNING", help="only windows whose names begin so; no prints"
    )
    words = parser.parse_args()
    folder: Path = words.folder
    folder.mkdir(parents=True, exist_ok=True)
    if words.doubled_only and os.environ.get(SCALE) != "2":
        again = _again(folder, words.states)
        raise SystemExit(subprocess.run(again, env=os.environ | {SCALE: "2"}, check=False).returncode)
    os.environ["QT_QPA_PLATFORM"] = "offscreen"
    qInstallMessageHandler(_pass_on)
    dress(QApplication([]))
    if words.doubled_only:
        made = list(picture_windows(folder, {"200": NARROWEST}, words.states))
    else:
        made = list(picture_windows(folder, {"1280": USUAL, "1024": SMALLEST}, words.states))
        prints = [] if words.states else list(picture_prints(folder))
        made += prints
        if not prints and not words.states:
            sys.stdout.write("no pictures of prints: pdftoppm is not installed (Debian package poppler-utils)\n")
        subprocess.run(_again(folder, words.states), env=os.environ | {SCALE: "2"}, check=True)
    sys.stdout.write(f"{len(made)} pictures in {folder}\n")


def _again(folder: Path, beginning: str) -> list[str]:
    return [sys.executable, "-m", "tests.gui.pictures", str(folder), "--doubled-only", "--states", beginning]


if __name__ == "__main__":
    main()
