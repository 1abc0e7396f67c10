"""The same patient with values changed: what may be changed, how it is read, and the numbers that come out."""

from datetime import date

import numpy as np
import pytest

from clinicalc.assessment.changeable import changeable_fields, why_unchangeable
from clinicalc.assessment.comparison import Comparison, compare
from clinicalc.assessment.entry import PatientEntry, Typed
from clinicalc.assessment.findings import Finding, FindingCode, Grade
from clinicalc.assessment.model import Model
from tests.assessment.cases import DEMO, FULL, NOW, run, shipped
from tests.assessment.whole_case import case_of, model_of
from tests.coefficients.tiny_model import Tree, changed, tiny_logit_model, tree_of

TODAY: date = NOW.date()
TARNWICK = "tarnwick-cvd-10y"

WEIGHED: Tree = changed(
    tree_of(tiny_logit_model()),
    (
        "/model/predictors/-",
        {"id": "weight", "label": "Weight", "kind": "number", "quantity": "weight", "unit": "kg", "group": "Body"}
        | {"modifiable": True},
    ),
    (
        "/model/predictors/-",
        {"id": "height", "label": "Height", "kind": "number", "quantity": "height", "unit": "cm", "group": "Body"},
    ),
    (
        "/model/derived/-",
        {
            "id": "bmi",
            "label": "Body mass index",
            "quantity": "body_mass_index",
            "unit": "kg/m2",
            "equation": "body_mass_index",
            "inputs": {"weight": "weight", "height": "height"},
            "may_be_typed": True,
        },
    ),
    ("/model/equations/0/terms/-", {"id": "bmi", "coefficient": 0.05, "product": [{"of": "bmi"}], "fixed": True}),
    ("/model/predictors/1/modifiable", True),
)
WEIGHED_TEXTS = {"age": "50", "smoker": "yes", "prior_event": "no", "weight": "90", "height": "180"}


def compared(
    model: Model, texts: dict[str, str], *, recalibration: str | None = None, **changes: str
) -> tuple[Comparison, tuple[Finding, ...]]:
    """The comparison of a full entry with these values changed."""
    case = case_of(model, texts, recalibration=recalibration)
    comparison = compare(case, {id: Typed(text) for id, text in changes.items()}, TODAY)
    assert comparison is not None
    return comparison, comparison.findings


def test_both_numbers_are_those_of_two_assessments() -> None:
    found, findings = compared(shipped(TARNWICK), DEMO, smoker="no", systolic_bp="128", total_cholesterol="190 mg/dL")
    own = run(TARNWICK, DEMO).estimate
    changed_ = run(TARNWICK, DEMO, smoker="no", systolic_bp="128", total_cholesterol="190 mg/dL").estimate
    assert own is not None
    assert changed_ is not None
    assert own.band is not None
    assert changed_.band is not None
    assert found.own is not None
    assert found.changed is not None
    assert (found.own.probability, found.own.complement) == (own.probability, own.complement)
    assert (found.own.lower, found.own.upper) == (own.band.lower, own.band.upper)
    assert (found.changed.probability, found.changed.complement) == (changed_.probability, changed_.complement)
    assert (found.changed.lower, found.changed.upper) == (changed_.band.lower, changed_.band.upper)
    assert found.difference == pytest.approx(changed_.probability - own.probability, abs=1e-15)
    assert findings == ()
    assert found.because == ""
    assert [(c.field, c.typed, c.own, c.changed) for c in found.changes] == [
        ("systolic_bp", "128 mm[Hg]", "142 mmHg", "128 mmHg"),
        ("total_cholesterol", "190 mg/dL", "5.2 mmol/L", "190 mg/dL"),
        ("smoker", "no", "Yes", "No"),
    ]


def test_the_band_of_the_difference_is_narrower_than_the_distance_of_the_bands() -> None:
    """What both numbers share, such as the baseline, largely cancels."""
    found, _ = compared(shipped(TARNWICK), DEMO, smoker="no")
    assert found.own is not None
    assert found.changed is not None
    assert None not in (found.own.lower, found.own.upper, found.changed.lower, found.changed.upper)
    assert found.difference_lower is not None
    assert found.difference_upper is not None
    assert found.difference is not None
    assert found.difference_lower < found.difference < found.difference_upper < 0
    assert found.difference_lower > (found.changed.lower or 0) - (found.own.upper or 0)
    assert found.difference_upper < (found.changed.upper or 0) - (found.own.lower or 0)


def test_no_text_is_no_comparison() -> None:
    case = case_of(shipped(TARNWICK), DEMO)
    assert compare(case, {}, TODAY) is None
    assert compare(case, {"smoker": Typed(" ")}, TODAY) is None


