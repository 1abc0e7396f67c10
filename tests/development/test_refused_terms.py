"""Names, kinds and statements that `package` refuses, each at its place in the description."""

import pytest

from tests.development.lung_case import Case


def test_a_term_and_a_coefficient_without_partners(lung: Case) -> None:
    lung.equation["terms"][2]["id"] = "performance"
    first, second = lung.problems()
    assert '"ecog" goes with no term of the equation.' in first
    assert 'names = {"ecog" = "..."}' in first
    assert 'the term "performance" has no coefficient in the fit' in second
    lung.fit["names"] = {"ecog": "performance"}
    lung.fit["reference"] = {"age": 60, "female": 0, "performance": 1}
    assert lung.package().model.content.equations[0].terms[2].id == "performance"


def test_two_names_for_one_term(lung: Case) -> None:
    lung.fit["names"] = {"ecog": "age"}
    assert any('"age" and "ecog" are both said to be the term "age"' in said for said in lung.problems())


def test_a_name_that_the_fit_does_not_have(lung: Case) -> None:
    lung.fit["names"] = {"ecgo": "ecog"}
    assert 'the fit has no coefficient "ecgo". Did you mean "ecog"?' in lung.only_problem()


def test_a_coefficient_that_stands_in_both_places(lung: Case) -> None:
    lung.equation["terms"][0]["coefficient"] = 0.011
    assert lung.only_problem().startswith(
        'equations "all", terms "age", coefficient: the coefficient comes from the fit'
    )


def test_a_link_and_a_handling_that_the_kind_contradicts(lung: Case) -> None:
    lung.equation["link"] = "logit"
    lung.equation["competing_events"]["handled"] = "subdistribution"
    first, second = lung.problems()
    assert first.startswith('equations "all", link: a cox fit has the link "cloglog"')
    assert "a cox fit is not of a subdistribution" in second


def test_a_fit_for_no_equation_and_an_equation_without_a_fit(lung: Case) -> None:
    lung.tree["fit"] = {"everybody": lung.fit}
    first, second = lung.problems()[:2]
    assert first == 'fit.everybody: there is no equation "everybody". Known here: "all".'
    assert 'there is no table [fit.all], and "age", "female" and "ecog" have no coefficient' in second


def test_a_cox_fit_with_an_intercept(lung: Case) -> None:
    lung.rewrite("lung_coef.csv", lambda rows: [*rows, ["(Intercept)", "1"]])
    assert any('a cox fit has no intercept; "(Intercept)" is one' in said for said in lung.problems())


def test_a_logistic_fit_without_an_intercept(months: Case) -> None:
    months.rewrite("three_months_coef.csv", lambda rows: [rows[0], *rows[2:]])
    assert any("there is no intercept" in said for said in months.problems())


def test_a_logistic_fit_without_a_reference_says_what_it_takes_for_granted(months: Case) -> None:
    del months.fit["reference"]
    assert "The intercept is taken to hold with every term, as computed, at 0." in " ".join(months.package().remarks)


def test_a_fine_gray_fit_with_a_model_covariance(lung: Case) -> None:
    lung.fit["kind"] = "fine-gray"
    lung.equation["competing_events"]["handled"] = "subdistribution"
    said = lung.only_problem()
    assert said.startswith("fit.all.covariance_kind: ")
    assert "must be robust" in said


def test_a_covariance_of_no_stated_kind(lung: Case) -> None:
    del lung.fit["covariance_kind"]
    assert '"covariance_kind" is missing: "model" (from the likelihood) or "robust"' in lung.only_problem()


def test_no_covariance_needs_a_reason(lung: Case) -> None:
    del lung.fit["covariance"]
    assert 'uncertainty = {basis = "none", because = "..."}' in lung.only_problem()
    lung.equation["uncertainty"] = {"basis": "none", "because": "None was kept."}
    del lung.tree["patients"][0]["lower"], lung.tree["patients"][0]["upper"]
    assert lung.package().model.content.equations[0].uncertainty.because == "None was kept."  # type: ignore[union-attr]
    lung.fit["covariance"] = "lung_vcov.csv"
    assert "here is a covariance. Keep one." in lung.only_problem()


def test_what_cannot_be_is_said_at_its_place_in_the_description(lung: Case) -> None:
    lung.tree["predictors"][0]["within_person"] = {"cv": 4, "source": "Invented."}
    lung.tree["decision_points"] = [{"probability": 1.2, "label": "Think", "source": "Invented."}]
    lung.tree["population"] = {
        "source": "Invented.",
        "numbers": [{"id": "age", "mean": 62, "sd": -9}, {"id": "ecog", "mean": 1, "sd": 0.7}],
        "correlations": [[1, 0.2], [0.2, 1]],
        "yes_no": [],
    }
    lung.rewrite("lung_vcov.csv", lambda rows: rows[:2] + rows[3:])
    found = {said.partition(": ")[0]: said.partition(": ")[2] for said in lung.problems()}
    assert set(found) == {
        "fit.all.covariance (lung_vcov.csv)",
        'predictors "age", within_person, cv',
        "decision_points 1, probability",
        'population, numbers "age", sd',
    }
    assert "0.04" in found['predictors "age", within_person, cv']
    assert "0.012" in found["decision_points 1, probability"]


def test_correlations_that_cannot_be(lung: Case) -> None:
    lung.tree["population"] = {
        "source": "Invented.",
        "numbers": [{"id": "age", "mean": 62, "sd": 9}, {"id": "ecog", "mean": 1, "sd": 0.7}],
        "correlations": [[1, 1.5], [1.5, 1]],
        "yes_no": [],
    }
    assert lung.only_problem().startswith("population, correlations")


def test_a_printed_interval_of_a_coefficient_that_the_fit_does_not_have(lung: Case) -> None:
    lung.equation["terms"][0]["interval"] = {"scale": "ratio", "level": 0.95, "lower": 1.2, "upper": 1.4}
    said = lung.only_problem()
    assert said.startswith('equations "all", terms "age", interval: the coefficient 0.0110')
    assert "lies outside its own interval" in said


@pytest.mark.parametrize("text", ["nan", "inf", "-inf"])
def test_a_number_that_is_none(text: str, lung: Case) -> None:
    lung.fit["reference"]["age"] = float(text)
    path = lung.folder / "d.toml"
    assert any(said.startswith("fit.all.reference.age") for said in lung.problems()), path


@pytest.mark.parametrize("spoilt", [["age"], [{"product": [{"of": "age"}]}], "age", []])
def test_terms_that_are_no_terms_are_never_dropped(spoilt: object, lung: Case) -> None:
    kept = lung.equation["terms"]
    lung.equation["terms"] = [*spoilt, *kept] if isinstance(spoilt, list) and spoilt else spoilt
    assert any(said.startswith('equations "all"') for said in lung.problems())


def test_unknown_fields_and_tables(lung: Case) -> None:
    lung.fit["covariances"] = lung.fit.pop("covariance")
    lung.tree["fits"] = {}
    said = lung.problems()
    assert any('the field "covariances" is not known here. Did you mean "covariance"?' in each for each in said)
    assert any('the field "fits" is not known here.' in each for each in said)
