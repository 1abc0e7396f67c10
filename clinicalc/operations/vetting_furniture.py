"""What stands at head and foot of a print of the library, and the sentences that every such print carries."""

from datetime import datetime

from clinicalc import __version__
from clinicalc.coefficients.fingerprint import group_fingerprint
from clinicalc.library.opening import OpenedLibrary
from clinicalc.report.contents import Furniture
from clinicalc.report.phrases import moment_words, zone_words
from clinicalc.units.days import stated_day

NO_AUTHORITY = (
    "This print repeats what the practice’s own records say. The program advises nothing and claims no approval by any"
    " authority; an approval is a statement by a person of the practice and does not make a model right."
)
NOT_THE_PAPER = (
    "What counts at the bedside is the signed record in the library, not this paper and not a signature on it. Later"
    " records are not on it: print it again, or look at the library, before you rely on it."
)


def furnish(
    label: str,
    practice: str,
    *,
    model: str,
    identity: str = "",
    fingerprint: str = "",
    strip: str = "",
    caution: str = "",
) -> Furniture:
    """Head and foot. `label` stands at the head of later pages, `model` and `identity` at the foot of each.

    `fingerprint` is the whole one, "" for none; `strip` the words of the hatched strip. `caution` stands over the foot
    of the first page; left out, it is what to know before relying on the print.
    """
    return Furniture(
        practice=practice,
        label=label,
        strip=strip,
        fingerprint_note=f"Fingerprint {group_fingerprint(fingerprint)}" if fingerprint else "",
        caution=caution or f"{NOT_THE_PAPER} {NO_AUTHORITY}",
        model=model,
        fingerprint=identity or (group_fingerprint(fingerprint, 3) if fingerprint else ""),
        program=f"clinicalc {__version__}",
        printed="",
    )


def say_reading(opened: OpenedLibrary) -> tuple[str, ...]:
    """Which library was read, when and how: what a print of it is as of."""
    read = opened.opened_at
    authority = opened.authority
    library = f"library of {authority.practice}" if authority.practice else "library"
    how = "" if opened.reachable else " from this machine’s own verified copy, because the library was out of reach"
    said = f"As of the reading of the {library} on {moment_words(read)} {zone_words(read)}{how}.".replace(" .", ".")
    return (said, *(fault.sentence for fault in opened.faults))


def say_written(text: str) -> tuple[str, str]:
    """The day on which a record says that it was written, by this machine's clock, and the time with its zone."""
    try:
        moment = datetime.fromisoformat(text).astimezone()
    except (ValueError, OverflowError):
        return text, ""
    return stated_day(text), f"{moment:%H:%M} {zone_words(moment)}"
