"""An old print worked out again: does a coefficient file still give what the print says?"""

import re
from collections import Counter
from collections.abc import Iterator, Mapping
from dataclasses import dataclass, replace
from datetime import datetime

import msgspec
from msgspec import UNSET, UnsetType

from clinicalc.assessment.choices import LEVELS
from clinicalc.assessment.entry import entry_from_texts
from clinicalc.assessment.model import Model
from clinicalc.assessment.numerals import percent, percent_range
from clinicalc.assessment.record import record_of
from clinicalc.assessment.result import Assessment, Estimate
from clinicalc.assessment.shown_figures import shown_band, shown_probability
from clinicalc.coefficients.fingerprint import group_fingerprint
from clinicalc.coefficients.spans import YEAR, Span
from clinicalc.errors import ClinicalcError
from clinicalc.operations.bedside import assess_patient
from clinicalc.operations.differences import NOTHING, Difference, is_same, unless_same, words_for
from clinicalc.operations.old_pages import compare_pages
from clinicalc.operations.old_print import OldPrint
from clinicalc.operations.old_record import Record, RecordedBand, RecordedFinding, RecordedValue
from clinicalc.operations.recheck_beside import (
    asks_for_matching_age,
    changes_of,
    compare_beside,
    practice_points_of,
)
from clinicalc.report.on_the_ruler import stated_points
from clinicalc.report.phrases import moment_words, zone_words
from clinicalc.units.quoting import visible

_LONGEST_FINDING = 400


@dataclass(frozen=True, slots=True)
class Recheck:
    """What came of working a print out again. `now` is the assessment that the model gives today."""

    print: OldPrint
    now: Assessment
    same_model: bool
    differences: tuple[Difference, ...]

    @property
    def agrees(self) -> bool:
        """Whether everything in the record and on the pages is as the model gives it now."""
        return self.same_model and not self.differences


def recheck(old: OldPrint, model: Model) -> Recheck:
    """The print worked out again with `model`: its values as typed, its horizon, recalibration and level, its changes,

    the practice's decision points of the time, and the matching age where it was asked for. Findings about dates are
    judged as of the time at which the print was made. Raises ClinicalcError where the record asks for a level of which
    no band can be made, or holds a decision point that cannot be one; never for anything else that stands in it.
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
    span = _span_of(record)
    now = assess_patient(
        model,
        replace(entry_from_texts(typed), changes=changes_of(record)),
        span=span,
        recalibration=record.recalibration,
        level=record.level,
        at=old.made,
        practice_points=practice_points_of(record, span, old.name),
        matching_age=asks_for_matching_age(record),
    )
    fresh = msgspec.convert(record_of(now), Record)
    same_model = record.model.fingerprint == fresh.model.fingerprint
    labels = {line.id: line.label for line in now.values}
    return Recheck(old, now, same_model, (*_compare(record, fresh, labels), *_compare_pages(old, now)))


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


def _span_of(record: Record) -> Span | None:
    if record.years is not None:
        return Span(record.years)
    return None if record.time is None else Span(record.time, record.unit or YEAR)


def _compare(old: Record, new: Record, labels: Mapping[str, str]) -> Iterator[Difference]:
    """Everything in which two records differ, in the order in which a print tells it."""
    if not is_same(old.probability, new.probability):
        yield Difference("Probability", _probability_words(old), _probability_words(new))
    yield from unless_same("Probability of no event", old.complement, new.complement)
    yield from unless_same("Linear predictor", old.eta, new.eta)
    yield from _compare_bands(old.band, new.band)
    yield from unless_same("Reason for no band", old.band_absent_because, new.band_absent_because)
    yield from unless_same("Horizon", _span_words(old), _span_words(new))
    yield from unless_same("Recalibration", old.recalibration, new.recalibration)
    yield from _compare_values((*old.values, *old.derived), (*new.values, *new.derived), labels)
    yield from compare_beside(old, new)
    yield from _compare_findings(old.findings, new.findings)
    if old.model.fingerprint == new.model.fingerprint:  # another file has other names, which is no news
        for part in ("id", "version", "title"):
            yield from unless_same(f"Model’s {part}", getattr(old.model, part), getattr(new.model, part))


def _compare_bands(old: RecordedBand | None, new: RecordedBand | None) -> Iterator[Difference]:
    if old is None or new is None:
        yield from unless_same("Band", _band_words(old), _band_words(new))
        return
    yield from unless_same("Level of the band", old.level, new.level)
    yield from unless_same("Lower end of the band", old.lower, new.lower)
    yield from unless_same("Upper end of the band", old.upper, new.upper)
    yield from unless_same("Basis of the band", old.basis, new.basis)
    if not isinstance(old.assumptions, UnsetType) and old.assumptions != new.assumptions:
        yield Difference(
            "What the band assumes", *("; ".join(map(visible, b.assumptions or ())) or NOTHING for b in (old, new))
        )


def _compare_values(
    old: tuple[RecordedValue, ...], new: tuple[RecordedValue, ...], labels: Mapping[str, str]
) -> Iterator[Difference]:
    before, after = {value.id: value for value in old}, {value.id: value for value in new}
    if len(before) != len(old):
        yield Difference("Values in the record", "one of them stands there twice", "each once")
    for id in dict.fromkeys((*before, *after)):
        name = labels.get(id, f"{visible(id)} (not a field of this model)")
        one, other = before.get(id), after.get(id)
        if one is None or other is None:
            yield Difference(name, _value_words(one), _value_words(other))
            continue
        yield from unless_same(f"{name}, as typed", one.typed, other.typed)
        if not is_same(one.value, other.value) or one.unit != other.unit:
            yield Difference(f"{name}, as used", _used_words(one), _used_words(other))
        yield from unless_same(f"{name}, date", one.dated, other.dated)


def _compare_findings(old: tuple[RecordedFinding, ...], new: tuple[RecordedFinding, ...]) -> Iterator[Difference]:
    before, after = Counter(old), Counter(new)
    gone, fresh = before - after, after - before
    for finding in gone.elements():
        yield Difference("A finding of the print is gone", _finding_words(finding), "")
    for finding in fresh.elements():
        yield Difference("A finding is new", "", _finding_words(finding))
    if not gone and not fresh and old != new:
        yield Difference("Order of the findings", "another one", "stops, then cautions, then notes")


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


def _probability_words(record: Record) -> str:
    probability = record.probability
    if probability is None:
        return "no number"
    shown = percent(probability) if 0 <= probability <= 1 else "no probability"
    return f"{shown} ({words_for(probability)})"


def _span_words(record: Record) -> str:
    span = _span_of(record)
    return "" if span is None else span.words


def _band_words(band: RecordedBand | None) -> str:
    return "no band" if band is None else f"{words_for(band.lower)} to {words_for(band.upper)}"


def _used_words(value: RecordedValue) -> str:
    unit = "" if value.unit in (None, "1") else f" {visible(value.unit or '')}"
    return f"{words_for(value.value)}{unit}"


def _value_words(value: RecordedValue | None) -> str:
    return NOTHING if value is None else visible(value.typed or "") or f"{_used_words(value)} (worked out)"


def _finding_words(finding: RecordedFinding) -> str:
    return f"{visible(finding.grade)}, {visible(finding.message, _LONGEST_FINDING)}"
