"""An old print worked out again: does a coefficient file still give what the print says?"""

from __future__ import annotations

import re
from collections.abc import Iterator
from dataclasses import dataclass, replace
from datetime import datetime
from typing import TYPE_CHECKING

import msgspec
from msgspec import UNSET

from clinicalc.assessment.choices import LEVELS
from clinicalc.assessment.entry import entry_from_texts
from clinicalc.assessment.model import Model
from clinicalc.assessment.numerals import percent_range
from clinicalc.assessment.record import record_of
from clinicalc.assessment.result import Assessment, Estimate
from clinicalc.assessment.shown_figures import shown_band, shown_probability
from clinicalc.coefficients.fingerprint import group_fingerprint
from clinicalc.errors import ClinicalcError
from clinicalc.operations.bedside import assess_patient
from clinicalc.operations.differences import NOTHING, Difference
from clinicalc.operations.old_pages import compare_pages
from clinicalc.operations.old_print import OldPrint
from clinicalc.operations.old_record import Record
from clinicalc.operations.old_vetting import compare_vetting, say_approval, vetting_of
from clinicalc.operations.recheck_beside import asks_for_matching_age, changes_of, practice_points_of
from clinicalc.operations.record_differences import compare_records, recorded_span
from clinicalc.report.on_the_ruler import stated_points
from clinicalc.report.phrases import moment_words, zone_words
from clinicalc.units.quoting import visible

if TYPE_CHECKING:
    from clinicalc.library.opening import OpenedLibrary  # most checks name a file


@dataclass(frozen=True, slots=True)
class Recheck:
    """What came of working a print out again. `now` is the assessment that the model gives today.

    `library`: where model and approval were looked up, None where a file was named.
    """

    print: OldPrint
    now: Assessment
    same_model: bool
    differences: tuple[Difference, ...]
    library: OpenedLibrary | None = None

    @property
    def agrees(self) -> bool:
        """Whether everything in the record and on the pages is as the model gives it now."""
        return self.same_model and not self.differences


def recheck(old: OldPrint, model: Model, library: OpenedLibrary | None = None) -> Recheck:
    """The print worked out again with `model`, from all that was typed, chosen and asked for when it was made.

    That is values and changes as typed, horizon, recalibration, level, the practice's decision points of the time, and
    the matching age. Findings about dates are judged as of the time at which the print was made. The approval is taken
    as the record states it, and with a `library` set against what that holds. Raises ClinicalcError where the record
    asks for a level of which no band can be made, or holds a decision point or a date of approval that cannot be one;
    never for anything else that stands in it.
    """
    record = old.record
    if not LEVELS[0] <= record.level <= LEVELS[1]:
        raise ClinicalcError(
            f"the record asks for a band at the level {record.level:g}, which this program never makes.",
            where=old.name,
            why="The record was changed, or another program wrote it.",
            do="Give the PDF as this program saved it.",
        )
    typed = {value.id: value.typed for value in (*record.values, *record.derived) if value.typed}
    span = recorded_span(record)
    now = assess_patient(
        model,
        replace(entry_from_texts(typed), changes=changes_of(record)),
        span=span,
        recalibration=record.recalibration,
        level=record.level,
        at=old.made,
        practice_points=practice_points_of(record, span, old.name),
        matching_age=asks_for_matching_age(record),
        vetting=vetting_of(record, old.name),
    )
    fresh = msgspec.convert(record_of(now), Record)
    same_model = record.model.fingerprint == fresh.model.fingerprint
    labels = {line.id: line.label for line in now.values}
    differences = [*compare_records(record, fresh, labels), *_compare_pages(old, now)]
    if library is not None:
        differences += compare_vetting(record, library)
    return Recheck(old, now, same_model, tuple(differences), library)


