"""Light and dark: who decides, and that everything on screen follows at once."""

import ast
import re
from collections.abc import Iterator
from dataclasses import astuple, fields
from pathlib import Path

import pytest
from PySide6.QtCore import QEvent, QObject, Qt
from PySide6.QtGui import QColor, QImage, QPalette
from PySide6.QtWidgets import QApplication, QWidget
from pytestqt.qtbot import QtBot

import clinicalc.gui
from clinicalc.assessment.model import Model
from clinicalc.gui import theme
from clinicalc.gui.main_window import MainWindow
from clinicalc.gui.tokens import DARK, LIGHT, Tokens, make_palette, make_style_sheet
from clinicalc.report.palette import PAPER
from clinicalc.report.shapes import Tone
from clinicalc.settings import ThemeChoice
from tests.gui.bedside_hands import fill_2008, retype_number
from tests.gui.test_start import run_python

pytestmark = pytest.mark.gui


@pytest.fixture(autouse=True)
def _as_before(qapp: QApplication) -> Iterator[None]:
    theme.choose(ThemeChoice.SYSTEM)
    yield
    qapp.styleHints().colorSchemeChanged.emit(Qt.ColorScheme.Unknown)
    theme.choose(ThemeChoice.SYSTEM)


def say_system_is(qapp: QApplication, scheme: Qt.ColorScheme) -> None:
    """What Qt does when the system changes between light and dark."""
    qapp.styleHints().colorSchemeChanged.emit(scheme)


def share_of(image: QImage, colour: str) -> float:
    """The share of the image's pixels that have exactly this colour."""
    wanted = QColor(colour).rgb()
    hits = sum(image.pixel(x, y) == wanted for y in range(0, image.height(), 3) for x in range(0, image.width(), 3))
    return hits / (len(range(0, image.height(), 3)) * len(range(0, image.width(), 3)))


class PaintCounter(QObject):
    """Notes which widgets are painted."""

    def __init__(self) -> None:
        super().__init__()
        self.painted: set[QWidget] = set()

    def eventFilter(self, watched: QObject, event: QEvent) -> bool:
        """Qt hands every event of a watched widget here first."""
        if event.type() == QEvent.Type.Paint and isinstance(watched, QWidget):
            self.painted.add(watched)
        return False


def test_where_the_system_does_not_say_it_is_light() -> None:
    assert (theme.tokens(), theme.current().is_dark) == (LIGHT, False)


def test_it_follows_the_system_while_open(qapp: QApplication, qtbot: QtBot) -> None:
    with qtbot.waitSignal(theme.current().changed):
        say_system_is(qapp, Qt.ColorScheme.Dark)
    assert theme.tokens() is DARK
    assert qapp.palette().color(QPalette.ColorRole.Window) == QColor(DARK.ground)
    with qtbot.waitSignal(theme.current().changed):
        say_system_is(qapp, Qt.ColorScheme.Light)
    assert theme.tokens() is LIGHT
    assert qapp.palette().color(QPalette.ColorRole.Window) == QColor(LIGHT.ground)


@pytest.mark.parametrize(
    ("choice", "tokens", "system"),
    [(ThemeChoice.DARK, DARK, Qt.ColorScheme.Light), (ThemeChoice.LIGHT, LIGHT, Qt.ColorScheme.Dark)],
)
def test_a_choice_holds_against_the_system(
    qapp: QApplication, qtbot: QtBot, choice: ThemeChoice, tokens: Tokens, system: Qt.ColorScheme
) -> None:
    theme.choose(choice)
    with qtbot.assertNotEmitted(theme.current().changed):
        say_system_is(qapp, system)
    assert (theme.current().choice, theme.tokens()) == (choice, tokens)


def test_the_same_again_changes_nothing(qtbot: QtBot) -> None:
    theme.choose(ThemeChoice.DARK)
    with qtbot.assertNotEmitted(theme.current().changed):
        theme.choose(ThemeChoice.DARK)


def test_at_the_signal_the_new_colours_are_in_force(qapp: QApplication) -> None:
    seen: list[tuple[Tokens, str, bool]] = []

    def look() -> None:
        ground = qapp.palette().color(QPalette.ColorRole.Window).name().upper()
        seen.append((theme.tokens(), ground, DARK.accent in qapp.styleSheet()))

    theme.current().changed.connect(look)
    try:
        theme.choose(ThemeChoice.DARK)
    finally:
        theme.current().changed.disconnect(look)
    assert seen == [(DARK, DARK.ground, True)]


def test_every_widget_in_sight_is_painted_again(window: MainWindow, qapp: QApplication) -> None:
    fill_2008(window)
    qapp.processEvents()
    qapp.processEvents()  # the sheet grew by the picture of 100 people: what lies below the fold now is settled here
    counter = PaintCounter()
    in_sight = {
        widget
        for widget in window.findChildren(QWidget)
        if widget.isVisible() and not widget.visibleRegion().isEmpty() and "paintEvent" in vars(type(widget))
    }
    assert len(in_sight) > 10  # frames, segments, choosers, number, strip
    for widget in in_sight:
        widget.installEventFilter(counter)
    qapp.processEvents()
    counter.painted.clear()
    theme.choose(ThemeChoice.DARK)
    qapp.processEvents()
    assert in_sight - counter.painted == set()


