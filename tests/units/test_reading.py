"""Typed text to a reading, or to a sentence why not."""

from datetime import date
from decimal import Decimal

import pytest
from hypothesis import example, given, settings
from hypothesis import strategies as st

from clinicalc.units import Averaged, Reading, Unit, Unreadable, UnreadableReason, all_units, read_value, unit


@pytest.mark.parametrize(
    ("typed", "number", "decimals", "code"),
    [
        ("5.2", 5.2, 1, None),
        ("5,2", 5.2, 1, None),
        (" 5.20 ", 5.2, 2, None),
        ("180", 180.0, 0, None),
        ("+3", 3.0, 0, None),
        ("-3", -3.0, 0, None),
        ("−3", -3.0, 0, None),
        ("0", 0.0, 0, None),
        ("007", 7.0, 0, None),
        ("5.2 mmol/l", 5.2, 1, "mmol/L"),
        ("5.2mmol/L", 5.2, 1, "mmol/L"),
        ("5,2\u00a0mmol/l", 5.2, 1, "mmol/L"),
        ("5,2\tmmol/l", 5.2, 1, "mmol/L"),
        ("61 years", 61.0, 0, "a"),
        ("7.1 %", 7.1, 1, "%"),
        ("7.1%", 7.1, 1, "%"),
        ("250 x10^9/L", 250.0, 0, "10*9/L"),
        ("250 10*9/L", 250.0, 0, "10*9/L"),
        ("45 mL/min/1.73 m²", 45.0, 0, "mL/min/{1.73_m2}"),
        ("1.9 m²", 1.9, 1, "m2"),
        ("72 bpm", 72.0, 0, "/min"),
        ("1.234", 1.234, 3, None),  # a point is never asked about
        ("0,123", 0.123, 3, None),  # nobody groups after a zero
        ("1234,567", 1234.567, 3, None),  # nor four digits
        ("1,23", 1.23, 2, None),
        ("1,2345", 1.2345, 4, None),
        ("9" * 32, 1e32, 0, None),
    ],
)
def test_readable(typed: str, number: float, decimals: int, code: str | None) -> None:
    reading = read_value(typed)
    assert isinstance(reading, Reading)
    assert (reading.text, reading.number, reading.decimals) == (typed.strip(), number, decimals)
    assert (reading.unit, reading.dated) == (code, None)


@pytest.mark.parametrize(
    ("typed", "digits"),
    [
        ("5,20 mmol/l", "5.20"),
        ("−3", "-3"),
        ("+3", "3"),
        ("110.20000000000000000000000000", "110.20000000000000000000000000"),
        ("12345678901234567890", "12345678901234567890"),
        ("007", "007"),
    ],
)
def test_every_digit_typed_is_kept(typed: str, digits: str) -> None:
    reading = read_value(typed)
    assert isinstance(reading, Reading)
    assert reading.digits == digits


def test_a_value_may_carry_its_date() -> None:
    typed = "110 mg/dL on 2026-10-02"
    assert read_value(typed) == Reading(typed, "110", 110.0, 0, "mg/dL", date(2026, 10, 2))
    assert read_value("110 on 2026-10-02") == Reading("110 on 2026-10-02", "110", 110.0, 0, None, date(2026, 10, 2))


@pytest.mark.parametrize(
    ("typed", "number", "code", "dated", "averaged"),
    [
        ("124 mm[Hg] of 2 visits", 124.0, "mm[Hg]", None, Averaged(2, 1)),
        ("124 of 3 readings", 124.0, None, None, Averaged(1, 3)),
        ("124 mmHg of 2 visits of 3 readings on 2026-10-02", 124.0, "mm[Hg]", date(2026, 10, 2), Averaged(2, 3)),
        ("5,2 mmol/l OF 2 Visits", 5.2, "mmol/L", None, Averaged(2, 1)),
        ("124\u00a0of\u00a02\tvisits  of 30 readings", 124.0, None, None, Averaged(2, 30)),
        ("124 of 1 visit of 1 reading", 124.0, None, None, Averaged(1, 1)),
        ("124 mm of mercury of 2 visits", 124.0, "mm[Hg]", None, Averaged(2, 1)),
        ("124 of 02 visits on 2026-10-02", 124.0, None, date(2026, 10, 2), Averaged(2, 1)),
    ],
)
def test_a_value_may_be_a_mean(
    typed: str, number: float, code: str | None, dated: date | None, averaged: Averaged
) -> None:
    reading = read_value(typed)
    assert isinstance(reading, Reading)
    assert (reading.number, reading.unit, reading.dated, reading.averaged) == (number, code, dated, averaged)


