"""Reference points and baselines that `package` refuses: what cannot be, and what does not settle a band."""

import json
import math
from collections.abc import Callable

import pytest

from tests.development.lung_case import Case, Table


def test_sums_without_a_reference(lung: Case) -> None:
    (lung.folder / "sums.json").write_text(
        json.dumps([SUMS | {"time": 180}, SUMS | {"time": 365, "H": 0.4}]), encoding="utf-8"
    )
    lung.fit["baseline"] = "sums.json"
    del lung.fit["reference"]
    said = lung.only_problem()
    assert said.startswith(
        'fit.all: "reference" is missing: the value of each term at which the baseline hazard holds.'
    )
    assert "basehaz()" in said


def test_a_reference_without_a_term(lung: Case) -> None:
    lung.fit["reference"] = {"age": 60, "fmale": 0, "ecog": 1}
    first, second = lung.problems()
    assert first == 'fit.all.reference: "female" has no value there.'
    assert 'there is no estimated term "fmale". Did you mean "female"?' in second


def test_a_reference_that_no_row_is_at(lung: Case) -> None:
    lung.fit["reference"] = {"age": 50, "female": 0, "ecog": 1}
    assert "no row is at the reference that the description states" in lung.only_problem()


SUMS = {"time": 180, "H": 0.3, "A": 0.0015, "q": {"age": 0.4, "female": 0.1, "ecog": 0.3}}


@pytest.mark.parametrize(
    ("change", "words"),
    [
        ({"H": 0}, "the cumulative hazard H is 0; it is more than 0"),
        ({"H": -0.3}, "the cumulative hazard H is −0.3"),
        ({"A": 0}, "the sum A is 0; a sum of squares is more than 0"),
        ({"A": -0.1}, "the sum A is −0.1"),
        ({"A": 0.3}, "more than the square of H (0.09)"),
        ({"q": {"age": 0.4, "female": 0.1}}, 'entry 1 and the first do not have the same names: "q.ecog"'),
        ({"time": 181}, "there is no row at time 180; the table has 181 and 365"),
        ({"B": 1}, 'do not have the same names: "B"'),
    ],
)
def test_sums_that_cannot_be(change: dict[str, object], words: str, lung: Case) -> None:
    later = {**SUMS, "time": 365, "H": 0.9}
    rows = [later, SUMS | change] if "time" not in change else [SUMS | change, later]
    (lung.folder / "sums.json").write_text(json.dumps(rows), encoding="utf-8")
    lung.fit["baseline"] = "sums.json"
    said = lung.problems()[0]
    assert said.startswith("fit.all.baseline (sums.json): ")
    assert words.replace("entry 1", "entry 2") in said


def test_hazards_that_fall(lung: Case) -> None:
    rows = [SUMS, SUMS | {"time": 365, "H": 0.2}]
    (lung.folder / "sums.json").write_text(json.dumps(rows), encoding="utf-8")
    lung.fit["baseline"] = "sums.json"
    assert any("the cumulative hazard must rise with time" in said for said in lung.problems())


def test_one_row_at_the_reference_is_not_enough_for_a_band(lung: Case) -> None:
    """Neither with columns for the terms nor without: q cannot be known."""
    lung.rewrite("lung_baseline.csv", lambda rows: rows[:3])
    said = lung.only_problem()
    assert "at time 180 the people of the 1 row do not settle the band" in said
    assert "one at the reference, one more for every term with that term raised by one" in said
    lung.rewrite("lung_baseline.csv", lambda rows: [row[:3] for row in rows])
    assert 'the columns "age", "female" and "ecog" are missing' in lung.only_problem()


def test_one_row_is_enough_without_a_band(lung: Case) -> None:
    banded = lung.package().model.content.equations[0]
    lung.rewrite("lung_baseline.csv", lambda rows: [row[:2] for row in rows[:3]])
    del lung.fit["covariance"], lung.tree["patients"][0]["lower"], lung.tree["patients"][0]["upper"]
    lung.equation["uncertainty"] = {"basis": "none", "because": "One row was printed."}
    bare = lung.package().model.content.equations[0]
    for one, other in zip(bare.horizons, banded.horizons, strict=True):
        assert one.log_cumulative_hazard == pytest.approx(other.log_cumulative_hazard, abs=1e-12)


def each_row(column: int, change: Callable[[list[float], int], float]) -> Callable[[Table], None]:
    def apply(rows: Table) -> None:
        for number, row in enumerate(rows[1:]):
            row[column] = repr(change([float(cell) for cell in row], number))

    return apply


def test_standard_errors_of_the_cumulative_hazard_under_the_wrong_name(lung: Case) -> None:
    """The trap: survfit's std.err is that of the cumulative hazard, the summary's that of the survival."""
    lung.rewrite("lung_baseline.csv", each_row(2, lambda row, _: row[2] / row[1]))
    said = lung.only_problem()
    assert "the standard errors do not agree with each other and the covariance" in said
    assert '"std.chaz"' in said


def test_the_covariance_of_another_fit(lung: Case) -> None:
    """As where a robust one stands for the model's: one person more than needed brings it out."""

    def scale(rows: Table) -> None:
        for row in rows[1:]:
            row[1:] = [repr(1.1 * float(cell)) for cell in row[1:]]

    lung.rewrite("lung_vcov.csv", scale)
    assert "Is the covariance the one that survfit used" in lung.only_problem()


def test_people_just_enough_are_taken_with_a_remark(lung: Case) -> None:
    lung.rewrite("lung_baseline.csv", lambda rows: rows[:9])
    assert "nothing checked its standard errors" in " ".join(lung.package().remarks)


