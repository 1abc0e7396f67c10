"""What was fitted, in a report: every figure against the fits themselves, limits recomputed with scipy."""

import math
import re
from dataclasses import replace
from pathlib import Path
from typing import Any

import numpy as np
import pytest
from scipy import stats

from clinicalc.development.estimating import FittedStudy
from clinicalc.development.study_method_figures import PooledTerm
from clinicalc.estimation.concordance import Concordance
from clinicalc.operations.study_report_model import limits_of, tell_model
from clinicalc.report.contents import FactList, NotedCell, Row, Section, Table
from tests.development.describing import Tree
from tests.operations.reported_studies import binary_study, fit_from, shipped, two_equations


def _sections(fitted: FittedStudy, place: int = 0) -> list[Section]:
    return list(tell_model(fitted, fitted.study.fits[place], fitted.figures[place], ""))


def _table(section: Section) -> Table:
    (table,) = [block for block in section.blocks if isinstance(block, Table)]
    return table


def _rows(fitted: FittedStudy, place: int = 0) -> dict[str, Row]:
    found = {}
    for row in _table(_sections(fitted, place)[0]).rows:
        assert isinstance(row.cells[0], NotedCell)
        found[row.cells[0].text] = row
    return found


def _number(text: object) -> float:
    assert isinstance(text, str)
    return float(text.replace("\u2212", "-").replace(",", ""))


def _ratio(text: object) -> list[float]:
    assert isinstance(text, str)
    return [float(figure) for figure in re.findall(r"[0-9.]+", text)]


def test_every_coefficient_with_its_standard_error() -> None:
    fitted, _ = shipped()
    fit, rows = fitted.fits["all"], _rows(fitted)
    assert tuple(rows) == fit.names
    assert fit.covariance is not None
    for place, name in enumerate(fit.names):
        assert _number(rows[name].cells[1]) == pytest.approx(fit.coefficients[place], rel=1e-4)
        assert _number(rows[name].cells[2]) == pytest.approx(math.sqrt(fit.covariance[place][place]), rel=1e-3)


def test_ratios_stand_where_one_term_says_all_of_a_value() -> None:
    fitted, _ = shipped()
    fit, rows = fitted.fits["all"], _rows(fitted)
    assert fit.covariance is not None
    # age is a spline and smoking is also in a product with age: these are read together
    together = {"age", "age_spline_1", "age_spline_2", "smoker", "age_smoker"}
    assert {name for name, row in rows.items() if row.cells[3] == "–"} == together
    for place, name in enumerate(fit.names):
        if name not in together:
            b, se = fit.coefficients[place], math.sqrt(fit.covariance[place][place])
            expected = [math.exp(b), *np.exp(stats.norm.interval(0.95, b, se))]
            assert _ratio(rows[name].cells[3]) == pytest.approx(expected, rel=0.005)


def test_answers_of_one_question_have_ratios_each(tmp_path: Path) -> None:
    fitted, _ = fit_from(binary_study(tmp_path))
    rows = _rows(fitted)
    assert {name for name, row in rows.items() if row.cells[3] == "–"} == set()
    assert _table(_sections(fitted)[0]).columns[3].heading == "odds ratio (95\u202f% limits)"
    assert rows["site_quay"].cells[0] == NotedCell("site_quay", ("(site: is quay)",))


def test_pooled_terms_take_students_t(tmp_path: Path) -> None:
    fitted, _ = fit_from(binary_study(tmp_path, imputation={"sets": 2, "rounds": 2}))
    figures = fitted.figures[0]
    assert figures.imputed is not None
    few = tuple(PooledTerm(one.term, 5.0, 0.25) for one in figures.imputed.terms)
    fitted = replace(fitted, figures=(replace(figures, imputed=replace(figures.imputed, terms=few)),))
    fit, rows = fitted.fits["all"], _rows(fitted)
    assert fit.covariance is not None
    b, se = fit.coefficients[0], math.sqrt(fit.covariance[0][0])
    assert rows["age"].cells[4] == NotedCell("5.0", ("25.0\u202f%",))
    assert _ratio(rows["age"].cells[3]) == pytest.approx(np.exp([b, *stats.t.interval(0.95, 5.0, b, se)]), rel=0.005)


