"""Verdicts on an id that is read aloud: by whole groups only."""

import pytest

from clinicalc.operations.read_aloud import KeyToHear

ID = "0123456789abcdef" * 4


@pytest.mark.parametrize(
    ("typed", "says"),
    [
        ("", ""),
        ("   ", ""),
        ("0", "0 of 16 groups so far."),
        ("9", "0 of 16 groups so far."),
        ("0123", "1 of 16 groups agrees so far."),
        ("0123 4567-89AB", "3 of 16 groups agree so far."),
        ("0124", "The 1st group differs. Have it read aloud again."),
        ("0123 4568", "The 2nd group differs. Have it read aloud again."),
        (ID[:8] + "ffff", "The 3rd group differs. Have it read aloud again."),
        (ID[:40] + "ffff", "The 11th group differs. Have it read aloud again."),
        (ID, "All 64 digits agree."),
        (ID + "0", "65 digits are typed, and an id has 64. Take away what is too much."),
        ("012o", "“o” is no digit of an id: they are 0 to 9 and a to f."),
    ],
)
def test_the_verdict(typed: str, says: str) -> None:
    assert KeyToHear(ID).judge(typed).says == says


def test_a_digit_of_an_unfinished_group_is_never_judged() -> None:
    key = KeyToHear(ID)
    for group in range(16):
        before = ID[: 4 * group]
        assert len({key.judge(before + digit).says for digit in "0123456789abcdef"}) == 1


def test_the_id_is_in_no_repr() -> None:
    assert ID not in repr(KeyToHear(ID))
    assert ID[:8] not in repr(KeyToHear(ID))
