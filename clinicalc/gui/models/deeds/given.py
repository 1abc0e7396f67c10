"""What a deed is given: its name where it is about the library, the key file used last, what stands on the card."""

from dataclasses import dataclass
from datetime import date
from enum import Enum

from clinicalc.library.records import Compared


class LibraryDeed(Enum):
    """What is done with the library as a whole; what is done with one model is a `Deed` of its card."""

    HISTORY = "history"
    EXPORT = "export"
    BRING_IN = "bring in"
    PEOPLE = "people"


@dataclass(slots=True)
class LastKey:
    """The key files used last in this window, a person's and the practice's: paths and nothing else, never kept."""

    path: str = ""
    practice: str = ""


@dataclass(frozen=True, slots=True)
class Given:
    """What was entered on the card itself before the deed was opened."""

    typed_fingerprint: str = ""
    compared: tuple[Compared, ...] = ()
    review_until: date | None = None
    """The day beside "Approve until"; a year from today where it is None."""
