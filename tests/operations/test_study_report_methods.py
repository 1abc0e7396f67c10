"""What was done about doubt, in a report: every figure against those of the fit."""

from dataclasses import replace
from pathlib import Path

from clinicalc.coefficients.spans import Span
from clinicalc.development.study_figures import FitFigures
from clinicalc.development.study_method_figures import (
    Corrected,
    LostReplicates,
    OptimismFigures,
    Penalty,
    PenaltyFigures,
    Statistic,
)
from clinicalc.operations.study_report_methods import tell_methods
from clinicalc.report.contents import Prose, Section, Table
from tests.operations.reported_studies import binary_study, fit_from, shipped

CORRECTED = (
    Corrected(Statistic.C, 0.7824, 0.0041, 0.7783),
    Corrected(Statistic.SLOPE, 1.0, 0.021, 0.979),
    Corrected(Statistic.INTERCEPT, 0.0, -0.0123, 0.0123),
    Corrected(Statistic.BRIER, 0.08011, -0.0009, 0.08101),
)


def _told(figures: FitFigures) -> dict[str, Section]:
    return {section.heading: section for section in tell_methods(shipped()[0], figures, "")}


def _prose(section: Section) -> str:
    return " ".join(text for block in section.blocks if isinstance(block, Prose) for text in block.paragraphs)


def _cells(section: Section) -> list[tuple[object, ...]]:
    return [row.cells for block in section.blocks if isinstance(block, Table) for row in block.rows]


def test_complete_cases_no_bootstrap_competing_events() -> None:
    figures = shipped()[0].figures[0]
    told = _told(figures)
    assert list(told) == ["Missing values", "Optimism", "Competing events"]
    assert f"{figures.left_out.left_out} of the 5,000 people to whom it applies (13.4\u202f%)" in _prose(
        told["Missing values"]
    )
    assert "no bootstrap" in _prose(told["Optimism"])
    (one,) = figures.incidences
    percents = [f"{100 * share:.2f}\u202f%" for share in (one.incidence, one.se, one.other, one.naive)]
    higher = f"{100 * (one.naive / one.incidence - 1):.1f}\u202f%"
    assert _cells(told["Competing events"]) == [("10 years", *percents, higher)]


def test_optimism() -> None:
    lost = (LostReplicates("separated", 2, ("smoker",)), LostReplicates("no_events", 1, ()))
    optimism = OptimismFigures(200, 197, 4, CORRECTED, lost, Span(10.0))
    section = _told(replace(shipped()[0].figures[0], optimism=optimism))["Optimism"]
    assert _cells(section) == [
        ("C", "0.782", "0.004", "0.778"),
        ("calibration slope", "1.000", "0.021", "0.979"),
        ("logarithm of observed over expected, 10 years", "0.000", "\u22120.012", "0.012"),
        ("Brier score, 10 years", "0.0801", "\u22120.0009", "0.0810"),
    ]
    assert (
        "200 samples were drawn with replacement, seed 4; the model could be fitted anew to 197 of them. Lost:"
        " separation of smoker in 2; no event in 1." in _prose(section)
    )


def test_optimism_that_is_not_stated() -> None:
    optimism = OptimismFigures(20, 3, 1, (), (LostReplicates("separated", 17, ("x",)),))
    section = _told(replace(shipped()[0].figures[0], optimism=optimism))["Optimism"]
    assert "Optimism is not stated: too many samples could not be fitted." in _prose(section)
    assert _cells(section) == []


def test_penalties() -> None:
    figures = shipped()[0].figures[0]
    firth = _told(replace(figures, penalty=PenaltyFigures(Penalty.FIRTH, None, False, 3.0, 0.1234, 0.12)))["Penalty"]
    assert "Firth 1993" in _prose(firth)
    assert "degrees of freedom" not in _prose(firth)  # they are not worked out
    assert "The mean of the predictions is 12.34\u202f%, where 12.00\u202f% had the event." in _prose(firth)
    ridge = _told(replace(figures, penalty=PenaltyFigures(Penalty.RIDGE, 4.25, True, 2.61)))["Penalty"]
    assert "strength 4.25, chosen by 10-fold cross-validated deviance" in _prose(ridge)
    assert "2.61 effective degrees of freedom" in _prose(ridge)
    said = _told(replace(figures, penalty=PenaltyFigures(Penalty.RIDGE, 4.0, False, 2.61)))["Penalty"]
    assert "strength 4, as the study file states it" in _prose(said)


def test_filled_in(tmp_path: Path) -> None:
    fitted, _ = fit_from(binary_study(tmp_path, imputation={"sets": 3, "rounds": 2, "seed": 9}))
    figures = fitted.figures[0]
    assert figures.imputed is not None
    section = next(one for one in tell_methods(fitted, figures, "") if one.heading == "Missing values")
    rounds = figures.imputed.rounds
    assert f"3 times by chained equations, each set after {rounds} rounds over the columns, seed 9" in _prose(section)
    assert f"{figures.imputed.mixing:.3f}, of age" in _prose(section)
    assert _cells(section) == [("age", "30", "5.0\u202f%", "–")]
