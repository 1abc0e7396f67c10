"""What the command says of penalty, imputation, bootstrap and competing events, in words and as one JSON object."""

from pathlib import Path

import pytest

from clinicalc.coefficients.spans import Span
from clinicalc.development.study_method_figures import (
    Corrected,
    LostReplicates,
    OptimismFigures,
    Penalty,
    PenaltyFigures,
    Statistic,
)
from clinicalc.operations.study_method_record import record_penalty
from clinicalc.operations.study_method_words import tell_optimism, tell_penalty
from clinicalc.operations.study_record import record_fits
from clinicalc.operations.study_words import tell_fits
from tests.development.method_studies import binary_study, fitted_of, timed_study

METHODS = {"imputation": {"sets": 3, "rounds": 3, "seed": 1}, "bootstrap": {"replicates": 20, "seed": 1}}


def test_everything_that_was_done_is_said(tmp_path: Path) -> None:
    fitted = fitted_of(tmp_path, timed_study("fine-gray", **METHODS))
    text = "\n".join(tell_fits(fitted))
    (figures,) = fitted.figures
    assert figures.imputed is not None
    assert f"all: Fine–Gray fit to 400 people with {figures.events} events, {figures.competing} competing" in text
    assert "competing events counted\n" in text
    assert f"  Filled in, 3 sets after {figures.imputed.rounds} rounds each, seed 1: x 40\n" in text
    assert "Mixing: largest ratio of Gelman and Rubin" in text
    assert "Left out" not in text
    assert "(without terms" in text
    assert "means over the sets" in text
    assert "  Bootstrap: 20 samples, seed 1\n" in text
    assert "Missing info\n" in text


def test_the_same_as_one_object(tmp_path: Path) -> None:
    fitted = fitted_of(tmp_path, timed_study("fine-gray", **METHODS))
    (record,) = record_fits(fitted)
    (figures,) = fitted.figures
    assert record["penalty"] is None
    imputed, drawn, incidences = record["imputation"], record["bootstrap"], record["incidences"]
    assert isinstance(imputed, dict)
    assert isinstance(drawn, dict)
    assert isinstance(incidences, list)
    assert figures.imputed is not None
    assert figures.optimism is not None
    assert (imputed["sets"], imputed["filled"], imputed["settled"]) == (3, {"x": 40}, figures.imputed.settled)
    assert [one["term"] for one in imputed["terms"]] == ["x", "z"]
    assert (drawn["samples"], drawn["fitted"], drawn["lost"]) == (20, 20, [])
    assert drawn["horizon"] == {"time": 1.0, "unit": "a"}
    for said, found in zip(drawn["figures"], figures.optimism.figures, strict=True):
        assert said["corrected"] == found.corrected == pytest.approx(said["apparent"] - said["optimism"], abs=1e-12)
    (incidence,) = incidences
    assert incidence["incidence"] < incidence["censored"]
    assert incidence["excess"] == pytest.approx(incidence["censored"] / incidence["incidence"] - 1, abs=1e-12)


def test_a_plain_fit_has_none_of_it(tmp_path: Path) -> None:
    fitted = fitted_of(tmp_path, binary_study())
    (record,) = record_fits(fitted)
    assert [record[name] for name in ("penalty", "imputation", "bootstrap", "incidences")] == [None, None, None, []]
    text = "\n".join(tell_fits(fitted))
    assert "Left out with a value missing: 40 of 400" in text
    assert "Bootstrap" not in text
    # the heading stands over its figures though every name is shorter than it
    heading, first = text.splitlines()[text.splitlines().index(next(filter(_is_heading, text.splitlines()))) :][:2]
    assert len(heading) == len(first)


def _is_heading(line: str) -> bool:
    return line.startswith("  Term ")


def test_a_penalty_and_whether_it_was_chosen() -> None:
    ridge = PenaltyFigures(Penalty.RIDGE, 4.0, chosen=True, degrees=8.34)
    assert list(tell_penalty(ridge)) == [
        "  Ridge penalty of strength 4, chosen by 10-fold cross-validation; 8.3 effective degrees of freedom"
    ]
    firth = PenaltyFigures(Penalty.FIRTH, None, False, 3.0, mean_predicted=0.3124, observed=0.31)
    assert list(tell_penalty(firth)) == [
        "  Firth’s penalty",
        "  Mean predicted 31.2\u202f%, observed 31.0\u202f%",
    ]
    said = [record_penalty(one) for one in (ridge, firth)]
    # those of Firth's penalty are not worked out
    assert [one and one["effective_degrees"] for one in said] == [8.34, None]


def test_samples_that_were_lost_are_counted_with_their_terms() -> None:
    figures = (Corrected(Statistic.C, 0.8, 0.00004, 0.79996), Corrected(Statistic.BRIER, 0.1, -0.00004, 0.10004))
    lost = (LostReplicates("separated", 3, ("treated",)), LostReplicates("no_events", 1, ()))
    said = list(tell_optimism(OptimismFigures(500, 496, 1, figures, lost, Span(10.0, "a"))))
    assert said[:3] == [
        "  Bootstrap: 500 samples, seed 1, 496 of them fitted",
        "    Lost: separation of treated in 3",
        "    Lost: no event in 1",
    ]
    assert said[3].split() == ["Figure", "Apparent", "Optimism", "Corrected"]
    assert said[4].split() == ["C", "0.8000", "0.0000", "0.8000"]
    # no minus before nought
    assert said[5].split() == ["Brier", "score,", "10", "years", "0.1000", "0.0000", "0.1000"]
    assert len({len(line) for line in said[3:]}) == 1
    empty = list(tell_optimism(OptimismFigures(500, 300, 1, (), lost)))
    assert empty[-1] == "    No optimism is stated: too many samples could not be fitted."
