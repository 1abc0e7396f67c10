"""That a practice approved the model, by whom, on what day and until when: carried beside a number, changing none."""

from dataclasses import dataclass
from datetime import date


@dataclass(frozen=True, slots=True)
class Vetting:
    """The approval under which a model is used. `by_author`: who approved it had also signed or brought the file.

    `fingerprint` and `library` are 64 hexadecimal digits; `recalibration` is the id of the only one that was approved,
    None where the model is approved as it stands. `compared`: the places of the file that it calls unconfirmed, each
    with who compared the figures there with their source. `caution`: a sentence that goes with every number, "" for
    none; there is one where the library is out of reach and the verified copy on this machine serves.
    """

    practice: str
    approved_by: str
    role: str
    approved_on: date
    review_until: date
    by_author: bool
    fingerprint: str
    library: str
    recalibration: str | None = None
    compared: tuple[tuple[str, str], ...] = ()
    caution: str = ""