def test_baselines(tmp_path: Path) -> None:
    fitted, _ = fit_from(two_equations(tmp_path))
    for place, id in enumerate(("female", "male")):
        (row,) = _table(_sections(fitted, place)[1]).rows
        lp0, figures = fitted.fits[id].baselines[0].lp0, fitted.figures[place].horizons[0]
        assert _number(row.cells[1]) == pytest.approx(lp0, rel=1e-5)
        assert isinstance(row.cells[2], str)
        assert float(row.cells[2].removesuffix("\u202f%")) == pytest.approx(
            100 * (1 - math.exp(-math.exp(lp0))), abs=0.005
        )
        assert row.cells[3:] == tuple(f"{n:,}" for n in (figures.people, figures.events, figures.still_at_risk))


def test_discrimination() -> None:
    fitted, _ = shipped()
    figures = fitted.figures[0]
    assert figures.concordance is not None
    assert figures.minimum is not None
    (facts,) = _sections(fitted)[2].blocks
    assert isinstance(facts, FactList)
    said = {fact.name: fact.paragraphs for fact in facts.facts}
    assert said["C, in these people"][0] == "0.782, 95\u202f% limits 0.762 to 0.801"
    assert said["C, in these people"][1].startswith(f"of {1257974 + 349952:,} pairs")
    assert said["Log likelihood"] == (f"\u2212{-figures.loglik:,.2f}, without terms \u2212{-figures.loglik_null:,.2f}",)
    assert f"{figures.minimum.people:,} people" in said["Sample needed"][0]
    assert f"{522 / 12:.1f} events for each term" in said["Sample needed"][0]


def test_pairs_of_an_outcome_without_times(tmp_path: Path) -> None:
    fitted, _ = fit_from(binary_study(tmp_path))
    events, people = fitted.figures[0].events, fitted.figures[0].people
    (facts,) = _sections(fitted)[2].blocks
    assert isinstance(facts, FactList)
    said = facts.facts[0].paragraphs[1]
    assert said.startswith(f"of {events * (people - events):,} pairs of people of whom one had the event and the other")


def test_limits_of_c_on_its_logit() -> None:
    c = Concordance(0.8, 0.02, 8, 2, 0)
    low, high = stats.norm.interval(0.95, np.log(4.0), 0.02 / 0.16)
    expected = (1 / (1 + np.exp(-low)), 1 / (1 + np.exp(-high)))
    assert limits_of(c) == pytest.approx(expected, rel=1e-12)
    assert limits_of(Concordance(1.0, 0.0, 8, 0, 0)) == (1.0, 1.0)


def test_knots_are_rounded_to_be_read_and_stay_whole_in_the_file(tmp_path: Path) -> None:
    spline: Tree = {"id": "all", "competing_events": {"handled": "not_applicable"}, "horizons": [{"years": 1}]}
    spline["terms"] = [{"spline_of": "age", "knots": 4}]
    equations: Any = [spline]
    fitted, package = fit_from(binary_study(tmp_path, equations=equations))
    what = _rows(fitted)["age_spline_1"].cells[0]
    assert isinstance(what, NotedCell)
    (said,) = what.notes
    shown = said.removesuffix(")").partition("knots ")[2].split()
    (knots,) = set(re.findall(rb'"knots":\s*\[([^]]*)\]', package.data))
    written = [float(knot) for knot in knots.split(b",")]
    assert max(len(repr(knot)) for knot in written) > 12  # quantiles of random ages
    assert shown == [f"{knot:.6g}" for knot in written]
