"""What is wrong with one model is said once on its card: the reason first, and no consequence of it besides."""

from dataclasses import replace

import pytest

from clinicalc.assessment.findings import Grade
from clinicalc.gui.models.card_words import graded_faults, standing_sentence
from clinicalc.library.places import short_model
from clinicalc.library.standing import Fault, FaultKind, Standing
from clinicalc.operations.model_card import ModelCard
from tests.gui.models.card_shelf import CardShelf

MISSING, OTHER = "d" * 64, "e" * 64


@pytest.fixture
def refused(card_shelf: CardShelf) -> ModelCard:
    """A refused card of which nothing is said yet."""
    return replace(card_shelf.cards["refused"], faults=(), file_fault="")


def with_faults(card: ModelCard, *faults: Fault, reason: str = "", file_fault: str = "") -> ModelCard:
    """The card of a model of which these things are wrong."""
    assert card.state is not None
    assert card.row is not None
    state = replace(card.state, standing=Standing.REFUSED, faults=faults, reason=reason)
    row = replace(card.row, reason=f"Refused: {reason}" if reason else "")
    said = tuple(fault.sentence for fault in faults)
    return replace(card, state=state, row=row, faults=said, file_fault=file_fault)


def fault(kind: FaultKind, sentence: str, record: str = "", *, stops: bool = True) -> Fault:
    """Something that is wrong."""
    return Fault(kind, "a" * 64, sentence, record, stops)


def test_the_reason_comes_before_what_follows_from_it(refused: ModelCard) -> None:
    first = fault(FaultKind.FROM_THE_FUTURE, "A record is later than the clock.", OTHER)
    second = fault(FaultKind.BAD_SIGNATURE, "The record is not as it was signed.", MISSING)
    card = with_faults(refused, first, second, reason=second.sentence)
    assert graded_faults(card) == ((Grade.STOP, second.sentence), (Grade.STOP, first.sentence))
    assert standing_sentence(card) == ""


def test_a_record_that_several_follow_is_missing_once(refused: ModelCard) -> None:
    said = [fault(FaultKind.MISSING_RECORD, f"Record missing; the record {n} follows it.", MISSING) for n in range(3)]
    other = fault(FaultKind.MISSING_RECORD, "Another record is missing.", OTHER)
    found = graded_faults(with_faults(refused, *said, other, reason=said[0].sentence))
    assert found == ((Grade.STOP, said[0].sentence), (Grade.STOP, other.sentence))


def test_a_record_whose_file_was_changed_is_not_missing_besides(refused: ModelCard) -> None:
    missing = fault(FaultKind.MISSING_RECORD, "Record missing.", MISSING)
    changed = fault(FaultKind.CHANGED_FILE, "The file of the record was changed.", MISSING)
    found = graded_faults(with_faults(refused, missing, changed, reason=changed.sentence))
    assert found == ((Grade.STOP, changed.sentence),)


def test_of_the_models_own_file_only_the_first_is_said(refused: ModelCard) -> None:
    file = short_model(refused.fingerprint)
    pipe = fault(FaultKind.NOT_A_FILE, f"{file} is a pipe (FIFO), not a file.")
    unread = fault(FaultKind.MISSING_FILE, f"{file} was not read: it is a pipe (FIFO).")
    card = with_faults(refused, unread, pipe, reason=pipe.sentence, file_fault=f"a-model 1.0.0: {unread.sentence}")
    assert graded_faults(card) == ((Grade.STOP, pipe.sentence),)


def test_a_caution_that_is_the_reason_is_not_said_a_second_time(refused: ModelCard) -> None:
    revoked = fault(FaultKind.REVOKED_SIGNER, "The approval does not count.", MISSING, stops=False)
    card = with_faults(refused, revoked, reason=revoked.sentence)
    assert graded_faults(card) == ((Grade.CAUTION, revoked.sentence),)
    assert standing_sentence(card) == ""