@pytest.mark.parametrize(
    ("typed", "words"),
    [
        ("124 of 0 visits", "“of 0 visits” is no mean: leave it out"),
        ("124 of 2 visits of 0 readings", "“of 0 readings” is no mean"),
        ("124 of 2.5 readings", "“2.5” is no count of readings: type a whole number from 1 to 30."),
        ("124 of -2 visits", "“-2” is no count of visits"),
        ("124 of two visits", "“two” is no count of visits"),
        ("124 of 2 visits of many readings", "“many” is no count of readings"),
        ("124 of ٢ visits", "“٢” is no count of visits"),
        ("124 of 31 visits", "counts more than 30 visits"),
        ("124 of 2 visits of 2026 readings", "counts more than 30 readings"),
        ("124 of " + "9" * 60 + " visits", "counts more than 30 visits"),
        ("124 of visits", "“of visits” does not say how many"),
        ("124 of readings of 2 visits", "does not say how many"),
        ("124 of", "No count follows “of”"),
        ("124 of 2", "“of 2” is no count of visits or readings"),
        ("120 of 80 mmHg", "“of 80 mmHg” is no count of visits or readings"),
        ("124 of 3 readings of 2 visits", "type the visits first, then the readings of each visit"),
        ("124 of 2 visits 3 readings", "no count of visits or readings: type “of 2 visits”"),
    ],
)
def test_a_mean_that_is_not_clear_is_answered_in_words(typed: str, words: str) -> None:
    unreadable = read_value(typed)
    assert isinstance(unreadable, Unreadable)
    assert unreadable.reason is UnreadableReason.BAD_MEAN
    assert words in unreadable.message
    assert len(unreadable.message) < 300


def test_a_mean_without_its_number_and_one_after_the_date_are_named() -> None:
    alone = read_value("of 2 visits")
    assert isinstance(alone, Unreadable)
    assert "type the number first, as in “124 of 2 visits”" in alone.message
    late = read_value("124 on 2026-10-02 of 2 visits")
    assert isinstance(late, Unreadable)
    assert late.reason is UnreadableReason.BAD_DATE
    assert "“of 2 visits on 2026-10-02”" in late.message


@given(st.integers(1, 30), st.integers(1, 30))
def test_every_mean_is_read_back_as_it_is_written(visits: int, readings: int) -> None:
    averaged = Averaged(visits, readings)
    reading = read_value(f"124 mm[Hg] {averaged.typed} on 2026-10-02")
    assert isinstance(reading, Reading)
    assert reading.averaged == averaged


def test_means_in_words() -> None:
    assert Averaged().words == ""
    assert Averaged(2).words == "mean of 2 visits"
    assert Averaged(1, 3).words == "mean of 3 readings of one visit"
    assert Averaged(2, 3).words == "mean of 2 visits, 3 readings each"


def test_a_typed_minus_zero_is_zero() -> None:
    reading = read_value("-0,0")
    assert isinstance(reading, Reading)
    assert reading.number.hex() == (0.0).hex()


@pytest.mark.parametrize(
    ("typed", "reason", "words"),
    [
        ("", "EMPTY", "type a number"),
        ("  \u00a0", "EMPTY", "type a number"),
        ("abc", "NOT_A_NUMBER", "“abc” is not a number"),
        ("nan", "NOT_A_NUMBER", "says that there is no number"),
        ("-inf", "NOT_A_NUMBER", "says that there is no number"),
        ("--3", "NOT_A_NUMBER", "more than one sign"),
        ("5.2.1", "NOT_A_NUMBER", "decimal mark"),
        ("5.", "NOT_A_NUMBER", "decimal mark"),
        (".5", "NOT_A_NUMBER", "before its decimal mark"),
        ("120/80", "NOT_A_NUMBER", "more than one number"),
        ("10–20", "NOT_A_NUMBER", "more than one number"),
        ("5 1", "NOT_A_NUMBER", "more than one number"),
        ("1234 5678", "NOT_A_NUMBER", "more than one number"),
        ("mg/dL 110", "NOT_A_NUMBER", "type the number first"),
        ("on 2026-10-02", "NOT_A_NUMBER", "Only a date"),
        ("<0.1", "LIMIT_SIGN", "is a limit, not a value"),
        ("≥ 90 mL/min", "LIMIT_SIGN", "is a limit, not a value"),
        ("~5", "LIMIT_SIGN", "is a limit, not a value"),
        ("1e3", "EXPONENT", "power of ten"),
        ("1E-3 mg/dL", "EXPONENT", "power of ten"),
        ("4 x 10^3", "EXPONENT", "power of ten"),
        ("1,234", "GROUPING", "type 1.234 or 1234,"),
        ("-12,345 mg/dL", "GROUPING", "type -12.345 or -12345,"),
        ("1,234 on 2026-10-02", "GROUPING", "type 1.234 or 1234,"),
        ("1.234,5", "GROUPING", "such as 1234.5"),
        ("1,234.5", "GROUPING", "such as 1234.5"),
        ("1 234", "GROUPING", "such as 1234.5"),
        ("1\u202f234", "GROUPING", "such as 1234.5"),
        ("1'234", "GROUPING", "such as 1234.5"),
        ("12,345,678", "GROUPING", "such as 1234.5"),
        ("½", "OTHER_DIGITS", "digits 0 to 9"),
        ("1½", "OTHER_DIGITS", "digits 0 to 9"),
        ("5 ½", "OTHER_DIGITS", "digits 0 to 9"),
        ("5²", "OTHER_DIGITS", "digits 0 to 9"),
        ("٣٤", "OTHER_DIGITS", "digits 0 to 9"),
        ("3٤", "OTHER_DIGITS", "digits 0 to 9"),
        ("９", "OTHER_DIGITS", "digits 0 to 9"),
        ("9" * 33, "TOO_LONG", "33 characters"),
        ("9" * 5000, "TOO_LONG", "5000 characters"),
        ("5.2 mmol/K", "UNKNOWN_UNIT", "did you mean mmol/L"),
        ("5 ft 9 in", "UNKNOWN_UNIT", "“ft 9 in”"),
        ("5 %%", "UNKNOWN_UNIT", "did you mean %?"),
        ("45 mL/min/1.73.m2", "UNKNOWN_UNIT", "did you mean mL/min/1.73 m²"),
        ("5 §§§§", "UNKNOWN_UNIT", "type the number alone"),
        ("110 on 2026-13-02", "BAD_DATE", "2026-13-02"),
        ("110 on 2026-02-30", "BAD_DATE", "2026-02-30"),
        ("110 on 02/10/2026", "BAD_DATE", "year, month and day"),
        ("110 on 20261002", "BAD_DATE", "year, month and day"),
        ("110 on 2026-10-0٢", "BAD_DATE", "year, month and day"),
        ("110 on", "BAD_DATE", "No date follows"),
        ("5\u202e3", "CONTROL", "U+202E"),
        ("5\x003", "CONTROL", "U+0000"),
        ("\u200b5", "CONTROL", "U+200B"),
        ("5\n3", "CONTROL", "more than one line"),
        ("5\u20283", "CONTROL", "more than one line"),
    ],
)
def test_unreadable_in_its_own_words(typed: str, reason: str, words: str) -> None:
    unreadable = read_value(typed)
    assert isinstance(unreadable, Unreadable)
    assert unreadable.reason is UnreadableReason[reason]
    assert words in unreadable.message
    assert unreadable.text == typed.strip()


