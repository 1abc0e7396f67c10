"""The group of preferred units."""

from clinicalc.gui.practice.settings_groups import Group, explained
from clinicalc.gui.practice.units_table import UnitsTable
from clinicalc.gui.preferences import Preferences
from clinicalc.settings import Settings

_SAYS = (
    "The unit beside a field in which nothing is typed yet, where the model’s file offers it. A value is never"
    " converted by this: what is typed, with the unit beside it, stays what it is."
)


class UnitsGroup(Group):
    """One chooser for each quantity that has more than one unit."""

    def __init__(self, preferences: Preferences) -> None:
        super().__init__("Units", preferences)
        self.table = UnitsTable()
        self.column.addWidget(explained(_SAYS))
        self.column.addWidget(self.table)
        self.table.chosen.connect(lambda id, unit: preferences.take(preferences.settings.with_unit(id, unit)))

    def show_settings(self, settings: Settings) -> None:
        """Show what is in force."""
        self.table.show_settings(settings)

    def set_narrow(self, narrow: bool) -> None:
        """One column or two."""
        self.table.set_narrow(narrow)
