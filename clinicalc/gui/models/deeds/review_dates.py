"""The day that is proposed for the next review."""

from datetime import date


def a_year_after(day: date) -> date:
    """The same day of the next year; the 28th for a 29 February."""
    try:
        return day.replace(year=day.year + 1)
    except ValueError:
        return day.replace(year=day.year + 1, day=28)
