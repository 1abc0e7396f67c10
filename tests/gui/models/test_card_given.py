"""The verdict beside a fingerprint that is typed: how far it agrees, and never what should have been typed."""

import pytest
from hypothesis import given
from hypothesis import strategies as st
from PySide6.QtTest import QTest
from pytestqt.qtbot import QtBot

from clinicalc.gui.models.given_fingerprint import (
    FROM_ELSEWHERE,
    NOT_NEEDED,
    Agreeing,
    GivenFingerprint,
    compare_given,
)

OWN = "c41d07aa93f52be081c65d7e04b9aa316f02e8d417c3b95a20fe4471d80b9c66"
HEX = "0123456789abcdef"


@pytest.mark.parametrize(
    ("typed", "kind", "words"),
    [
        ("", Agreeing.NOTHING, ""),
        ("  ", Agreeing.NOTHING, ""),
        ("c41d 07aa 93f5 2be0 81c6 5", Agreeing.SO_FAR, "Equal so far: 21 of 64 characters"),
        ("C41D-07AA\u00a093F5\n2BE0", Agreeing.SO_FAR, "Equal so far: 16 of 64 characters"),
        (OWN.upper(), Agreeing.WHOLE, "Equal: all 64 characters"),
        ("c41d 07aa 93f5 2be0 91c6", Agreeing.DIFFERS, "Differs from the 5th group"),
        ("d", Agreeing.DIFFERS, "Differs from the 1st group"),
        ("c41d 17aa", Agreeing.DIFFERS, "Differs from the 2nd group"),
        ("c41d 07aa 83f5", Agreeing.DIFFERS, "Differs from the 3rd group"),
        (OWN[:40] + "0", Agreeing.DIFFERS, "Differs from the 11th group"),
        (OWN + "1", Agreeing.TOO_MUCH, "More than 64 characters: 65 were typed"),
        ("c41o", Agreeing.NO_DIGIT, "Character 4, “o”, is not a digit: those are 0 to 9 and a to f"),
        ("c41d x", Agreeing.NO_DIGIT, "Character 5, “x”, is not a digit: those are 0 to 9 and a to f"),
        ("c4 2 o", Agreeing.DIFFERS, "Differs from the 1st group"),  # what comes first is said
    ],
)
def test_the_verdict_runs_along(typed: str, kind: Agreeing, words: str) -> None:
    verdict = compare_given(typed, OWN)
    assert (verdict.kind, verdict.words) == (kind, words)


@given(st.text(HEX, min_size=64, max_size=64), st.text(HEX, min_size=64, max_size=64), st.integers(0, 63))
def test_the_words_do_not_depend_on_digits_that_were_not_typed(one: str, other: str, same: int) -> None:
    """Two fingerprints with one beginning: what agrees with it and then with neither is judged alike."""
    digit = next(d for d in HEX if d not in (one[same], (one[:same] + other[same:])[same]))
    typed = one[:same] + digit
    assert compare_given(typed, one) == compare_given(typed, one[:same] + other[same:])
    if same:
        assert compare_given(one[:same], one) == compare_given(one[:same], one[:same] + other[same:])


@given(st.text(max_size=90))
def test_no_text_breaks_it(typed: str) -> None:
    assert compare_given(typed, OWN).kind in Agreeing


def test_the_field_says_its_verdict_and_nothing_moves(qtbot: QtBot) -> None:
    field = GivenFingerprint(OWN)
    qtbot.addWidget(field)
    field.resize(800, 80)
    field.show()
    before = field.heightForWidth(800)
    with qtbot.waitSignal(field.changed):
        QTest.keyClicks(field.edit, "c41d 07aa")
    assert field.verdict.text() == "Equal so far: 8 of 64 characters"
    assert field.edit.accessibleDescription() == field.verdict.text()
    assert field.typed == "c41d 07aa"
    assert field.heightForWidth(800) == before
    field.edit.setText(" ".join(OWN[at : at + 4] for at in range(0, 64, 4)))
    assert field.kind is Agreeing.WHOLE


def test_a_file_of_a_trusted_publisher_needs_no_typing(qtbot: QtBot) -> None:
    field = GivenFingerprint(OWN, is_trusted=True)
    qtbot.addWidget(field)
    assert field.remark.text() == NOT_NEEDED
    assert not field.remark.isHidden()


def test_where_it_is_to_come_from_stands_there_until_something_is_typed(qtbot: QtBot) -> None:
    field = GivenFingerprint(OWN)
    qtbot.addWidget(field)
    assert field.remark.text() == FROM_ELSEWHERE == field.edit.accessibleDescription()
    before = field.heightForWidth(800)
    field.edit.setText("c")
    assert field.remark.isHidden()
    assert not field.verdict.isHidden()
    assert field.heightForWidth(800) == before
