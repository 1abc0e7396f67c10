"""The settings as the text of a file: every setting on its own line, then the tables."""

from clinicalc.settings.points_table import spell_points
from clinicalc.settings.settings import Settings
from clinicalc.settings.toml_text import quote_toml

_HEAD = "# Settings of clinicalc for this user on this machine. Nothing about a patient belongs here.\n"


def spell(settings: Settings) -> str:
    """The whole text, the files opened lately and the lines of the letterhead one below the other."""
    lines = "".join(f"{key} = {value}\n" for key, value in spelled_values(settings))
    return f"{_HEAD}{lines}{spell_units(settings)}{spell_points(settings.decision_points)}"


def spelled_values(settings: Settings) -> tuple[tuple[str, str], ...]:
    """Every setting that is not a table, by its key: the value as TOML has it."""
    return (
        ("theme", quote_toml(settings.theme)),
        ("practice", quote_toml(settings.practice)),
        ("letterhead", _spell_list(settings.letterhead)),
        ("paper", quote_toml(settings.paper)),
        ("level", repr(settings.level)),
        ("library", quote_toml(settings.library)),
        ("practice_key", quote_toml(settings.practice_key)),
        ("recent_files", _spell_list(settings.recent_files)),
    )


def spell_units(settings: Settings) -> str:
    """The table of preferred units, one blank line before it; "" where there are none."""
    lines = "".join(f"{one.quantity} = {quote_toml(one.unit)}\n" for one in settings.units)
    return f"\n[units]\n{lines}" if lines else ""


def _spell_list(texts: tuple[str, ...]) -> str:
    inside = "".join(f"    {quote_toml(text)},\n" for text in texts)
    return f"[\n{inside}]" if inside else "[]"
