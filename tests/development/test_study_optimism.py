"""The optimism of a study's fits, from the study file to its figures and sentences."""

from pathlib import Path
from typing import Any

import numpy as np
import pytest

from clinicalc.coefficients.spans import Span
from clinicalc.development.estimating import FittedStudy
from clinicalc.development.study_documentation import document_study
from clinicalc.development.study_losses import remark_lost
from clinicalc.development.study_method_figures import OptimismFigures, Statistic
from clinicalc.development.study_optimism import has_few_events
from clinicalc.errors import Stopped
from clinicalc.estimation.optimism import Bootstrap, average
from clinicalc.estimation.second_process import work_out
from clinicalc.operations.course import Course, Progress
from clinicalc.operations.study import check_data, fit_study, open_study
from tests.development.describing import Tree
from tests.development.studying import plain_study, timed, write_people, write_study
from tests.estimation.cohorts import birthwt, lung
from tests.estimation.test_bootstrap_references import repeated_birthwt, repeated_lung

BIRTHWT = ["age", "lwt", "black", "other", "smoke", "ht", "ui"]
LUNG = ["age", "male", "ecog", "wt_loss"]
BINARY: Tree = {"kind": "binary", "column": "low", "event": "1", "no_event": "0"}


def _fit(folder: Path, tree: Tree, columns: dict[str, Any], course: Course | None = None) -> FittedStudy:
    write_people(folder / "people.csv", columns)
    study = open_study(write_study(folder, tree))
    course = Course() if course is None else course
    return fit_study(study, check_data(study, course), course)


def _birthwt() -> dict[str, Any]:
    people = birthwt()
    return {"low": people.y, **dict(zip(BIRTHWT, people.x.T, strict=True))}


def _lung() -> dict[str, Any]:
    cohort = lung().cohort
    return {"time": cohort.times, "status": cohort.events, **dict(zip(LUNG, cohort.x.T, strict=True))}


def _optimism(fitted: FittedStudy) -> OptimismFigures:
    (figures,) = fitted.figures
    assert figures.optimism is not None
    return figures.optimism


def test_a_logistic_study_has_the_figures_of_its_engine(tmp_path: Path) -> None:
    tree = plain_study(BIRTHWT, BINARY, {"kind": "logistic"}, horizons=[{"years": 1}], bootstrap={"replicates": 60})
    fitted = _fit(tmp_path, tree, _birthwt())
    found = _optimism(fitted)
    repeated = repeated_birthwt()
    own = average([repeated.judge_apparent()], work_out(Bootstrap((repeated,), 60, 1), lambda done: None))
    assert [one.statistic for one in found.figures] == list(Statistic)
    for one in found.figures:
        assert one.apparent == pytest.approx(own[one.statistic].apparent, abs=1e-9)
        assert one.corrected == pytest.approx(own[one.statistic].corrected, abs=1e-9)
        assert one.corrected == one.apparent - one.optimism
    concordance = fitted.figures[0].concordance
    assert concordance is not None
    assert found.figures[0].apparent == concordance.c
    assert (found.replicates, found.used, found.seed, found.lost, found.span) == (60, 60, 1, (), None)


def test_a_cox_study_is_judged_at_its_last_horizon(tmp_path: Path) -> None:
    tree = plain_study(
        LUNG,
        timed(),
        {"kind": "cox"},
        horizons=[{"time": 180, "unit": "d"}, {"time": 365, "unit": "d"}],
        bootstrap={"replicates": 40, "seed": 9},
    )
    found = _optimism(_fit(tmp_path, tree, _lung()))
    repeated = repeated_lung()
    own = average([repeated.judge_apparent()], work_out(Bootstrap((repeated,), 40, 9), lambda done: None))
    for one in found.figures:
        assert one.corrected == pytest.approx(own[one.statistic].corrected, abs=1e-9)
    assert found.span == Span(365.0, "d")


def test_without_the_table_there_is_no_bootstrap(tmp_path: Path) -> None:
    fitted = _fit(tmp_path, plain_study(LUNG, timed(), {"kind": "cox"}), _lung())
    assert fitted.figures[0].optimism is None


def test_a_competing_fit_has_no_intercept(tmp_path: Path) -> None:
    columns = _lung()
    columns["status"] = np.where(np.arange(len(columns["time"])) % 5 == 0, 2 * columns["status"], columns["status"])
    tree = plain_study(LUNG, timed(competing=["2"]), {"kind": "fine-gray"}, bootstrap={"replicates": 20})
    tree["equations"][0]["competing_events"] = {"handled": "subdistribution", "which": "Other causes."}
    fitted = _fit(tmp_path, tree, columns)
    figures = {one.statistic: one for one in _optimism(fitted).figures}
    assert set(figures) == {Statistic.C, Statistic.SLOPE, Statistic.BRIER}
    concordance = fitted.figures[0].concordance
    assert concordance is not None
    assert figures[Statistic.C].apparent == concordance.c
    assert figures[Statistic.SLOPE].apparent == 1.0
    assert figures[Statistic.SLOPE].optimism > 0


