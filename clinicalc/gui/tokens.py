"""Colours and measures of the window, in one place; every widget and painter reads them here."""

from dataclasses import dataclass

from PySide6.QtGui import QColor, QPalette


@dataclass(frozen=True, slots=True)
class Tokens:
    """One theme. Each pair of text and ground stands at 4.5:1 or better, control edges at 3:1."""

    ground: str
    sheet: str
    field: str
    ink: str
    soft: str
    rule: str
    edge: str
    accent: str
    on_accent: str
    tint: str
    wash: str
    sel: str
    hatch: str


LIGHT = Tokens(
    ground="#EDEFF2",
    sheet="#FFFFFF",
    field="#FFFFFF",
    ink="#171B2B",
    soft="#505869",
    rule="#D3D7DE",
    edge="#7E8696",
    accent="#47378F",
    on_accent="#FFFFFF",
    tint="#CDC5EC",
    wash="#F3F1FA",
    sel="#E7E3F6",
    hatch="#8D93A3",
)

DARK = Tokens(
    ground="#12141B",
    sheet="#1A1D26",
    field="#0F1117",
    ink="#E9EBF1",
    soft="#A7AEBE",
    rule="#343946",
    edge="#788094",
    accent="#B9AEF6",
    on_accent="#15122B",
    tint="#453D7C",
    wash="#1F222F",
    sel="#2F2B4A",
    hatch="#6C7488",
)

RING = 3
"""Room round a frame for its focus ring, in pixels."""
FRAME_HEIGHT = 30
ROW_PITCH = FRAME_HEIGHT + 2 * RING
LABEL_WIDTH = 128
FRAME_WIDTH = 172
VALUE_WIDTH = 62
COLUMN_GAP = 6
SIDE_MARGIN = 24
SHEET_MARGIN = 32
SHEET_MARGIN_RIGHT = 28
FIGURE_COLUMN = 248
"""Width of the label and figure columns of the sheet; text, and later charts, begin 24 px further right."""
PANE_WIDTH = 512
PANE_WIDTH_COMPACT = 392
COMPACT_BELOW = 1180
"""Window width under which the values pane is the narrow one and remarks go on a line of their own."""


def make_palette(tokens: Tokens) -> QPalette:
    """The palette roles that stock widgets read, every one of them: one left to the system would be of its theme."""
    palette = QPalette()
    roles = {
        QPalette.ColorRole.Light: tokens.sheet,
        QPalette.ColorRole.Midlight: tokens.wash,
        QPalette.ColorRole.Mid: tokens.rule,
        QPalette.ColorRole.Dark: tokens.edge,
        QPalette.ColorRole.Shadow: tokens.edge,
        QPalette.ColorRole.BrightText: tokens.ink,
        QPalette.ColorRole.Link: tokens.accent,
        QPalette.ColorRole.LinkVisited: tokens.accent,
        QPalette.ColorRole.Accent: tokens.accent,
        QPalette.ColorRole.Window: tokens.ground,
        QPalette.ColorRole.WindowText: tokens.ink,
        QPalette.ColorRole.Base: tokens.field,
        QPalette.ColorRole.AlternateBase: tokens.wash,
        QPalette.ColorRole.Text: tokens.ink,
        QPalette.ColorRole.Button: tokens.field,
        QPalette.ColorRole.ButtonText: tokens.ink,
        QPalette.ColorRole.Highlight: tokens.accent,
        QPalette.ColorRole.HighlightedText: tokens.on_accent,
        QPalette.ColorRole.ToolTipBase: tokens.sheet,
        QPalette.ColorRole.ToolTipText: tokens.ink,
        QPalette.ColorRole.PlaceholderText: tokens.soft,
    }
    for role, colour in roles.items():
        palette.setColor(role, QColor(colour))
    for role in (QPalette.ColorRole.WindowText, QPalette.ColorRole.Text, QPalette.ColorRole.ButtonText):
        palette.setColor(QPalette.ColorGroup.Disabled, role, QColor(tokens.soft))
    return palette


def make_style_sheet(tokens: Tokens) -> str:
    """The few rules that a palette cannot express. The ink of a label is set as its property by `labels`."""
    return _words_and_panes(tokens) + _buttons(tokens) + _parts_of_qt(tokens)


