"""How a model's standing is said, and on which shelf it is listed."""

from dataclasses import replace
from datetime import UTC, date, datetime

import pytest

from clinicalc.assessment.vetting import Vetting
from clinicalc.library.memory import Hold
from clinicalc.library.standing import Approval, Fault, FaultKind, ModelState, Standing
from clinicalc.operations.library_words import Shelf, say_shortly, say_standing, shelf_of
from clinicalc.report.phrases import NOT_VETTED, vetting_words

APPROVAL = Approval(
    digest="d" * 64,
    name="Dr Ada Tarn",
    role="GP partner",
    reason="Agreed",
    written=datetime(2026, 12, 1, tzinfo=UTC),
    review_until=date(2027, 11, 30),
    recalibration=None,
    decision_points=(),
    compared=(),
    by_author=False,
)
STATE = ModelState("a" * 64, "a-model", "1.0.0", "A model", Standing.IN_USE, "", APPROVAL, (), (), ())


@pytest.mark.parametrize(
    ("standing", "reason", "said", "shelf"),
    [
        (Standing.IN_USE, "", "Approved by Dr Ada Tarn (GP partner) until 30 November 2027.", Shelf.IN_USE),
        (
            Standing.REVIEW_OVERDUE,
            "",
            "Review overdue: approved by Dr Ada Tarn (GP partner) until 30 November 2027. It gives no number.",
            Shelf.OUT_OF_USE,
        ),
        (Standing.WAITING, "", "Waiting for approval.", Shelf.WAITING),
        (Standing.WITHDRAWN, "Withdrawn by Cleo Fell: a misprint", "Withdrawn by Cleo Fell: a misprint.", None),
        (Standing.HELD, "Held on this machine: odd.", "Held on this machine: odd.", Shelf.OUT_OF_USE),
        (Standing.REFUSED, "its file was changed.", "Refused: its file was changed.", Shelf.OUT_OF_USE),
    ],
)
def test_each_standing_is_said_once(standing: Standing, reason: str, said: str, shelf: Shelf | None) -> None:
    state = replace(STATE, standing=standing, reason=reason)
    assert say_standing(state) == said
    assert shelf_of(state) is (shelf or Shelf.OUT_OF_USE)


def test_an_author_is_named_as_such() -> None:
    state = replace(STATE, approval=replace(APPROVAL, by_author=True))
    vetting = Vetting(
        practice="Tarnwick Northgate",
        approved_by="Dr Ada Tarn",
        role="GP partner",
        approved_on=date(2026, 12, 1),
        review_until=date(2027, 11, 30),
        by_author=True,
        fingerprint="a" * 64,
        library="b" * 64,
    )
    said = "Approved by Dr Ada Tarn (GP partner), who also made or brought the file, until 30 November 2027"
    assert (say_standing(state), vetting_words(vetting)) == (f"{said}.", said)
    assert vetting_words(None) == NOT_VETTED


@pytest.mark.parametrize(
    ("standing", "said"),
    [
        (Standing.IN_USE, "Approved until 30 November 2027"),
        # its last day is still good
        (Standing.REVIEW_OVERDUE, "Review overdue since 1 December 2027"),
        (Standing.WAITING, "Not vetted"),
        (Standing.WITHDRAWN, "Withdrawn"),
        (Standing.HELD, "Held here"),
        (Standing.REFUSED, "Refused: something is wrong with the whole library"),
    ],
)
def test_each_standing_in_a_few_words(standing: Standing, said: str) -> None:
    assert say_shortly(replace(STATE, standing=standing)) == said


def test_a_hold_is_said_with_its_day() -> None:
    hold = Hold(fingerprint=STATE.fingerprint, since="2026-12-02T12:00:00Z", why="odd")
    assert say_shortly(replace(STATE, standing=Standing.HELD), hold) == "Held here since 2 December 2026"


@pytest.mark.parametrize("kind", FaultKind)
def test_every_fault_that_may_stop_a_model_has_words_of_its_own(kind: FaultKind) -> None:
    """Those that are left never stop: strays, forks, and approvals that merely lost their force."""
    fault = Fault(kind, STATE.fingerprint, "Something is wrong.", "c" * 64)
    said = say_shortly(replace(STATE, standing=Standing.REFUSED, reason=fault.sentence, faults=(fault,)))
    never_stops = kind in (FaultKind.STRAY, FaultKind.FORK, FaultKind.REVOKED_SIGNER, FaultKind.BY_AUTHOR)
    assert (said == "Refused: something is wrong with its records") is never_stops


def test_the_reason_that_is_given_is_the_one_that_is_said_shortly() -> None:
    first = Fault(FaultKind.MISSING_RECORD, STATE.fingerprint, "A record is missing.")
    second = Fault(FaultKind.CHANGED_FILE, STATE.fingerprint, "Its file was changed.")
    state = replace(STATE, standing=Standing.REFUSED, reason=second.sentence, faults=(first, second))
    assert say_shortly(state) == "Refused: its file was changed"


@pytest.mark.parametrize(
    ("kind", "of_a_record", "of_the_model"),
    [
        (FaultKind.CHANGED_FILE, "a record was changed", "its file was changed"),
        (FaultKind.NOT_A_FILE, "no file where a record should be", "no file where its file should be"),
    ],
)
def test_what_befell_a_record_is_not_said_of_the_models_file(
    kind: FaultKind, of_a_record: str, of_the_model: str
) -> None:
    for record, said in (("c" * 64, of_a_record), ("", of_the_model)):
        fault = Fault(kind, STATE.fingerprint, "Something is wrong.", record)
        state = replace(STATE, standing=Standing.REFUSED, reason=fault.sentence, faults=(fault,))
        assert say_shortly(state) == f"Refused: {said}"


def test_a_stop_of_the_whole_library_is_named_before_what_it_brings_about() -> None:
    consequence = Fault(FaultKind.MISSING_RECORD, STATE.fingerprint, "A record is missing.", "c" * 64)
    state = replace(STATE, standing=Standing.REFUSED, reason="The list is gone.", faults=(consequence,))
    assert say_shortly(state) == "Refused: something is wrong with the whole library"