def test_it_says_how_far_it_is_and_can_be_stopped(tmp_path: Path) -> None:
    told: list[Progress] = []

    def listen(progress: Progress) -> None:
        told.append(progress)
        if progress.done >= 10 and progress.of == 5000:
            course.stop()

    course = Course(tell=listen)
    tree = plain_study(LUNG, timed(), {"kind": "cox"}, bootstrap={"replicates": 5000})
    with pytest.raises(Stopped):
        _fit(tmp_path, tree, _lung(), course)
    assert told[-1].words == "Drawing samples for all"
    assert 10 <= told[-1].done < 5000


def _rare(people: int, with_it: int) -> dict[str, Any]:
    """An answer that so few have, and half of them the event."""
    rng = np.random.default_rng(1)
    columns = {"low": (rng.random(people) < 0.4) * 1.0, "age": rng.normal(size=people) * 10 + 50}
    columns["rare"] = (np.arange(people) < with_it) * 1.0
    columns["low"][:with_it] = np.arange(with_it) % 2
    return columns


def _fit_rare(folder: Path, with_it: int) -> tuple[OptimismFigures, str]:
    tree = plain_study(["age", "rare"], BINARY, {"kind": "logistic"}, bootstrap={"replicates": 200})
    fitted = _fit(folder, tree, _rare(300, with_it))
    told = [remark for remark in fitted.remarks if "bootstrap" in remark]
    return _optimism(fitted), told[0] if told else ""


def test_samples_without_a_rare_answer_are_counted_and_told(tmp_path: Path) -> None:
    found, told = _fit_rare(tmp_path, 8)
    lost = found.replicates - found.used
    assert 0 < lost <= 10
    assert sum(one.count for one in found.lost) == lost
    assert {term for one in found.lost for term in one.terms} == {"rare"}
    assert len(found.figures) == 4
    assert told.startswith(f"all: {lost} of 200 bootstrap samples could not be fitted (")
    assert "separation of “rare”" in told or 'separation of "rare"' in told
    assert "more than" not in told


def test_more_than_a_twentieth_lost_is_a_caution(tmp_path: Path) -> None:
    found, told = _fit_rare(tmp_path, 6)
    assert 10 < found.replicates - found.used <= 40
    assert len(found.figures) == 4
    assert "more than 5\u202f%" in told


def test_more_than_a_fifth_lost_leaves_no_figure(tmp_path: Path) -> None:
    found, told = _fit_rare(tmp_path, 2)
    assert found.replicates - found.used > 40
    assert found.figures == ()
    assert {one.code for one in found.lost} == {"separated", "constant"}
    assert "so no optimism is stated" in told


def test_one_lost_is_told_in_the_singular() -> None:
    figures = OptimismFigures(100, 99, 1, (), ())
    (told,) = remark_lost("men", figures)
    assert told.startswith("men: 1 of 100 bootstrap samples could not be fitted")
    assert told.endswith("was left out.")
    assert list(remark_lost("men", OptimismFigures(100, 100, 1, (), ()))) == []


def test_clusters_are_drawn_whole(tmp_path: Path) -> None:
    """Every person four times over as a cluster is drawn as he would be drawn alone: the optimism is the same kind."""
    people = _birthwt()
    four = {name: np.repeat(values, 4) for name, values in people.items()}
    four["place"] = np.repeat(np.arange(len(people["low"])), 4)
    robust = {"kind": "logistic", "covariance": "cluster", "cluster": "place"}
    own = _optimism(_fit(tmp_path, plain_study(BIRTHWT, BINARY, robust, bootstrap={"replicates": 60}), four))
    alone = _optimism(
        _fit(tmp_path, plain_study(BIRTHWT, BINARY, {"kind": "logistic"}, bootstrap={"replicates": 60}), people)
    )
    for one, other in zip(own.figures, alone.figures, strict=True):
        assert one.apparent == pytest.approx(other.apparent, abs=1e-9)
        assert one.optimism == pytest.approx(other.optimism, abs=1e-9)


def test_filled_in_sets_share_the_replicates(tmp_path: Path) -> None:
    people = _birthwt()
    rng = np.random.default_rng(3)
    people["lwt"] = np.where(rng.random(len(people["lwt"])) < 0.15, np.nan, people["lwt"])
    tree = plain_study(
        BIRTHWT,
        BINARY,
        {"kind": "logistic"},
        bootstrap={"replicates": 40},
        imputation={"sets": 4, "rounds": 5, "seed": 1},
    )
    fitted = _fit(tmp_path, tree, people)
    found = _optimism(fitted)
    assert fitted.figures[0].imputed is not None
    assert found.used + sum(one.count for one in found.lost) == 40
    figures = {one.statistic: one for one in found.figures}
    # near the figure of the whole data: 0.734 apparent
    assert figures[Statistic.C].apparent == pytest.approx(0.734, abs=0.03)
    assert figures[Statistic.C].optimism > 0