def test_nothing_of_the_other_theme_stays_on_screen(window: MainWindow, qapp: QApplication) -> None:
    fill_2008(window)
    retype_number(window, "total_cholesterol", "5.2")  # a stop and its offer
    window.foot.new_patient.setFocus()  # no caret that blinks between two pictures
    qapp.processEvents()
    only_light = set(astuple(LIGHT)) - set(astuple(DARK))
    light = window.grab().toImage()
    theme.choose(ThemeChoice.DARK)
    qapp.processEvents()
    dark = window.grab().toImage()
    assert share_of(light, LIGHT.ground) > 0.2 < share_of(light, LIGHT.sheet)
    assert share_of(dark, DARK.ground) > 0.2 < share_of(dark, DARK.sheet)
    # anti-aliased text passes through many colours, so a stray pixel may meet one by chance
    assert {token: share for token in only_light if (share := share_of(dark, token)) > 1e-4} == {}
    theme.choose(ThemeChoice.LIGHT)
    qapp.processEvents()
    assert window.grab().toImage() == light


def test_a_window_opened_in_the_dark_looks_as_one_that_was_turned_dark(lipids: Model, qtbot: QtBot) -> None:
    turned = MainWindow()
    qtbot.addWidget(turned)
    turned.resize(1280, 800)
    turned.use_model(lipids)
    turned.grab()
    theme.choose(ThemeChoice.DARK)
    opened = MainWindow()
    qtbot.addWidget(opened)
    opened.resize(1280, 800)
    opened.use_model(lipids)
    assert turned.grab().toImage() == opened.grab().toImage()


@pytest.mark.parametrize("tokens", [LIGHT, DARK], ids=["light", "dark"])
def test_no_role_of_the_palette_is_left_to_the_system(tokens: Tokens) -> None:
    palette = make_palette(tokens)
    ours = {QColor(colour).name() for colour in astuple(tokens)}
    left_out = {QPalette.ColorRole.NoRole, QPalette.ColorRole.NColorRoles}
    foreign = {
        role.name: palette.color(group, role).name()
        for group in (QPalette.ColorGroup.Active, QPalette.ColorGroup.Inactive, QPalette.ColorGroup.Disabled)
        for role in QPalette.ColorRole
        if role not in left_out and palette.color(group, role).name() not in ours
    }
    assert foreign == {}


@pytest.mark.parametrize("tokens", [LIGHT, DARK], ids=["light", "dark"])
def test_the_style_sheet_knows_only_the_theme(tokens: Tokens) -> None:
    assert set(re.findall(r"#[0-9A-Fa-f]{6}\b", make_style_sheet(tokens))) <= set(astuple(tokens))


@pytest.mark.parametrize("tokens", [LIGHT, DARK], ids=["light", "dark"])
def test_every_tone_of_a_figure_has_its_colour(tokens: Tokens) -> None:
    colours = theme.colours(tokens)
    assert set(colours) == set(Tone)
    assert {tone.value: colour.name().upper() for tone, colour in colours.items()} == {
        field.name: getattr(tokens, field.name) for field in fields(Tokens)
    }


def test_paper_has_the_colours_of_the_light_theme() -> None:
    assert {tone: colour.name().upper() for tone, colour in theme.colours(LIGHT).items()} == dict(PAPER)


def test_only_tokens_spells_colours_and_only_theme_picks_them() -> None:
    """A colour written down anywhere else, or a theme read by its name, would stay when the theme changes."""
    room = Path(clinicalc.gui.__file__).parent
    strays = []
    for path in sorted(room.glob("*.py")):
        for node in ast.walk(ast.parse(path.read_text(encoding="utf-8"))):
            if path.name != "tokens.py" and isinstance(node, ast.Constant) and isinstance(node.value, str):
                strays += [(path.name, found) for found in re.findall(r"#[0-9A-Fa-f]{6}\b", node.value)]
            if path.name not in ("tokens.py", "theme.py") and isinstance(node, ast.Name | ast.alias):
                name = node.id if isinstance(node, ast.Name) else node.name
                strays += [(path.name, name)] if name in ("LIGHT", "DARK") else []
            if isinstance(node, ast.Attribute) and ast.unparse(node).startswith("Qt.GlobalColor."):
                strays.append((path.name, ast.unparse(node)))
    assert strays == []


@pytest.mark.parametrize(("line", "ground"), [('theme = "dark"', DARK.ground), ('theme = "light"', LIGHT.ground)])
def test_the_window_starts_in_the_theme_of_the_settings(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch, line: str, ground: str
) -> None:
    (tmp_path / "settings.toml").write_text(f"{line}\nlevel = 95\n", encoding="utf-8")
    monkeypatch.setenv("CLINICALC_SETTINGS", str(tmp_path))
    program = """
from PySide6.QtCore import QTimer
from PySide6.QtWidgets import QApplication
from clinicalc.gui.application import run_window
from clinicalc.gui.main_window import MainWindow
application = QApplication([])
def look():
    QTimer.singleShot(0, application.quit)
    window = next(w for w in application.topLevelWidgets() if isinstance(w, MainWindow) and w.isVisible())
    image = window.grab().toImage()
    print(image.pixelColor(3, 3).name().upper(), window.foot.message.text())
QTimer.singleShot(100, look)
run_window()
"""
    said = run_python(program).stdout
    assert said.startswith(f"{ground} settings.toml, line 2: level 95 lies outside 0.5 to 0.999.")
    assert sorted(path.name for path in tmp_path.iterdir()) == ["settings.toml"]
