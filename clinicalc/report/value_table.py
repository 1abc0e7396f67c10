"""The values of an assessment as a table: typed, in the file's unit, derivation range, marks of the findings."""

from clinicalc.assessment.fields import NumberField
from clinicalc.assessment.findings import Finding, FindingCode, Grade
from clinicalc.assessment.limits import shown_limits
from clinicalc.assessment.numerals import plain
from clinicalc.assessment.result import Assessment, ValueLine
from clinicalc.report.contents import (
    NOTHING,
    Cell,
    Column,
    Mark,
    MarksCell,
    RangeCell,
    Row,
    RowKind,
    Section,
    Table,
    TypedCell,
)
from clinicalc.report.range_line import RangeOfValues
from clinicalc.units.conversion import conversion
from clinicalc.units.days import day_words
from clinicalc.units.reading import Reading, read_value

NOT_GIVEN = "not given"
_WEIGHT = {Grade.STOP: 0, Grade.CAUTION: 1, Grade.NOTE: 2}
_COLUMNS = (
    Column("", 0.0, 184.0),
    Column("typed", 192.0, 94.0),
    Column("in the file’s unit", 290.0, 101.0),
    Column("", 394.0, 18.0),
    Column("derivation range", 414.0, 96.0, at_end=True),
)


def mark(number: int, finding: Finding) -> Mark:
    """The mark of a finding by its place in the list, counted from 1."""
    return Mark(str(number), _WEIGHT[finding.grade])


def compose_values(assessment: Assessment) -> Section:
    """One table under one set of headings: first the questions that rule a patient out, then every other value."""
    lines = sorted(assessment.values, key=lambda line: not line.exclusion)
    rows = tuple(
        Row(
            (
                line.label,
                _typed(assessment, line),
                _in_file_unit(line),
                _marks(assessment, line),
                _range(assessment, line),
            ),
            _kind(assessment, line),
        )
        for line in lines
    )
    return Section("Values as typed", (Table(_COLUMNS, rows, kinds_apart=True),))


def _kind(assessment: Assessment, line: ValueLine) -> RowKind:
    if line.exclusion:
        return RowKind.QUESTION
    return RowKind.NUMBER if isinstance(assessment.model.by_id[line.id], NumberField) else RowKind.ANSWER


def _typed(assessment: Assessment, line: ValueLine) -> TypedCell:
    """The value as typed with its unit; a derived value says whether it was typed or worked out."""
    if line.worked_out:
        return TypedCell("", "worked out")
    if line.not_measured:
        return TypedCell("", line.shown)
    if not line.typed:
        return TypedCell("", NOT_GIVEN)
    value, unit = line.shown, ""
    if isinstance(assessment.model.by_id[line.id], NumberField) and line.used:
        value, _, unit = line.shown.partition(" ")
    origin = " (typed)" if line.derived else ""
    mean = f", {line.averaged.words}" if line.averaged else ""
    day = line.dated
    dated = f", of {day_words(day)}" if day else ""
    unused = "" if line.used else " (not used)"
    return TypedCell(value, f"{unit}{origin}{mean}{dated}{unused}".strip())


def _in_file_unit(line: ValueLine) -> str:
    """The value as used where it was not typed in that very form; a dash where nothing was used."""
    if not line.used:
        return NOTHING if line.typed else ""
    return "" if line.used == line.shown else line.used


def _marks(assessment: Assessment, line: ValueLine) -> MarksCell:
    return MarksCell(tuple(mark(n, f) for n, f in enumerate(assessment.findings, 1) if f.field == line.id))


def _range(assessment: Assessment, line: ValueLine) -> Cell:
    """The derivation range in the unit in which the value stands at its left, as typed or else as worked out."""
    field = assessment.model.by_id[line.id]
    if not isinstance(field, NumberField) or field.derivation == (None, None):
        return ""
    read = read_value(line.typed) if line.typed and line.used else None
    code = read.unit if isinstance(read, Reading) and read.unit else field.unit
    turn = conversion(field.quantity, field.unit, code, field.factor)
    low, high = shown_limits(field, field.derivation, code)
    texts = ("" if limit is None else plain(limit) for limit in (low, high))
    inside = not any(f.field == line.id and f.code is FindingCode.OUTSIDE_DERIVATION for f in assessment.findings)
    value = None if line.number is None else turn.apply(line.number)
    return RangeCell(RangeOfValues(low, high, *texts), value, inside)