@pytest.mark.parametrize(
    ("more", "told"), [({"ridge_strength": 8.0}, ""), ({}, "chosen anew in each bootstrap sample")]
)
def test_a_ridge_shrinks_and_so_is_less_optimistic(tmp_path: Path, more: Tree, told: str) -> None:
    def fit(estimate: Tree) -> FittedStudy:
        return _fit(tmp_path, plain_study(BIRTHWT, BINARY, estimate, bootstrap={"replicates": 20}), _birthwt())

    plain = {one.statistic: one for one in _optimism(fit({"kind": "logistic"})).figures}
    fitted = fit({"kind": "logistic", "penalty": "ridge", **more})
    ridge = {one.statistic: one for one in _optimism(fitted).figures}
    # shrunk predictions are too narrow for their own people: their slope is above 1, and nearer to 1 in others
    assert ridge[Statistic.SLOPE].apparent > 1.05
    assert ridge[Statistic.SLOPE].corrected > plain[Statistic.SLOPE].corrected
    assert any(told and told in remark for remark in fitted.remarks) == bool(told)


def test_firth_is_repeated_as_firth(tmp_path: Path) -> None:
    """With its penalty no sample is lost to separation."""
    tree = plain_study(["age", "rare"], BINARY, {"kind": "logistic", "penalty": "firth"}, bootstrap={"replicates": 60})
    found = _optimism(_fit(tmp_path, tree, _rare(300, 6)))
    assert {one.code for one in found.lost} <= {"constant"}
    assert len(found.figures) == 4


def test_a_ridge_of_times_is_repeated(tmp_path: Path) -> None:
    estimate = {"kind": "cox", "penalty": "ridge", "ridge_strength": 20.0}
    found = _optimism(_fit(tmp_path, plain_study(LUNG, timed(), estimate, bootstrap={"replicates": 20}), _lung()))
    figures = {one.statistic: one for one in found.figures}
    assert figures[Statistic.SLOPE].apparent > 1.02
    assert found.lost == ()


def test_few_events_for_each_coefficient_are_told(tmp_path: Path) -> None:
    """59 events for 7 coefficients are 8.4 each, for 5 they are 11.8."""
    boot = {"replicates": 20}
    few = _fit(tmp_path, plain_study(BIRTHWT, BINARY, {"kind": "logistic"}, bootstrap=boot), _birthwt())
    assert sum("still a little too good" in remark for remark in few.remarks) == 1
    assert "With so few events" in _internal(few)
    enough = _fit(tmp_path, plain_study(BIRTHWT[:5], BINARY, {"kind": "logistic"}, bootstrap=boot), _birthwt())
    assert not any("still a little too good" in remark for remark in enough.remarks)
    assert "With so few events" not in _internal(enough)


def test_of_a_binary_outcome_the_rarer_answer_counts(tmp_path: Path) -> None:
    """130 of 189 have the answer turned round, and still only 59 tell."""
    turned = _birthwt() | {"low": 1.0 - birthwt().y}
    tree = plain_study(BIRTHWT, BINARY, {"kind": "logistic"}, bootstrap={"replicates": 20})
    assert has_few_events(_fit(tmp_path, tree, turned).figures[0])
    (without,) = _fit(tmp_path, {key: part for key, part in tree.items() if key != "bootstrap"}, turned).figures
    assert not has_few_events(without)


def _internal(fitted: FittedStudy) -> str:
    return " ".join(one.text for one in document_study(fitted).items if one.item == "internal validation")


def test_the_corrected_c_is_near_that_in_new_people(tmp_path: Path) -> None:
    """12 studies of 300 people, 4 of 10 columns of use, and 20,000 new people of the same truth (numpy's PCG64)."""
    names, slopes = [f"v{place}" for place in range(10)], np.array([0.4] * 4 + [0.0] * 6)
    x, y = _people_of(np.random.default_rng(99), slopes, 20_000)
    tree = plain_study(names, BINARY, {"kind": "logistic"}, bootstrap={"replicates": 60})
    found = []
    for seed in range(12):
        own, low = _people_of(np.random.default_rng(seed), slopes, 300)
        fitted = _fit(tmp_path, tree, {"low": low.astype(int), **dict(zip(names, own.T, strict=True))})
        c = next(one for one in _optimism(fitted).figures if one.statistic is Statistic.C)
        ranks = np.argsort(np.argsort((x * fitted.fits["all"].coefficients).sum(axis=1))) + 1.0
        with_it = y.sum()
        true = (ranks[y == 1].sum() - with_it * (with_it + 1) / 2) / (with_it * (len(y) - with_it))
        found.append((c.apparent - true, c.corrected - true))
    apparent, corrected = np.mean(found, axis=0)
    assert apparent > 0.03
    assert abs(corrected) < 0.02


def _people_of(draw: np.random.Generator, slopes: np.ndarray, people: int) -> tuple[np.ndarray, np.ndarray]:
    x = draw.normal(size=(people, len(slopes))).round(4)
    y = (draw.random(people) < 1 / (1 + np.exp(1 - (x * slopes).sum(axis=1)))).astype(np.float64)
    return x, y
