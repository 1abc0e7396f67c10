"""The sentences of a card in every standing: each says what is true of it."""

import pytest

from clinicalc.assessment.findings import Grade
from clinicalc.gui.models.card_words import (
    approval_heading,
    approval_lines,
    graded_faults,
    is_to_be_decided,
    outcome_words,
    standing_sentence,
    standing_words,
    strip_words,
    version_words,
)
from clinicalc.gui.models.named_lines import NamedLine, check_lines, with_minus
from tests.gui.models.card_shelf import CardShelf


@pytest.mark.parametrize(
    ("which", "strip"),
    [
        ("waiting", "Not vetted: for trying out, not for a patient"),
        ("candidate", "Not vetted: for trying out, not for a patient"),
        ("in use", ""),
        ("withdrawn", "Withdrawn: not for a patient"),
        ("held", "Held on this machine: it gives no number here"),
        ("overdue", "Review overdue: it gives no number until it is reviewed"),
        ("refused", "Refused: it gives no number"),
    ],
)
def test_the_strip_says_why_a_model_is_not_for_a_patient(card_shelf: CardShelf, which: str, strip: str) -> None:
    assert strip_words(card_shelf.cards[which]) == strip


@pytest.mark.parametrize(
    ("which", "words"),
    [
        ("waiting", "Waiting for approval."),
        ("candidate", "Not in the library: this file was only looked at"),
        ("in use", "Approved by Dr Ada Tarn (GP partner) until"),
        ("withdrawn", "A newer version is in use"),
        ("held", "its numbers look odd"),
        ("overdue", "Review overdue: approved by Dr Ada Tarn (GP partner) until"),
    ],
)
def test_where_it_stands_is_said_in_a_sentence(card_shelf: CardShelf, which: str, words: str) -> None:
    assert words in standing_sentence(card_shelf.cards[which])


def test_a_changed_file_stops_and_is_said_once(card_shelf: CardShelf) -> None:
    card = card_shelf.cards["refused"]
    faults = graded_faults(card)
    assert [grade for grade, _ in faults] == [Grade.STOP] * len(faults)
    assert len(faults) == 1
    assert "changed" in faults[0][1]
    assert standing_sentence(card) == ""  # the stop says it
    assert outcome_words(card) == ""


def test_nothing_is_wrong_with_the_others(card_shelf: CardShelf) -> None:
    for which in ("waiting", "in use", "withdrawn", "candidate", "unconfirmed"):
        assert graded_faults(card_shelf.cards[which]) == (), which


def test_outcome_and_horizon_stand_together(card_shelf: CardShelf) -> None:
    words = outcome_words(card_shelf.cards["waiting"])
    assert words.endswith("; within 10 years")
    assert ".;" not in words


def test_an_approval_says_who_why_and_until_when(card_shelf: CardShelf) -> None:
    card = card_shelf.cards["in use"]
    assert card.approval is not None
    lines = {line.name: line.says for line in approval_lines(card, card.approval)}
    assert lines["By"] == "Dr Ada Tarn (GP partner)"
    assert lines["Reason"] == "Agreed"
    assert lines["File known by"] == "its whole fingerprint, which was typed"
    assert lines["Decision points"] == "none of the practice’s own"
    assert "Recalibration" not in lines  # the file offers none
    headings = [approval_heading(card_shelf.cards[which]) for which in ("in use", "overdue", "held")]
    assert headings == ["Approval in force", "Approval, past its review date", "Approval, held on this machine"]


def test_a_check_that_fails_has_its_word_and_is_marked(card_shelf: CardShelf) -> None:
    lines = {line.name: line for line in check_lines(card_shelf.cards["waiting"].checks)}
    assert lines["Signature"] == NamedLine(
        "Signature", "Caution: nobody signed it; who approves needs the whole fingerprint", True
    )
    assert not lines["Worked examples"].is_marked
    assert lines["Documentation"].says == "15 items"  # the card lists them with their texts


def test_versions_of_one_number_are_told_apart(card_shelf: CardShelf) -> None:
    first, *others = card_shelf.cards["waiting"].others
    assert version_words(first, (first, *others)) == "1.2.0, in use"
    digits = first.fingerprint
    said = f"1.2.0 ({digits[:4]} {digits[4:8]} {digits[8:12]}), in use"
    assert version_words(first, (first, first)) == said


@pytest.mark.parametrize(
    ("text", "shown"),
    [
        ("-0.4517", "−0.4517"),
        ("lower -1.5; upper 2", "lower −1.5; upper 2"),
        ("1e-05", "1e-05"),
        ("2019-03-01", "2019-03-01"),
        ("743-753", "743-753"),
        ("age-related", "age-related"),
    ],
)
def test_only_a_minus_becomes_one(text: str, shown: str) -> None:
    assert with_minus(text) == shown


@pytest.mark.parametrize(
    ("which", "begins", "ends"),
    [
        ("in use", "In use. Approved by ", "."),
        ("waiting", "Waiting for approval.", " Version 1.2.0 is in use."),
        ("withdrawn", "Withdrawn by ", " Version 1.2.0 is in use."),
        ("candidate", "Not in the library", " Version 1.2.0 is in use."),
        ("unconfirmed", "Waiting for approval.", "Waiting for approval."),
        ("held", "Held on this machine", "its numbers look odd."),
    ],
)
def test_every_card_says_which_version_is_in_use(card_shelf: CardShelf, which: str, begins: str, ends: str) -> None:
    said = standing_words(card_shelf.cards[which])
    assert said.startswith(begins)
    assert said.endswith(ends)


@pytest.mark.parametrize("which", ["waiting", "candidate", "withdrawn", "unconfirmed", "in use"])
def test_what_waits_beside_a_version_in_use_is_to_be_decided(card_shelf: CardShelf, which: str) -> None:
    assert is_to_be_decided(card_shelf.cards[which]) == (which in ("waiting", "candidate"))
