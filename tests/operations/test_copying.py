"""The copied text carries what the number cannot be read without, and no patient label unless asked for."""

from clinicalc.assessment.assess import assess
from clinicalc.assessment.entry import entry_from_texts
from clinicalc.coefficients.fingerprint import group_fingerprint
from clinicalc.operations.copying import copy_text
from clinicalc.operations.summary import summarise
from tests.coefficients.tiny_model import tiny_logit_model
from tests.report.printing import AT, model_of, with_band, without_band

LABEL = "Ottilie Fenn"


def test_the_text_carries_everything_that_belongs_to_the_number() -> None:
    assessment = with_band(label=LABEL)
    model = assessment.model
    text = copy_text(assessment)
    groups = group_fingerprint(model.fingerprint, 3)
    for part in (
        f"{model.content.title}, version {model.content.version}, fingerprint {groups}\n",
        "Assessed 1 December 2026, 14:18 UTC+00:00\n",
        "Not vetted: for trying out, not for a patient.\n",
        f"\n{model.content.outcome}\n",
        "18.2\u202f% within ",
        "\n95\u202f% band 13.8–23.7\u202f%.\n",
    ):
        assert part in text
    for finding in assessment.findings:
        assert f"\n{finding.grade.value.capitalize()}: {finding.message}\n" in text
    for line in assessment.values:
        assert line.label in text
        assert line.shown in text
    assert text.endswith("\n")
    assert not text.endswith("\n\n")


def test_the_absence_of_a_band_is_said_with_its_reason() -> None:
    assessment = without_band()
    assert assessment.estimate is not None
    assert f"No band: {assessment.estimate.band_absent_because}" in copy_text(assessment)


def test_the_recalibration_is_named() -> None:
    offered = without_band().model.content.recalibrations[0]
    assert f"Recalibration: {offered.label}." in copy_text(without_band(recalibration=offered.id))


def test_the_patient_label_is_left_out_unless_asked_for() -> None:
    assessment = with_band(label=LABEL)
    assert LABEL not in copy_text(assessment)
    assert copy_text(assessment, with_label=True).startswith(f"{LABEL}\n")
    assert copy_text(with_band(), with_label=True) == copy_text(with_band())


def test_without_a_number_the_reasons_and_the_horizon_are_copied() -> None:
    model = model_of(tiny_logit_model())
    text = copy_text(assess(model, entry_from_texts({"age": "50"}), at=AT))
    assert "No number." in text
    assert f"Horizon: {model.spans[0].words}\n" in text
    assert "Stop: " in text
    assert "\u202f%" not in text


def test_a_date_and_a_value_in_another_unit_are_both_told() -> None:
    text = copy_text(without_band(total_cholesterol="200 mg/dL on 2026-10-02"))
    line = next(line for line in text.split("\n") if line.startswith("Total cholesterol"))
    assert line.startswith("Total cholesterol: 200 mg/dL, used as ")
    assert line.endswith(" mmol/L, of 2026-10-02")


def test_what_a_value_is_the_mean_of_is_said() -> None:
    assessment = without_band(total_cholesterol="200 mg/dL of 2 visits on 2026-10-02")
    assert "Total cholesterol: 200 mg/dL, mean of 2 visits, used as 5.172 mmol/L, of 2026-10-02\n" in copy_text(
        assessment
    )
    assert "200 mg/dL  mean of 2 visits  used as 5.172 mmol/L  of 2026-10-02\n" in summarise(assessment)
    assert "mean" not in copy_text(without_band(total_cholesterol="200 mg/dL of 1 visit"))
