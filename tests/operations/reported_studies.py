"""Studies whose reports are read in tests: the shipped one of 5,000 invented people, and small random ones."""

from functools import cache
from pathlib import Path

import numpy as np

from clinicalc.development.estimating import FittedStudy
from clinicalc.development.package import Package
from clinicalc.operations.course import Course
from clinicalc.operations.study import check_data, fit_study, open_study, package_study
from tests.development.describing import Tree
from tests.development.studying import BINARY, plain_study, timed, write_people, write_study

EXAMPLES = Path(__file__).parents[2] / "example_models"
LONG = "A very long label of a question that asks about smoking, chewing or anything of the kind, now or last year"


def fit_from(path: Path) -> tuple[FittedStudy, Package]:
    """The fits of a study, and the file made of them."""
    study, course = open_study(path), Course()
    fitted = fit_study(study, check_data(study, course), course)
    return fitted, package_study(fitted, course)


@cache
def shipped() -> tuple[FittedStudy, Package]:
    """The Cox study that is shipped."""
    return fit_from(EXAMPLES / "tarnwick-cvd-10y-cox.toml")


def binary_study(folder: Path, **more: Tree) -> Path:
    """A logistic study of 600 people of whom every twentieth lacks an age, with a choice and a long label."""
    rng = np.random.default_rng(20261201)
    age, smoker, site = rng.normal(60, 9, 600), rng.integers(0, 2, 600), rng.integers(0, 3, 600)
    risk = 1 / (1 + np.exp(1.5 - 0.05 * (age - 60) - 0.8 * smoker - 0.3 * site))
    columns = {
        "age": np.where(np.arange(600) % 20 == 0, np.nan, age),
        "smoker": smoker,
        "site": np.array(["north", "quay", "mill"])[site],
        "y": (rng.random(600) < risk).astype(int),
    }
    write_people(folder / "people.csv", columns)
    sites = [
        {"id": "north", "label": "Northgate"},
        {"id": "quay", "label": "Old Quay"},
        {"id": "mill", "label": "Mill"},
    ]
    tree = plain_study(
        [
            "age",
            {"id": "smoker", "label": LONG, "kind": "yes_no", "group": "g"},
            {"id": "site", "label": "Site", "kind": "choice", "group": "g", "choices": sites},
        ],
        BINARY,
        {"kind": "logistic"},
        terms=[
            {"id": "age", "product": [{"of": "age"}]},
            {"id": "smoker", "product": [{"of": "smoker"}]},
            {"categories_of": "site", "reference": "north"},
        ],
    )
    tree["cohort"]["columns"] = {"smoker": {"levels": {"yes": "1", "no": "0"}}}
    return write_study(folder, tree | more)


def two_equations(folder: Path) -> Path:
    """A Cox study with one equation for women and one for men; of ten people the sex is not known."""
    rng = np.random.default_rng(7)
    x, man = rng.normal(50, 10, 500), rng.integers(0, 2, 500)
    event = rng.exponential(900 / np.exp(0.04 * (x - 50) + 0.3 * man))
    sex = np.where(np.arange(500) < 10, "", np.array(["female", "male"])[man])
    ended = np.minimum(event, 730.0)
    write_people(
        folder / "people.csv",
        {"x": x, "sex": sex, "time": np.round(np.maximum(ended, 1.0), 1), "status": (event <= 730.0).astype(int)},
    )
    sexes = [{"id": "female", "label": "Female"}, {"id": "male", "label": "Male"}]
    tree = plain_study(
        ["x", {"id": "sex", "label": "Sex", "kind": "choice", "group": "g", "choices": sexes}],
        timed(),
        {"kind": "cox"},
        terms=[{"id": "x", "product": [{"of": "x"}]}],
    )
    (equation,) = tree["equations"]
    tree["equations"] = [equation | {"id": one, "applies_when": {"sex": [one]}} for one in ("female", "male")]
    tree["estimate"] = {"female": {"kind": "cox"}, "male": {"kind": "cox"}}
    return write_study(folder, tree)