def test_a_bare_number_is_not_asked_about_its_comma() -> None:
    assert read_value("1,234", ask_about_comma=False) == Reading("1,234", "1.234", 1.234, 3, None, None)


@given(st.text() | st.text(alphabet="0123456789.,-+−<eE /%mgdLonx^*' \u00a0\u202e٣²½"))
@example("5" * 31 + ",5")
@example("1 on " + "9" * 100)
@example("1 of " + "9" * 100)
@example("1 of " + "٢" * 90 + " visits of x readings")
@settings(deadline=None, max_examples=500)
def test_any_text_has_an_answer(text: str) -> None:
    answer = read_value(text)
    assert answer.text == text.strip()
    if isinstance(answer, Unreadable):
        assert answer.message.endswith((".", "?"))
        assert answer.message.isprintable()
        assert len(answer.message) < 300
    else:
        assert abs(answer.number) <= 1e32
        assert answer.unit is None or unit(answer.unit)


NUMBERS = st.decimals(min_value=-(10**9), max_value=10**9, places=4, allow_nan=False)


@given(NUMBERS, st.integers(0, 4), st.sampled_from(".,"))
@settings(deadline=None)
def test_formatted_numbers_are_read_back(number: Decimal, decimals: int, mark: str) -> None:
    shown = f"{number:.{decimals}f}"
    reading = read_value(shown.replace(".", mark), ask_about_comma=False)
    assert isinstance(reading, Reading)
    assert (reading.number, reading.decimals) == (float(shown), decimals)


@given(
    NUMBERS,
    st.sampled_from([entry for entry in all_units() if entry.spelling]),
    st.sampled_from([" ", "\u00a0", "\u202f", "  "]),
    st.dates(min_value=date(1900, 1, 1)),
)
@settings(deadline=None)
def test_a_number_with_its_unit_and_date_is_read_back(number: Decimal, entry: Unit, gap: str, day: date) -> None:
    for spelling in (entry.code, entry.spelling, *entry.typed_as):
        reading = read_value(f"{number:.2f}{gap}{spelling} on {day.isoformat()}")
        assert isinstance(reading, Reading)
        assert (reading.number, reading.unit, reading.dated) == (float(f"{number:.2f}"), entry.code, day)


@given(st.integers(1, 999), st.integers(0, 999))
def test_a_comma_before_three_digits_is_always_asked_about(whole: int, rest: int) -> None:
    answer = read_value(f"{whole},{rest:03}")
    assert isinstance(answer, Unreadable)
    assert answer.reason is UnreadableReason.GROUPING
    assert f"{whole}.{rest:03}" in answer.message
    assert f"{whole}{rest:03}" in answer.message
    assert isinstance(read_value(f"{whole}.{rest:03}"), Reading)
