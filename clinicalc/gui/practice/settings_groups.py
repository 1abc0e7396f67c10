"""The groups of the settings page: practice, numbers, paper and colours; each row changes one setting."""

from dataclasses import replace

from PySide6.QtWidgets import QVBoxLayout, QWidget

from clinicalc.assessment.fields import AnswerOption
from clinicalc.errors import UsageError
from clinicalc.gui import theme
from clinicalc.gui.labels import Heading, make_label
from clinicalc.gui.practice.points_editor import PointsEditor
from clinicalc.gui.practice.setting_row import SettingRow, TextSetting
from clinicalc.gui.practice.typed_shares import read_share, share_words
from clinicalc.gui.preferences import Preferences
from clinicalc.gui.segments import Segments
from clinicalc.gui.typeface import UNIT
from clinicalc.settings import LONGEST_LINE, MOST_LINES, Paper, Settings, ThemeChoice
from clinicalc.settings.settings import HIGHEST_LEVEL, LOWEST_LEVEL
from clinicalc.units.quoting import quote

_NARROW = "\N{NARROW NO-BREAK SPACE}"
_THEMES = (
    AnswerOption(ThemeChoice.SYSTEM, "As the system"),
    AnswerOption(ThemeChoice.LIGHT, "Light"),
    AnswerOption(ThemeChoice.DARK, "Dark"),
)
_PAPERS = tuple(AnswerOption(paper, paper.value) for paper in Paper)
_POINTS = (
    "Decision points: probabilities at which this practice acts. They hold for files that are tried out; an approved"
    " model has those of its approval."
)


class Group(QWidget):
    """A heading and rows under it."""

    def __init__(self, title: str, preferences: Preferences) -> None:
        super().__init__()
        self._preferences = preferences
        self.column = QVBoxLayout(self)
        self.column.setContentsMargins(0, 0, 0, 0)
        self.column.setSpacing(6)
        self.column.addWidget(Heading(title))
        self._rows: list[SettingRow] = []

    def add_row(self, row: SettingRow) -> None:
        """One more row."""
        self._rows.append(row)
        self.column.addWidget(row)

    def set_narrow(self, narrow: bool) -> None:
        """Names over the fields, or beside them."""
        for row in self._rows:
            row.set_narrow(narrow)

    def restore(self) -> bool:
        """Show what is in force where something else is being typed; whether there was such."""
        return any(row.restore() for row in self._rows)

    def change(self, **changed: object) -> None:
        """Take changed settings. Raises UsageError where they cannot be."""
        self._preferences.take(replace(self._preferences.settings, **changed))  # type: ignore[arg-type]


class PracticeGroup(Group):
    """Name and letterhead."""

    def __init__(self, preferences: Preferences) -> None:
        super().__init__("Practice", preferences)
        self.name = TextSetting("&Name", "In the bar of every window, and on prints where there is no letterhead.")
        self.letterhead = TextSetting(
            "&Letterhead",
            f"Over prints for clinician and patient, up to {MOST_LINES} lines of {LONGEST_LINE} characters. Where they"
            " would take a further page they are set closer, and at last the name stands alone.",
            lines=MOST_LINES,
        )
        self.add_row(self.name)
        self.add_row(self.letterhead)
        self.name.taken.connect(lambda: self.name.take(lambda: self.change(practice=self.name.text)))
        self.letterhead.taken.connect(
            lambda: self.letterhead.take(lambda: self.change(letterhead=self.letterhead.lines))
        )

    def show_settings(self, settings: Settings) -> None:
        """Show what is in force."""
        self.name.show_lines((settings.practice,))
        self.letterhead.show_lines(settings.letterhead)


class NumbersGroup(Group):
    """Level of the band, and decision points."""

    def __init__(self, preferences: Preferences) -> None:
        super().__init__("Numbers", preferences)
        self.level = TextSetting(
            "&Band level",
            f"From 50 to 99.9{_NARROW}%, usually 95{_NARROW}%. A number on screen gets its new band at once.",
            width=110,
        )
        self.points = PointsEditor(self.level.fields[0].edit)
        self.add_row(self.level)
        self.column.addWidget(make_label(_POINTS))
        self.column.addWidget(self.points)
        self.level.taken.connect(lambda: self.level.take(self._take_level))
        self.points.changed.connect(lambda points: self.change(decision_points=points))

    def show_settings(self, settings: Settings) -> None:
        """Show what is in force."""
        self.level.show_lines((share_words(settings.level),))
        self.points.show_points(settings.decision_points)

    def set_narrow(self, narrow: bool) -> None:
        """The fields of a new decision point too."""
        super().set_narrow(narrow)
        self.points.set_narrow(narrow)

    def restore(self) -> bool:
        """Close the fields of a new decision point too."""
        return any([super().restore(), self.points.restore()])

    def _take_level(self) -> None:
        level = read_share(self.level.text, "the band level")
        if not LOWEST_LEVEL <= level <= HIGHEST_LEVEL:
            limits = f"{share_words(LOWEST_LEVEL)} to {share_words(HIGHEST_LEVEL)}"
            raise UsageError(f"{quote(self.level.text)} lies outside {limits}.")
        self.change(level=level)


class PaperGroup(Group):
    """Paper and colours."""

    def __init__(self, preferences: Preferences) -> None:
        super().__init__("Paper and colours", preferences)
        self.paper = Segments(_PAPERS, "Paper", 420)
        self.theme = Segments(_THEMES, "Colours", 420)
        for segments in (self.paper, self.theme):
            segments.fit(420)
        self.add_row(SettingRow("&Paper", self.paper, self.paper, "What prints begin with; the preview offers both."))
        self.add_row(SettingRow("&Colours", self.theme, self.theme, "Prints are always light."))
        self.paper.chosen.connect(lambda id: self.change(paper=Paper(id)))
        self.theme.chosen.connect(self._choose_theme)

    def show_settings(self, settings: Settings) -> None:
        """Show what is in force."""
        self.paper.choose(settings.paper)
        self.theme.choose(settings.theme)

    def _choose_theme(self, id: str) -> None:
        theme.choose(ThemeChoice(id))
        self.change(theme=ThemeChoice(id))


def explained(words: str) -> QWidget:
    """A sentence under a heading."""
    return make_label(words, UNIT, soft=True)
