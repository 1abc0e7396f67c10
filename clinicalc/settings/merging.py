"""Two windows, one file: only what a window changed is carried into what the file says now."""

from dataclasses import fields, replace

from clinicalc.errors import UsageError
from clinicalc.settings.points import MOST_POINTS
from clinicalc.settings.settings import MOST_RECENT, Settings

_JOINED = ("recent_files", "decision_points", "units")
"""Settings of several entries, of which each is carried over by itself."""


def carry_over(before: Settings, after: Settings, now: Settings) -> Settings:
    """`now` with what differs between `before` and `after`.

    Of files, decision points and units only the entries that came or went are carried over. Raises UsageError where
    another window has meanwhile added so many decision points that there is no room for one more.
    """
    changed = {
        field.name: getattr(after, field.name)
        for field in fields(Settings)
        if field.name not in _JOINED and getattr(after, field.name) != getattr(before, field.name)
    }
    merged = replace(now, **changed)
    if after.recent_files != before.recent_files:
        came = [path for path in after.recent_files if path not in before.recent_files]
        newest = dict.fromkeys((*came, *after.recent_files[:1], *now.recent_files))
        merged = replace(merged, recent_files=tuple(newest)[:MOST_RECENT])
    if after.units != before.units:
        merged = _carry_units(before, after, merged)
    return _carry_points(before, after, merged)


def _carry_units(before: Settings, after: Settings, now: Settings) -> Settings:
    for name in {one.quantity for one in (*before.units, *after.units)}:
        if before.unit_of(name) != after.unit_of(name):
            now = now.with_unit(name, after.unit_of(name))
    return now


def _carry_points(before: Settings, after: Settings, now: Settings) -> Settings:
    if after.decision_points == before.decision_points:
        return now
    gone = [point for point in before.decision_points if point not in after.decision_points]
    kept = [point for point in now.decision_points if point not in gone]
    came = [point for point in after.decision_points if point not in before.decision_points and point not in kept]
    if len(kept) + len(came) > MOST_POINTS:
        raise UsageError(
            f"there are {len(kept)} decision points in the settings file already, and at most {MOST_POINTS} are kept.",
            do="Another window has added some. Open the settings again and take one out first.",
        )
    return replace(now, decision_points=(*kept, *came))
