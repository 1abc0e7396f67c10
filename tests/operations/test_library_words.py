"""How a model's standing is said, and on which shelf it is listed."""

from dataclasses import replace
from datetime import UTC, date, datetime

import pytest

from clinicalc.assessment.vetting import Vetting
from clinicalc.library.standing import Approval, ModelState, Standing
from clinicalc.operations.library_words import Shelf, say_standing, shelf_of
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