def _words_and_panes(t: Tokens) -> str:
    return f"""
    QLabel {{ color: {t.ink}; background: transparent; }}
    QLabel[ink="soft"] {{ color: {t.soft}; }}
    QLabel[ink="accent"] {{ color: {t.accent}; }}
    QLabel#plate {{ background: {t.sheet}; padding: 0 10px; }}
    QFrame#stop {{ border: 2px solid {t.ink}; border-radius: 3px; background: transparent; }}
    QFrame#rule {{ background: {t.rule}; border: none; }}
    QLineEdit {{ border: none; background: transparent; color: {t.ink}; placeholder-text-color: {t.soft}; }}
    QLineEdit[ink="soft"] {{ color: {t.soft}; }}
    QPlainTextEdit {{ border: 1px solid {t.edge}; border-radius: 3px; background: {t.field}; padding: 8px; }}
    QPlainTextEdit:focus {{ border: 2px solid {t.accent}; padding: 7px; }}
    QScrollArea {{ border: none; background: transparent; }}
    QScrollArea#sheet_scroll {{ border: 2px solid {t.sheet}; }}
    QScrollArea#sheet_scroll:focus {{ border: 2px solid {t.accent}; }}
    QWidget#ground {{ background: {t.ground}; }}
    QWidget#sheet {{ background: {t.sheet}; }}
    """


def _buttons(t: Tokens) -> str:
    return f"""
    QPushButton {{ border: 1px solid {t.edge}; border-radius: 3px; background: {t.field}; color: {t.ink};
                   padding: 0 14px; min-height: 30px; }}
    QPushButton:pressed {{ background: {t.sel}; }}
    QPushButton:focus {{ border: 2px solid {t.accent}; padding: 0 13px; min-height: 28px; }}
    QPushButton:disabled {{ color: {t.soft}; background: {t.ground}; border-color: {t.rule}; }}
    QPushButton#primary:enabled {{ background: {t.accent}; color: {t.on_accent}; border-color: {t.accent}; }}
    QPushButton#primary:enabled:focus {{ border: 2px solid {t.ink}; }}
    QPushButton#offer {{ padding: 0 8px; min-height: 26px; border-color: {t.ink}; }}
    QPushButton#offer:focus {{ border: 2px solid {t.accent}; padding: 0 7px; min-height: 24px; }}
    """


def _parts_of_qt(t: Tokens) -> str:
    """What Qt brings along: its file and print dialogs, tips, menus, scroll bars, lists of choosers."""
    return f"""
    QToolTip {{ background: {t.sheet}; color: {t.ink}; border: 1px solid {t.edge}; padding: 4px; }}
    QMenu {{ background: {t.field}; color: {t.ink}; border: 1px solid {t.edge}; padding: 4px; }}
    QMenu::item {{ padding: 5px 24px; }}
    QMenu::item:selected {{ background: {t.sel}; }}
    QMenu::item:disabled {{ color: {t.soft}; }}
    QMenu::separator {{ height: 1px; background: {t.rule}; margin: 4px 0; }}
    QFileDialog QLineEdit, QPrintDialog QLineEdit {{ border: 1px solid {t.edge}; border-radius: 3px;
                   background: {t.field}; min-height: 24px; padding: 0 4px; }}
    QFileDialog QLineEdit:focus, QPrintDialog QLineEdit:focus {{ border: 2px solid {t.accent}; padding: 0 3px; }}
    QScrollBar:vertical {{ background: transparent; width: 10px; margin: 0; }}
    QScrollBar::handle:vertical {{ background: {t.edge}; border-radius: 2px; min-height: 32px; margin: 3px; }}
    QScrollBar::handle:vertical:disabled {{ background: transparent; }}
    QScrollBar:horizontal {{ background: transparent; height: 10px; margin: 0; }}
    QScrollBar::handle:horizontal {{ background: {t.edge}; border-radius: 2px; min-width: 32px; margin: 3px; }}
    QScrollBar::add-line, QScrollBar::sub-line, QScrollBar::add-page, QScrollBar::sub-page
                   {{ background: none; border: none; width: 0; height: 0; }}
    QComboBox QAbstractItemView {{ background: {t.field}; color: {t.ink}; border: 1px solid {t.edge};
                   selection-background-color: {t.sel}; selection-color: {t.ink}; padding: 2px; }}
    """
