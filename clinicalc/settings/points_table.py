"""Decision points as `[[decision_points]]` tables of the settings file: read strictly, and written."""

from collections.abc import Iterable, Mapping

from clinicalc.errors import UsageError
from clinicalc.settings.points import POINT_UNITS, PracticePoint
from clinicalc.settings.toml_text import quote_toml, shown_text

_KEYS = ("model", "years", "time", "unit", "probability", "label", "source")
_MEANINGS = {
    "model": 'the id of the model that it belongs to, such as "tarnwick-cvd-10y"',
    "probability": "a probability between 0 and 1, such as 0.1",
    "label": "what the practice does there",
    "source": "who says so, such as a guideline with its year",
}
_HORIZON = 'it needs a horizon: years = 10, or a time and its unit, such as time = 90 and unit = "d".'


def take_point(table: object) -> PracticePoint:
    """The decision point that one table states. Raises UsageError, naming the part, where it states none."""
    if not isinstance(table, dict):
        raise UsageError("it is not a table; each point begins with a line [[decision_points]].")
    for key in table:
        if key not in _KEYS:
            raise UsageError(f"{shown_text(key)} is no part of it; its parts are {', '.join(_KEYS)}.")
    time, unit = _take_horizon(table)
    return PracticePoint(
        model=_take_text(table, "model"),
        time=time,
        unit=unit,
        probability=_take_number(table, "probability"),
        label=_take_text(table, "label"),
        source=_take_text(table, "source"),
    )


def spell_points(points: Iterable[PracticePoint]) -> str:
    """The tables as text of the file, one blank line before each."""
    return "".join(
        f"\n[[decision_points]]\nmodel = {quote_toml(point.model)}\n{_spell_horizon(point)}"
        f"probability = {point.probability!r}\nlabel = {quote_toml(point.label)}\nsource = {quote_toml(point.source)}\n"
        for point in points
    )


def _spell_horizon(point: PracticePoint) -> str:
    time = int(point.time) if float(point.time).is_integer() else point.time
    return f"years = {time!r}\n" if point.unit == "a" else f'time = {time!r}\nunit = "{point.unit}"\n'


def _take_horizon(table: Mapping[str, object]) -> tuple[float, str]:
    if "years" in table and "time" not in table and "unit" not in table:
        return _take_number(table, "years"), "a"
    if "years" in table or "time" not in table or "unit" not in table:
        raise UsageError(_HORIZON)
    unit = table["unit"]
    if not isinstance(unit, str) or unit not in POINT_UNITS:
        raise UsageError(f"its unit is none of {', '.join(POINT_UNITS)}.")
    return _take_number(table, "time"), unit


def _take_text(table: Mapping[str, object], key: str) -> str:
    value = _find(table, key)
    if not isinstance(value, str):
        raise UsageError(f"its {key} is a text between quotation marks: {_MEANINGS[key]}.")
    return value


def _take_number(table: Mapping[str, object], key: str) -> float:
    value = _find(table, key)
    if isinstance(value, bool) or not isinstance(value, int | float):
        such = _MEANINGS.get(key, "such as 10")
        raise UsageError(f"its {key} is a number without quotation marks: {such}.")
    try:
        return float(value)
    except OverflowError:
        raise UsageError(f"its {key} is too large.") from None


def _find(table: Mapping[str, object], key: str) -> object:
    if key not in table:
        raise UsageError(f"its {key} is missing: {_MEANINGS[key]}.")
    return table[key]
