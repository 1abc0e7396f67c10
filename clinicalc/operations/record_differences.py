"""The record of an old print beside the one that a model gives now: number, band, values and findings."""

from collections import Counter
from collections.abc import Iterator, Mapping

from msgspec import UnsetType

from clinicalc.assessment.numerals import percent
from clinicalc.coefficients.spans import YEAR, Span
from clinicalc.operations.differences import NOTHING, Difference, is_same, unless_same, words_for
from clinicalc.operations.old_record import Record, RecordedBand, RecordedFinding, RecordedValue
from clinicalc.operations.recheck_beside import compare_beside
from clinicalc.units.quoting import visible

_LONGEST_FINDING = 400


def recorded_span(record: Record) -> Span | None:
    """The horizon that a record was made for; None where none was chosen."""
    if record.years is not None:
        return Span(record.years)
    return None if record.time is None else Span(record.time, record.unit or YEAR)


def compare_records(old: Record, new: Record, labels: Mapping[str, str]) -> Iterator[Difference]:
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


def _probability_words(record: Record) -> str:
    probability = record.probability
    if probability is None:
        return "no number"
    shown = percent(probability) if 0 <= probability <= 1 else "no probability"
    return f"{shown} ({words_for(probability)})"


def _span_words(record: Record) -> str:
    span = recorded_span(record)
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
