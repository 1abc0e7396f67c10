"""What an approval changes in an assessment: nothing of the number, something of what is said with it."""

from dataclasses import replace
from datetime import date

from clinicalc.assessment.assess import assess
from clinicalc.assessment.entry import entry_from_texts
from clinicalc.assessment.findings import FindingCode, Grade
from clinicalc.assessment.record import record_of
from clinicalc.assessment.result import Assessment
from clinicalc.assessment.vetting import Vetting
from tests.assessment.cases import NOW, WOMAN_61, about, run, shipped

LIPIDS = "general-cvd-2008-lipids"
VETTING = Vetting(
    practice="Tarnwick Northgate",
    approved_by="Dr Ada Tarn",
    role="GP partner",
    approved_on=date(2026, 11, 1),
    review_until=date(2027, 11, 30),
    by_author=False,
    fingerprint="a" * 64,
    library="b" * 64,
)


def approved(vetting: Vetting = VETTING) -> Assessment:
    """The woman of the worked example, under an approval."""
    return assess(shipped(LIPIDS), entry_from_texts(WOMAN_61), at=NOW, vetting=vetting)


def test_the_number_and_everything_beside_it_stay() -> None:
    with_it, without = record_of(approved()), record_of(run(LIPIDS, WOMAN_61))
    assert {key for key in without if with_it[key] != without[key]} == {"vetting"}
    assert without["vetting"] is None
    assert with_it["vetting"] == {
        "practice": "Tarnwick Northgate",
        "by": "Dr Ada Tarn",
        "role": "GP partner",
        "approved_on": "2026-11-01",
        "review_until": "2027-11-30",
        "by_author": False,
        "library": "b" * 64,
        "compared": [],
        "caution": None,
    }


def test_figures_that_somebody_compared_are_a_note_with_the_name() -> None:
    places = [entry.at for entry in shipped(LIPIDS).content.unconfirmed]
    everything = replace(VETTING, compared=tuple((place, "Cleo Fell") for place in places))
    (note,) = about(approved(everything), FindingCode.UNCONFIRMED)
    assert note.grade is Grade.NOTE
    assert "were compared with the source by Cleo Fell" in note.message


def test_the_others_stay_a_caution() -> None:
    """Her number rests on the mean of her linear predictor, her band on an interval and on what is assumed for it."""
    one = replace(VETTING, compared=(("/equations/0/horizons/0/mean_linear_predictor", "Cleo Fell"),))
    caution, note = about(approved(one), FindingCode.UNCONFIRMED)
    assert (caution.grade, note.grade) == (Grade.CAUTION, Grade.NOTE)
    assert "26.191" not in caution.message
    assert "The printed interval of the hazard ratio" in caution.message


def test_what_was_compared_for_the_other_equation_is_not_said() -> None:
    men = replace(VETTING, compared=(("/equations/1/horizons/0/mean_linear_predictor", "Cleo Fell"),))
    (caution,) = about(approved(men), FindingCode.UNCONFIRMED)
    assert caution.grade is Grade.CAUTION
    assert "26.191" in caution.message


def test_a_library_out_of_reach_goes_with_the_number_as_a_caution() -> None:
    (found,) = about(approved(replace(VETTING, caution="It cannot be reached.")), FindingCode.LIBRARY_COPY)
    assert (found.grade, found.message) == (Grade.CAUTION, "It cannot be reached.")
    assert not about(approved(), FindingCode.LIBRARY_COPY)
