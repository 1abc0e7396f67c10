"""What the documentation says of filled-in values, competing events, optimism and penalties, from plain figures."""

from dataclasses import replace
from pathlib import Path

from clinicalc.development.fit_documentation import document_fit
from clinicalc.development.stated_fit import (
    MissingShare,
    StatedConcordance,
    StatedFigure,
    StatedFilling,
    StatedFit,
    StatedIncidence,
    StatedMean,
    StatedOptimism,
    StatedSlope,
)
from clinicalc.development.study_documentation import document_study
from tests.development.method_studies import binary_study, fitted_of
from tests.development.test_fit_documentation import BARE, told

FILLING = StatedFilling(
    sets=20,
    rounds=10,
    seed=7,
    filled=(MissingShare("Smoker", 20), MissingShare("Total cholesterol", 500)),
    not_filled=(MissingShare("Ethnic group", 12),),
    mixing=1.034,
    worst="Total cholesterol",
    settled=True,
)
OPTIMISM = StatedOptimism(
    samples=500,
    used=497,
    seed=1,
    figures=(StatedFigure("C", 0.8123, 0.0101, 0.8022), StatedFigure("Calibration intercept", 0.0, -0.0204, 0.0204)),
    lost=("separation of treated in 3",),
)


def texts_of(fit: StatedFit) -> dict[str, str]:
    return told(document_fit([fit], [], is_timed=True))


def test_filled_in_values_are_counted_and_explained() -> None:
    text = texts_of(replace(BARE, left_out=12, filling=FILLING))["missing data"]
    assert text.startswith(
        "Filled in by multiple imputation: Total cholesterol 500 (12.5\u202f%) and Smoker 20 (0.5\u202f%), among the"
        " 4,000 people used; 20 sets by chained equations, 10 rounds each, seed 7."
    )
    assert "Largest ratio of Gelman and Rubin 1.03 (Total cholesterol): the chains had mixed." in text
    assert text.endswith("12 people were left out all the same, without Ethnic group 12 (0.3\u202f%).")
    unsettled = texts_of(replace(BARE, filling=replace(FILLING, settled=False)))["missing data"]
    assert "the chains had not mixed, and more rounds are needed." in unsettled
    assert unsettled.endswith("Nobody was left out.")


def test_optimism_stands_beside_the_apparent_figure() -> None:
    fit = replace(BARE, concordance=StatedConcordance(0.8123, 0.78, 0.8349))
    assert "not corrected for optimism" in texts_of(fit)["discrimination"]
    assert "internal validation" in document_fit([fit], [], is_timed=True).unanswered
    texts = texts_of(replace(fit, optimism=OPTIMISM))
    assert texts["discrimination"].endswith("0.802 when corrected for optimism.")
    said = texts["internal validation"]
    assert "C: 0.8123, optimism 0.0101, corrected 0.8022." in said
    assert "Calibration intercept: 0.0000, optimism \u22120.0204, corrected 0.0204." in said
    assert "3 of them could not be fitted (separation of treated in 3)." in said
    assert said.endswith("is no validation in other people.")


def test_no_optimism_is_stated_where_too_many_samples_were_lost() -> None:
    fit = replace(BARE, concordance=StatedConcordance(0.8123, 0.78, 0.8349))
    texts = texts_of(replace(fit, optimism=replace(OPTIMISM, used=300, figures=())))
    assert texts["internal validation"].endswith(
        "No optimism is stated: the samples that could be fitted are the easier ones."
    )
    assert "200 of them could not be fitted" in texts["internal validation"]
    assert "not corrected for optimism" in texts["discrimination"]


def test_the_share_with_the_event_stands_beside_the_counts() -> None:
    at = StatedIncidence("10 years", 0.1012, 0.0045, 0.052, 0.1043)
    text = texts_of(replace(BARE, competing=31, incidences=(at,)))["sample size and events"]
    assert text.endswith(
        "By 10 years 10.1\u202f% have had the event (standard error 0.4\u202f%) and 5.2\u202f% a competing event first"
        " (Aalen–Johansen); with these taken as censored the share with the event would be 10.4\u202f% (one minus"
        " Kaplan–Meier)."
    )


def test_a_slope_is_called_what_it_is() -> None:
    exact = texts_of(replace(BARE, calibration_slope=StatedSlope(1.0, is_exact=True)))["apparent calibration"]
    assert "where maximum likelihood makes it 1" in exact
    penalised = replace(BARE, calibration_slope=StatedSlope(1.218, is_exact=False), mean=StatedMean(0.3124, 0.31))
    text = texts_of(penalised)["apparent calibration"]
    assert text.startswith("Slope 1.22 in the people the model was fitted to, as the penalty left it;")
    assert text.endswith("Mean predicted there 31.2\u202f%, observed 31.0\u202f%.")


def test_a_penalty_is_named_with_its_strength_and_covariance(tmp_path: Path) -> None:
    ridge = fitted_of(tmp_path, binary_study(penalty="ridge", ridge_strength=4.0))
    texts = {item.item: item.text for item in document_study(ridge).items}
    assert texts["analysis"].startswith("Logistic regression with a ridge penalty of strength 4, stated beforehand,")
    assert "holds nothing of what shrinking moves" in texts["analysis"]
    firth = fitted_of(tmp_path, binary_study(penalty="firth"))
    texts = {item.item: item.text for item in document_study(firth).items}
    assert "Firth’s penalised likelihood" in texts["analysis"]
    assert "Mean predicted there" in texts["apparent calibration"]