@pytest.mark.parametrize(
    "change", [{"smoker": "yes"}, {"total_cholesterol": "5.20"}, {"hdl_cholesterol": "1.3 mmol/L"}]
)
def test_a_change_to_the_own_value_is_no_change(change: dict[str, str]) -> None:
    found, findings = compared(shipped(TARNWICK), DEMO, **change)
    assert (found.changes, findings) == ((), ())
    assert (found.difference, found.difference_lower, found.difference_upper) == (0.0, 0.0, 0.0)
    assert found.own == found.changed


def test_a_caution_about_the_own_value_is_not_said_again() -> None:
    found, findings = compared(shipped(TARNWICK), DEMO | {"systolic_bp": "225"}, systolic_bp="225", smoker="no")
    assert [change.field for change in found.changes] == ["smoker"]
    assert findings == ()


def test_the_changed_value_goes_through_the_same_checks() -> None:
    found, findings = compared(shipped(TARNWICK), DEMO, systolic_bp="230")
    assert found.changed is not None
    assert {finding.code for finding in findings} == {FindingCode.UNUSUAL, FindingCode.OUTSIDE_DERIVATION}
    assert {(finding.field, finding.grade) for finding in findings} == {("systolic_bp", Grade.CAUTION)}
    assert all(finding.message.startswith("With changes: Systolic blood pressure 230 mmHg ") for finding in findings)


@pytest.mark.parametrize(
    ("change", "code", "words"),
    [
        ({"total_cholesterol": "52"}, FindingCode.IMPOSSIBLE, "Total cholesterol 52 mmol/L is not possible"),
        ({"total_cholesterol": "lots"}, FindingCode.UNREADABLE, "Total cholesterol: "),
        ({"systolic_bp": "5 mmol/L"}, FindingCode.WRONG_UNIT, "Systolic blood pressure"),
        ({"hdl_cholesterol": "5.1"}, FindingCode.CROSS_CHECK, ""),
        ({"hdl_cholesterol": "1.2 on 2027-01-01"}, FindingCode.FUTURE_DATE, "HDL cholesterol is dated 2027-01-01"),
        ({"smoker": "perhaps"}, FindingCode.UNKNOWN_ANSWER, "Smokes now: “perhaps” is not one of the answers"),
        ({"smoker": "unknown"}, FindingCode.COMPARISON, "Smokes now: a changed value has to be a value"),
        ({"age": "50"}, FindingCode.COMPARISON, "Age is not something that can be changed."),
        ({"sex": "male"}, FindingCode.COMPARISON, "Sex is not something that can be changed."),
        ({"bp_treated": "yes"}, FindingCode.COMPARISON, "Takes tablets for blood pressure: a comparison cannot say"),
        ({"diabetes": "yes"}, FindingCode.COMPARISON, "Has diabetes is not among the values that the coefficient"),
        ({"prior_cvd": "no"}, FindingCode.COMPARISON, "Whether the model answers for this patient at all is not"),
        ({"smokr": "no"}, FindingCode.COMPARISON, "“smokr” is not a field of this model. Did you mean smoker?"),
    ],
)
def test_a_change_that_cannot_be_used_leaves_no_comparison(
    change: dict[str, str], code: FindingCode, words: str
) -> None:
    texts = DEMO | {"total_cholesterol": "4.5"}
    found, findings = compared(shipped(TARNWICK), texts, **change)
    assert (found.own, found.changed, found.difference, found.changes, findings) == (None, None, None, (), ())
    assert [(finding.code, finding.grade) for finding in found.refused] == [(code, Grade.STOP)]
    assert found.refused[0].field == next(iter(change))
    assert found.because == found.refused[0].message
    assert found.because.startswith(words)


def test_every_change_that_cannot_be_used_is_named() -> None:
    found, _ = compared(shipped(TARNWICK), DEMO, total_cholesterol="52", age="50", systolic_bp="130")
    assert [finding.field for finding in found.refused] == ["age", "total_cholesterol"]
    assert all(finding.message in found.because for finding in found.refused)


def test_a_value_that_decides_on_the_equation_is_never_changed() -> None:
    for id in FULL:
        model = shipped(id)
        may = {field.id for field in changeable_fields(model)}
        deciding = {key for equation in model.equations for key in equation.content.applies_when}
        treatments = {p.id for p in model.content.predictors if p.treatment is True}
        derived = {field.id for field in model.derived}
        assert not may & (deciding | treatments | derived | {"age", "sex"} | {e.id for e in model.exclusions})
        assert may, f"{id} offers nothing to change"


