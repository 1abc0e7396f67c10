"""Walks over every widget of a window or dialog, as it stands on screen, and what each may find wrong."""

from collections.abc import Iterator
from contextlib import contextmanager
from typing import Any

import pytest
from PySide6.QtCore import QPoint, QRect, QRectF, Qt
from PySide6.QtGui import QAccessible, QFontMetrics, QPainter
from PySide6.QtWidgets import (
    QAbstractButton,
    QApplication,
    QComboBox,
    QLabel,
    QLineEdit,
    QListView,
    QPlainTextEdit,
    QPushButton,
    QScrollBar,
    QTextEdit,
    QWidget,
)

from clinicalc.gui.chooser import Chooser
from clinicalc.gui.figure_view import FigureView

LEAST_TARGET = 24
"""WCAG 2.2, 2.5.8, target size (minimum), in pixels."""
_INTERACTIVE = (QAbstractButton, QLineEdit, QComboBox, QPlainTextEdit, QListView)
_TALL = "Ég"
_ARROW_ROOM = 31
"""What the chevron and the margin before the words take of a chooser."""


def settle() -> None:
    """Let every queued layout and paint happen."""
    for _ in range(4):
        QApplication.processEvents()


def on_screen(root: QWidget) -> list[QWidget]:
    """The window and all of its widgets that can be seen, perhaps after scrolling; not Qt's own parts of them."""
    inside = [w for w in root.findChildren(QWidget) if w.isVisibleTo(root) and w.window() is root]
    return [root, *(w for w in inside if not w.objectName().startswith("qt_"))]


def nameless(root: QWidget) -> list[str]:
    """Whatever takes focus or can be pressed and says nothing to a screen reader."""
    found = []
    for widget in on_screen(root):
        stops = bool(widget.focusPolicy() & Qt.FocusPolicy.TabFocus)
        if not stops and not isinstance(widget, _INTERACTIVE):
            continue
        spoken = QAccessible.queryAccessibleInterface(widget)
        assert spoken is not None
        if not spoken.text(QAccessible.Text.Name).strip() and not isinstance(widget, QScrollBar):
            found.append(repr(widget))
    return found


def rich_texts(root: QWidget) -> list[str]:
    """Labels that could take their text for markup, and anything that edits or explains in markup."""
    labels = [w for w in root.findChildren(QLabel) if w.textFormat() != Qt.TextFormat.PlainText]
    rich = [*labels, *root.findChildren(QTextEdit), *(w for w in root.findChildren(QWidget) if w.toolTip())]
    return [repr(widget) for widget in rich]


def small_targets(root: QWidget) -> list[str]:
    """What can be pressed, typed in or chosen and is lower or narrower than it must be."""
    targets = [w for w in on_screen(root) if isinstance(w, _INTERACTIVE)]
    return [f"{w!r} {w.size()}" for w in targets if min(w.width(), w.height()) < LEAST_TARGET]


def cut_texts(root: QWidget) -> list[str]:
    """The texts on screen that are wider, or where they wrap higher, than the box they stand in."""
    found = []
    for widget in on_screen(root):
        text, room = _text_and_room(widget)
        if text and widget.fontMetrics().horizontalAdvance(text) > room:
            found.append(f"{text!r} in {room} of {type(widget).__name__}")
        if text and widget.fontMetrics().tightBoundingRect(_TALL).height() > widget.contentsRect().height():
            found.append(f"{text!r} in a height of {widget.height()}")
        if isinstance(widget, QLabel) and widget.wordWrap() and widget.heightForWidth(widget.width()) > widget.height():
            found.append(f"{widget.text()!r} in a height of {widget.height()}")
        if isinstance(widget, QLabel) and widget.wordWrap():
            longest = max((widget.fontMetrics().horizontalAdvance(word) for word in _words(widget)), default=0)
            if longest > widget.contentsRect().width():
                found.append(f"a word of {widget.text()!r} in {widget.contentsRect().width()}")
        if isinstance(widget, Chooser):
            entries = [widget.itemText(place) for place in range(widget.count())]
            metrics = QFontMetrics(widget.font())
            found += [e for e in entries if metrics.horizontalAdvance(e) > widget.width() - _ARROW_ROOM]
        if isinstance(widget, FigureView) and widget.figure_shown is not None:
            shown = widget.figure_shown
            if shown.width > widget.width() + 1 or shown.height > widget.height() + 8:
                found.append(f"{shown.sentence!r} {shown.width} x {shown.height} in {widget.size()}")
        found += _overhanging(widget)
    return found