def test_values_of_the_terms_that_are_not_those_predicted_for(lung: Case) -> None:
    del lung.fit["reference"]
    lung.rewrite("lung_baseline.csv", each_row(4, lambda row, _: row[4] + 1 if row[4] else 2))
    assert "the rows do not agree with the coefficients" in lung.only_problem()


def test_survival_in_percent_and_beyond(lung: Case) -> None:
    lung.rewrite("lung_baseline.csv", each_row(1, lambda row, _: row[1] * 100))
    assert "it lies between 0 and 1. Is it a percentage?" in lung.only_problem()


def test_a_standard_error_below_nought(lung: Case) -> None:
    lung.rewrite("lung_baseline.csv", each_row(2, lambda row, number: -row[2] if number == 3 else row[2]))
    assert "a standard error is −0.04" in lung.only_problem()


def test_three_digits_of_standard_errors(lung: Case) -> None:
    lung.rewrite("lung_baseline.csv", each_row(2, lambda row, _: round(row[2], 4)))
    assert "printed to 3 significant digits" in lung.only_problem()


def as_limits(table: Table) -> Table:
    """R's log-log limits in place of the standard errors."""
    rows = [["time", "surv", "lower", "upper", *table[0][3:]]]
    for row in table[1:]:
        s, se = float(row[1]), float(row[2])
        half = 1.959963984540054 * se / (s * -math.log(s))
        ends = [repr(math.exp(-math.exp(math.log(-math.log(s)) + side * half))) for side in (1, -1)]
        rows.append([*row[:2], *ends, *row[3:]])
    return rows


def test_limits_in_place_of_standard_errors(lung: Case) -> None:
    before = lung.package().model.content.equations[0].uncertainty
    lung.rewrite("lung_baseline.csv", as_limits)
    assert "say how the limits were made" in lung.only_problem()
    lung.fit["interval"] = {"scale": "log", "level": 0.95}
    assert "are they log-log limits?" in lung.only_problem()
    lung.fit["interval"] = {"scale": "log-log", "level": 0.95}
    after = lung.package().model.content.equations[0].uncertainty
    for one, other in zip(before.at_centre, after.at_centre, strict=True):  # type: ignore[union-attr]
        assert one.variance == pytest.approx(other.variance, rel=1e-8)
        assert one.centre == pytest.approx(other.centre, rel=1e-8)


def test_an_interval_that_does_not_contain_its_estimate(lung: Case) -> None:
    lung.fit["interval"] = {"scale": "log-log", "level": 0.95}
    lung.rewrite("lung_baseline.csv", as_limits)
    lung.rewrite("lung_baseline.csv", each_row(3, lambda row, number: row[1] - 0.01 if number == 0 else row[3]))
    assert "does not contain its estimate" in lung.only_problem()


def test_a_time_that_no_horizon_is_at(lung: Case) -> None:
    lung.equation["horizons"][1] = {"years": 1}
    lung.tree["patients"][0] |= {"years": 1}
    del lung.tree["patients"][0]["time"], lung.tree["patients"][0]["unit"]
    said = lung.only_problem()
    assert "there is no row at time 1; the table has 180 and 365" in said
    lung.fit["times"] = [180, 365]
    assert lung.package().model.spans[1].words == "1 year"
    lung.fit["times"] = [180, 730]
    assert "730 is no way to say 1 year in years, months, weeks or days" in lung.only_problem()
    lung.fit["times"] = [180]
    assert "there are 1 times and 2 horizons" in lung.only_problem()
    lung.fit["times"] = [365, 180]
    assert lung.problems()


def test_what_basehaz_gives(lung: Case) -> None:
    lung.rewrite("lung_baseline.csv", lambda rows: [["", "hazard", "time"], ["1", "0.3", "180"], ["2", "0.9", "365"]])
    assert "this is what basehaz() gives" in lung.only_problem()


def test_limits_beside_standard_errors_must_agree(lung: Case) -> None:
    lung.rewrite(
        "lung_baseline.csv", lambda rows: [[*row, *more[2:4]] for row, more in zip(rows, as_limits(rows), strict=True)]
    )
    lung.package()
    lung.fit["interval"] = {"scale": "log-log", "level": 0.95}
    lung.package()
    lung.fit["interval"] = {"scale": "log-log", "level": 0.9}
    assert "the limits and the standard errors beside them are not of one band" in lung.only_problem()


def test_survival_beside_a_cumulative_hazard_must_agree(lung: Case) -> None:
    def both(rows: Table) -> Table:
        body = [
            [row[0], row[1], repr(-math.log(float(row[1]))), repr(float(row[2]) / float(row[1])), *row[3:]]
            for row in rows[1:]
        ]
        return [["time", "surv", "cumhaz", "std.chaz", *rows[0][3:]], *body]

    lung.rewrite("lung_baseline.csv", both)
    lung.package()
    lung.rewrite("lung_baseline.csv", each_row(1, lambda row, _: row[1] * 0.999))
    assert '"surv" is not exp(-cumhaz)' in lung.only_problem()


def test_parts_that_a_fit_has_no_use_for(lung: Case, months: Case) -> None:
    lung.fit["interval"] = {"scale": "log-log", "level": 0.95}
    assert lung.only_problem().startswith("fit.all.interval: the baseline's table has no limits")
    months.fit.update(times=[90], baseline="lung_baseline.csv")
    assert all("a logistic fit has its baseline in the intercept" in said for said in months.problems())