def test_a_modifiable_answer_that_decides_on_the_equation_is_refused_all_the_same() -> None:
    tree = changed(tree_of(tiny_logit_model()), ("/model/equations/0/applies_when", {"smoker": ["yes"]}))
    assert "decides which equation of the model answers" in why_unchangeable(model_of(tree), "smoker")
    assert why_unchangeable(model_of(tree_of(tiny_logit_model())), "smoker") == ""


def test_a_derived_value_follows_its_inputs() -> None:
    model = model_of(WEIGHED)
    found, findings = compared(model, WEIGHED_TEXTS, weight="81")
    # eta = -5 + 0.06 * 50 + 0.5 + 0.05 * BMI, BMI 90 / 1.8^2 and 81 / 1.8^2
    etas = [-1.5 + 0.05 * kg / 1.8**2 for kg in (90, 81)]
    chances = [1 / (1 + np.exp(-eta)) for eta in etas]
    assert found.own is not None
    assert found.changed is not None
    assert [found.own.probability, found.changed.probability] == pytest.approx(chances, rel=1e-14)
    assert findings == ()


def test_a_derived_value_typed_by_hand_stays_and_that_is_said() -> None:
    found, findings = compared(model_of(WEIGHED), WEIGHED_TEXTS | {"bmi": "28"}, weight="81")
    assert (found.difference, found.difference_lower, found.difference_upper) == (0.0, 0.0, 0.0)
    assert [(f.field, f.code, f.grade, f.message) for f in findings] == [
        (
            "bmi",
            FindingCode.COMPARISON,
            Grade.CAUTION,
            "With changes: Body mass index was typed, so it stays 28 kg/m² although Weight is changed; worked out anew"
            " it would be 25 kg/m². Empty the typed value to let it follow.",
        )
    ]


def test_a_derived_value_that_becomes_impossible_stops_the_comparison() -> None:
    found, _ = compared(model_of(WEIGHED), WEIGHED_TEXTS | {"height": "120"}, weight="300")
    assert found.changed is None
    assert found.because.startswith("Body mass index ")


def test_a_derived_value_is_refused_in_words() -> None:
    reason = why_unchangeable(model_of(WEIGHED), "bmi")
    assert reason == "Body mass index is worked out from Weight and Height and follows them. Change those instead."


def test_without_an_own_value_there_is_nothing_to_compare_with() -> None:
    texts = {id: text for id, text in WEIGHED_TEXTS.items() if id not in ("weight", "height")} | {"bmi": "28"}
    found, _ = compared(model_of(WEIGHED), texts, weight="81")
    assert found.because == "Weight has no value of the patient’s own to compare with. Type that first."


def test_without_a_covariance_there_is_a_difference_without_a_band() -> None:
    id = "ascvd-2013-pooled-cohort"
    found, _ = compared(shipped(id), FULL[id], smoker="yes")
    assert found.difference is not None
    assert found.difference > 0
    assert (found.difference_lower, found.difference_upper) == (None, None)
    assert found.because == shipped(id).equations[0].lines[0].no_band_because


def test_a_recalibration_holds_for_both_numbers() -> None:
    id = "cvd-2021-regional"
    model = shipped(id)
    chosen = model.recalibrations_at(model.spans[0])[-1].id
    found, _ = compared(model, FULL[id], recalibration=chosen, smoker="no")
    own, without = (run(id, FULL[id], recalibration=chosen, smoker=smoker).estimate for smoker in ("yes", "no"))
    assert own is not None
    assert without is not None
    assert found.own is not None
    assert found.changed is not None
    assert [found.own.probability, found.changed.probability] == [own.probability, without.probability]


def test_a_value_that_nobody_measured_leaves_no_comparison() -> None:
    case = case_of(shipped(TARNWICK), DEMO)
    columns = {id: column for id, column in case.columns.items() if id not in ("hdl_cholesterol", "smoker")}
    open_case = type(case)(
        case.model, case.equation, case.line, None, case.level, case.numbers, case.answers, columns, case.worked_out
    )
    found = compare(open_case, {"systolic_bp": Typed("120")}, TODAY)
    assert found is not None
    assert found.changed is None
    assert found.because == "HDL cholesterol and Smokes now are not measured, and a comparison needs every value."


def test_an_entry_keeps_its_changes_apart() -> None:
    entry = PatientEntry().with_change("smoker", Typed("no")).with_typed("smoker", Typed("yes"))
    assert (dict(entry.typed), dict(entry.changes)) == ({"smoker": Typed("yes")}, {"smoker": Typed("no")})
    assert dict(entry.with_change("smoker", None).changes) == {}
    assert PatientEntry().changes == {}
