"""Days as people write them: "1 December 2026". Never by the locale, so that every window and print reads the same."""

from datetime import date, datetime

_MONTHS = (
    "January",
    "February",
    "March",
    "April",
    "May",
    "June",
    "July",
    "August",
    "September",
    "October",
    "November",
    "December",
)


def day_words(moment: date) -> str:
    """A day in words: "1 December 2026"."""
    return f"{moment.day} {_MONTHS[moment.month - 1]} {moment.year}"


def read_day_words(text: str) -> date | None:
    """The day that "2027-11-30" or "30 November 2027" names; None for anything else."""
    parts = text.split()
    try:
        if len(parts) == 3:
            months = [month.casefold() for month in _MONTHS]
            return date(int(parts[2]), months.index(parts[1].casefold()) + 1, int(parts[0]))
        return date.fromisoformat(text) if len(text) == len("2027-11-30") else None
    except ValueError:
        return None


def stated_day(text: str) -> str:
    """The day in words that "2027-11-30" is, or on which "2026-12-01T10:00:00Z" falls by this machine's clock.

    What no calendar has stands as it is, without its time.
    """
    try:
        return day_words(datetime.fromisoformat(text).astimezone())
    except (ValueError, OverflowError):
        return text[:10]