def report_recheck(found: Recheck) -> tuple[str, ...]:
    """The verdict in sentences, the first of which says whether print and model agree."""
    old, now = found.print, found.now
    record = old.record
    lines = [_verdict(found), f"{old.name}: {_made(old.made)}"]
    recorded = f"version {visible(record.model.version)}, fingerprint {_first_groups(record.model.fingerprint)}"
    if found.same_model:
        lines.append(f"Model: {now.model.content.title}, {recorded}: the same file.")
    else:
        own = f"version {now.model.content.version}, fingerprint {group_fingerprint(now.model.fingerprint, 3)}"
        lines.append(f"Model: another file. The print was made with {visible(record.model.title)}, {recorded}.")
        lines.append(f"{now.model.name} is {now.model.content.title}, {own}.")
    if now.estimate is None:
        lines.append("This file gives no number for the values in the record.")
    else:
        within = "" if now.span is None else f" within {now.span.words}"
        lines.append(f"Worked out now: {shown_probability(now)}{within}.")
    lines += [f"Differs: {difference.sentence}" for difference in found.differences]
    lines += say_approval(record, found.library)
    if record.spread is UNSET and found.differences:
        lines.append(
            "An earlier version of the program made this print and said less beside the number. Findings and lines that"
            " this version adds count as differences; compare number, band and values."
        )
    lines.append(
        "The text of every page was compared with the same print laid out again by this version of the program; another"
        " version may have worded or parted its pages differently."
        if found.same_model
        else "The pages were not compared: they belong to another file."
    )
    lines.append(
        "The record holds no patient label, no practice name and no time of assessment, so these were taken from the"
        " print as they stand, and drawings were not compared. Somebody who changes record, pages and values together"
        " is not found out by this."
    )
    return tuple(lines)


def _verdict(found: Recheck) -> str:
    if found.agrees:
        return "Agrees: the model gives everything in this print’s record again, and every page reads as laid out."
    if found.differences:
        count = len(found.differences)
        return f"Does not agree: {'1 thing differs' if count == 1 else f'{count} things differ'}, named below."
    return "Does not agree: the print was made with another file. Everything else is the same."


def _made(made: datetime | None) -> str:
    if made is None:
        return "does not say when it was made, so dates of values were judged as of now."
    return f"made {moment_words(made)} {zone_words(made)}; dates of values were judged as of then.".replace("  ", " ")


def _first_groups(fingerprint: str) -> str:
    return group_fingerprint(visible(fingerprint), 3)


def _compare_pages(old: OldPrint, now: Assessment) -> Iterator[Difference]:
    """What the pages must show and do not; only for the model that the print was made with."""
    if old.record.model.fingerprint != now.model.fingerprint:
        return
    if now.estimate is not None:
        yield from _absent_from_pages(old, now, now.estimate)
    for fault in compare_pages(old, now):
        yield Difference(fault.page, visible(fault.old) or NOTHING, visible(fault.new) or NOTHING)


def _absent_from_pages(old: OldPrint, now: Assessment, estimate: Estimate) -> Iterator[Difference]:
    """The figures that stand on no page at all, by name."""
    expected = {
        "The probability on the pages": shown_probability(now),
        "The fingerprint on the pages": group_fingerprint(now.model.fingerprint),
    }
    if estimate.band is not None:
        expected["The band on the pages"] = shown_band(now)
    if estimate.spread is not None and old.record.spread is not UNSET:
        ends = estimate.spread.lower, estimate.spread.upper
        expected["The re-measurement spread on the pages"] = percent_range(*ends, stated_points(estimate))
    expected |= {
        f"{line.label} on the pages": line.shown for line in now.values if line.number is not None and line.typed
    }
    for what, words in expected.items():
        if not _stands_in(words, old.text):
            yield Difference(what, "not found there", words)


def _stands_in(words: str, text: str) -> bool:
    """Whether the words stand on a page, wherever its lines were broken, and not as part of a longer number."""
    letters = r"\s*".join(re.escape(letter) for letter in words if not letter.isspace())
    return re.search(rf"(?<![\d.,]){letters}(?!\d)", text) is not None
