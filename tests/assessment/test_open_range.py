"""The range over a value not measured, and the band beside it, where neither is that of one normal."""

from dataclasses import replace
from math import exp

import pytest

from clinicalc.assessment.assess import assess
from clinicalc.assessment.entry import entry_from_texts
from clinicalc.assessment.not_measured import OpenResult
from clinicalc.assessment.numerals import percent
from clinicalc.assessment.open_findings import say_averaged
from tests.assessment.cases import NOW, WOMAN_61, run, shipped
from tests.assessment.open_models import WOMAN_WEIGHED, estimated, of, open_finding, with_people
from tests.assessment.whole_case import model_of as unproved_model_of
from tests.coefficients.tiny_model import changed, tiny_logit_model, tree_of

LIPIDS = "general-cvd-2008-lipids"
DIABETES = "diabetes-2007-clinical"


@pytest.mark.parametrize(
    ("who", "level", "glucose", "words"),
    [
        ({}, 0.95, ("90", "110"), "would lie between {} and {} for 95\u202f% of such people."),
        ({"age": "30", "weight": "50"}, 0.8, ("90", "90"), "would be {} for at least 80\u202f% of such people."),
    ],
)
def test_across_a_cut_the_range_ends_at_numbers_that_there_are(
    who: dict[str, str], level: float, glucose: tuple[str, str], words: str
) -> None:
    """With glucose open there are two numbers, below 100 and from 100 mg/dL; the higher for 1 in 3, or in 12."""
    model, texts = with_people(DIABETES, "glucose"), WOMAN_WEIGHED | who
    entry = entry_from_texts(texts | {"glucose": "unknown"})
    assessment = assess(model, entry, span=model.spans[0], at=NOW, level=level)
    ends = [estimated(of(model, texts, glucose=typed)) for typed in glucose]
    found = estimated(assessment).not_measured
    assert found is not None
    assert (found.lower, found.upper) == pytest.approx(tuple(end.probability for end in ends), rel=1e-12)
    shown = dict.fromkeys(percent(end.probability, end.complement) for end in ends)
    assert words.format(*shown) in open_finding(assessment, "glucose").message


def test_the_band_holds_an_average_that_a_rare_answer_makes() -> None:
    """1 in 500 smokes and smoking counts for 6 on the log odds: the average lies above 99 % of such people."""
    people = {"source": "Invented people", "numbers": [], "correlations": []}
    row = {"id": "smoker", "intercept": -6.2, "coefficients": {}}
    precise = {"covariance": [[1e-8, 0], [0, 1e-8]], "at_centre": [{"variance": 1e-8, "centre": [55, 0], "years": 10}]}
    tree = changed(
        tree_of(tiny_logit_model()),
        ("/model/population", {**people, "yes_no": [row]}),
        ("/model/predictors/1/may_be_missing", True),
        ("/model/equations/0/terms/1/coefficient", 6),
        ("/model/equations/0/uncertainty", {"basis": "covariance", **precise}),
    )
    assessment = of(unproved_model_of(tree), {"age": "40", "prior_event": "no"}, smoker="unknown")
    estimate = estimated(assessment)
    share, logit = 1 / (1 + exp(6.2)), 0.06 * 40 - 5
    average = (1 - share) / (1 + exp(-logit)) + share / (1 + exp(-logit - 6))
    assert estimate.probability == pytest.approx(average, rel=1e-12)
    assert estimate.band is not None
    assert estimate.band.upper == estimate.probability
    assert estimate.band.lower == pytest.approx(1 / (1 + exp(-logit)), rel=1e-2)


def test_a_band_that_is_not_wider_on_both_sides_is_not_called_so() -> None:
    model = shipped(LIPIDS)
    found = estimated(run(LIPIDS, WOMAN_61, hdl_cholesterol="unknown")).not_measured
    assert found is not None
    field = model.by_id["hdl_cholesterol"]
    result = OpenResult(
        -2.0, 0.12, 0.88, 0.1, 0.15, frozenset(), (), replace(found, known_lower=0.11, known_upper=0.14)
    )
    for known_upper, verb in ((0.14, "widens"), (0.16, "moves")):
        narrowed = replace(result, not_measured=replace(result.not_measured, known_upper=known_upper))
        (said,) = say_averaged((field,), narrowed)
        assert f"The band {verb} from 11.0–{100 * known_upper:.1f}\u202f% to 10.0–15.0\u202f%." in said.message
