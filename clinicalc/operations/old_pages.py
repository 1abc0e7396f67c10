"""The pages of an old print against the same print laid out anew, page by page."""

import re
import unicodedata
from collections.abc import Iterator
from dataclasses import dataclass, replace
from datetime import datetime, timedelta, timezone

from clinicalc.assessment.result import Assessment
from clinicalc.errors import PrintRefused
from clinicalc.operations.old_print import OldPrint, read_pages
from clinicalc.report.compose_beside import REBUILT_BELOW
from clinicalc.report.matching_age_words import MATCHING_AGE_MEANING
from clinicalc.report.paper import Paper
from clinicalc.report.parts import PrintParts
from clinicalc.report.phrases import NO_LABEL, NOT_VETTED
from clinicalc.report.phrases_comparison import NO_PROMISE
from clinicalc.report.shares_figure import SHARES_MEANING
from clinicalc.units.days import day_words

_MONTHS = {day_words(datetime(2000, month, 1)).split()[1]: month for month in range(1, 13)}
_ASSESSED = (
    rf"assessed (?P<day>\d{{1,2}}) (?P<month>{'|'.join(_MONTHS)}) (?P<year>\d{{4}}), (?P<hour>\d\d):(?P<minute>\d\d)"
    r"(?: UTC(?P<sign>[+−])(?P<hours>\d\d):(?P<minutes>\d\d))?"
)
_FOR_CLINICIAN, _FOR_PATIENT = "For the clinician", "For the patient, page"
_NAMED = rf"\s*(?P<first>.*?)\s*{_ASSESSED}\s*\n(?P<rest>.*)"
_BELOW_STRIP = re.compile(re.escape(NOT_VETTED) + _NAMED, re.DOTALL)
_BELOW_HEAD = re.compile(rf"{_FOR_CLINICIAN}, page 1 of \d+{_NAMED}", re.DOTALL)
"""Where the file was approved, no strip stands over the label."""
_PRINTED = re.compile(rf"Printed \d{{1,2}} (?:{'|'.join(_MONTHS)}) \d{{4}}, \d\d:\d\d")
_PROGRAM = re.compile(r"clinicalc \d[\w.+]*")
"""The version in the foot: another one that lays out the same pages is no deviation."""
_NO_SHARES = "No shares:"


@dataclass(frozen=True, slots=True)
class PageFault:
    """A page that is not as it was laid out: its name, the first line that deviates, and that line laid out anew."""

    page: str
    old: str
    new: str


def compare_pages(old: OldPrint, now: Assessment) -> tuple[PageFault, ...]:
    """Every page of the print whose text is not that of the assessment's own print; then a wrong number of pages.

    What the record does not hold is taken from the print as it stands: practice name, letterhead, label, the times of
    assessment and printing, the paper, and which parts were chosen.
    """
    parts = _parts(old)
    moment = _assessed(old) or now.at
    attempts: list[tuple[PageFault, ...]] = []
    for label in _labels(old, now):
        try:
            pages = _lay_out(old, replace(now, label=label, at=moment), parts)
        except PrintRefused as error:
            attempts.append((PageFault("The pages", "cannot be laid out again", error.what),))
            continue
        attempts.append(tuple(_faults(old, pages)))
    return min(attempts, key=len)


def _parts(old: OldPrint) -> PrintParts:
    """What the print has beside its number: each part by the words that stand in no print without it."""
    text = _letters(old.text)

    def stands(words: str) -> bool:
        return _letters(words) in text

    return PrintParts(
        patient_page=bool(old.pages) and _FOR_PATIENT in old.pages[-1],
        comparison=stands(NO_PROMISE),
        shares=stands(SHARES_MEANING) or stands(_NO_SHARES),
        matching_age=stands(MATCHING_AGE_MEANING),
        assumptions=stands(REBUILT_BELOW),
    )


def _lay_out(old: OldPrint, assessment: Assessment, parts: PrintParts) -> tuple[str, ...]:
    from clinicalc.report.pdf import make_report  # the layout of pages is loaded by the first print

    paper = Paper.LETTER if abs(old.width - Paper.LETTER.width) < 1 else Paper.A4
    pdf = make_report(
        assessment,
        practice=old.practice,
        printed_at=old.made or assessment.at,
        parts=parts,
        paper=paper,
        letterhead=old.letterhead,
    )
    return read_pages(pdf)


def _faults(old: OldPrint, new: tuple[str, ...]) -> Iterator[PageFault]:
    for number, (one, other) in enumerate(zip(old.pages, new, strict=False), 1):
        one, other = (_PROGRAM.sub("", text) for text in (one, other))
        if old.made is None:  # no time to print there again
            one, other = (_PRINTED.sub("", text) for text in (one, other))
        if _letters(one) != _letters(other):
            yield PageFault(f"Page {number}", *_first_deviation(one, other))
    if len(old.pages) != len(new):
        yield PageFault("Number of pages", str(len(old.pages)), str(len(new)))


def _letters(text: str) -> str:
    """The text without its white space, which readers of PDF guess from distances."""
    return "".join(text.split())


def _first_deviation(old: str, new: str) -> tuple[str, str]:
    """The first line of each that is not the same; "" where one ends before."""
    lines = [[line.strip() for line in text.splitlines() if line.strip()] for text in (old, new)]
    longest = max(map(len, lines))
    padded = ([*part, *[""] * (longest - len(part))] for part in lines)
    return next(
        ((one, other) for one, other in zip(*padded, strict=True) if _letters(one) != _letters(other)), ("", "")
    )


def _labels(old: OldPrint, now: Assessment) -> tuple[str, ...]:
    """The patient label on the first page; two readings where it was broken into lines. ("",) where none is found."""
    found = _find_head(old)
    if found is None:
        return ("",)
    below = re.search(_wherever_broken(_person_line(now)), found["rest"])
    more = found["rest"][: below.start()].splitlines() if below else []
    parts = [unicodedata.normalize("NFC", part.strip()) for part in (found["first"], *more)]
    labels = dict.fromkeys((" ".join(parts).strip(), "".join(parts).strip()))
    return tuple("" if label == NO_LABEL else label for label in labels)


def _find_head(old: OldPrint) -> re.Match[str] | None:
    """Label and time of assessment at the top of the first page."""
    head = _BELOW_STRIP if old.record.vetting is None else _BELOW_HEAD
    return head.search(old.pages[0]) if old.pages else None


def _person_line(now: Assessment) -> str:
    """What stands under the label."""
    from clinicalc.report.compose import compose  # as for the layout

    return compose(now, practice="", printed_at=now.at).person


def _wherever_broken(words: str) -> str:
    """A pattern of the words on a page, wherever their lines were broken."""
    return r"\s*".join(re.escape(letter) for letter in words if not letter.isspace())


def _assessed(old: OldPrint) -> datetime | None:
    """The time of the assessment as the first page states it; None where it states none."""
    found = _find_head(old)
    if found is None:
        return None
    zone = None
    if found["sign"]:
        ahead = timedelta(hours=int(found["hours"]), minutes=int(found["minutes"]))
        zone = timezone(ahead if found["sign"] == "+" else -ahead)
    day = int(found["year"]), _MONTHS[found["month"]], int(found["day"])
    try:
        return datetime(*day, int(found["hour"]), int(found["minute"]), tzinfo=zone)
    except ValueError:  # a date that is none, as on a changed page
        return None