def _text_and_room(widget: QWidget) -> tuple[str, int]:
    if isinstance(widget, QLabel) and not widget.wordWrap():
        return widget.text(), widget.contentsRect().width()
    if isinstance(widget, QPushButton) and widget.text():
        margins = 16 if widget.objectName() == "offer" else 28
        return widget.text().replace("&", ""), widget.width() - margins - 2
    if isinstance(widget, QLineEdit):
        return widget.text() or widget.placeholderText(), widget.contentsRect().width() - 4
    return "", 0


def _words(label: QLabel) -> list[str]:
    return label.text().replace("/", " ").replace("-", " ").split()


def _overhanging(widget: QWidget) -> list[str]:
    """A widget that reaches over its parent's right edge is cut there, whatever room it has for itself."""
    parent = widget.parentWidget()
    if parent is None or widget.isWindow() or not widget.isVisible():
        return []
    over = widget.geometry().right() > parent.rect().right() + 1
    return [f"{widget!r} reaches over {parent!r}: {widget.geometry()} in {parent.size()}"] if over else []


def paints_itself(widget: QWidget) -> bool:
    """Whether the widget is one of ours that draws what it says."""
    return any("paintEvent" in vars(kind) for kind in type(widget).__mro__ if kind.__module__.startswith("clinicalc"))


@contextmanager
def watched_painting(monkeypatch: pytest.MonkeyPatch) -> Iterator[list[str]]:
    """Lists every text that a widget of ours paints itself and that is shortened, too wide, or painted over another."""
    found: list[str] = []
    before: list[tuple[QPainter, str, QRectF]] = []
    elide, draw = QFontMetrics.elidedText, QPainter.drawText

    def watched_elide(metrics: QFontMetrics, text: str, *rest: Any) -> str:
        shown = elide(metrics, text, *rest)
        if shown != text:
            found.append(f"{text!r} shortened to {shown!r}")
        return shown

    def watched_draw(painter: QPainter, *drawn: Any) -> Any:
        if isinstance(drawn[0], (QRect, QRectF)):
            text = next(part for part in drawn if isinstance(part, str))
            needed = painter.fontMetrics().horizontalAdvance(text)
            if needed > drawn[0].width() + 0.5:
                found.append(f"{text!r} of {needed} painted in {drawn[0].width()}")
            if isinstance(drawn[1], int | Qt.AlignmentFlag | Qt.TextFlag):
                place = painter.transform().mapRect(painter.boundingRect(QRectF(drawn[0]), int(drawn[1]), text))
                others = [words for by, words, there in before if by is painter and there.intersects(place)]
                found.extend(f"{text!r} painted over {other!r}" for other in others)
                before[:] = [*(entry for entry in before if entry[0] is painter), (painter, text, place)]
        return draw(painter, *drawn)

    with monkeypatch.context() as patch:
        patch.setattr(QFontMetrics, "elidedText", watched_elide)
        patch.setattr(QPainter, "drawText", watched_draw)
        yield found


def access_letters(root: QWidget) -> list[str]:
    """Every letter that Alt reaches on screen, once for each widget that claims it."""
    texts = [w.text() for w in on_screen(root) if isinstance(w, QAbstractButton)]
    texts += [w.text() for w in on_screen(root) if isinstance(w, QLabel) and w.buddy() is not None]
    bare = [text.replace("&&", "") for text in texts]
    return [text[text.index("&") + 1].lower() for text in bare if "&" in text]


def tab_walk(root: QWidget, first: QWidget) -> list[QWidget]:
    """The widgets at which the tab key stops, from `first` on until it comes round."""
    seen: list[QWidget] = []
    first.setFocus(Qt.FocusReason.TabFocusReason)
    for _ in range(200):
        settle()
        now = QApplication.focusWidget()
        if now is None or now in seen:
            return seen
        seen.append(now)
        root.focusNextChild()
    raise AssertionError("the tab key never comes round")


def place_in(widget: QWidget, body: QWidget) -> tuple[int, int]:
    """The middle of a widget from the top of `body`: down, then to the right."""
    middle = widget.mapTo(body, QPoint(widget.width() // 2, widget.height() // 2))
    return middle.y(), middle.x()
