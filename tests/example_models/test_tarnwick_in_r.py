"""The shipped Cox example against R: coxph and survfit of the package survival on the same file of people.

Where R is on the machine it is run; what it said is kept for machines without.
"""

from pathlib import Path

import numpy as np
import pytest

from clinicalc.assessment.assess import assess
from clinicalc.assessment.entry import entry_from_texts
from clinicalc.assessment.proof import load_model
from tests.development.r_here import needs_r, run_r
from tests.reference.test_against_r import limits

FOLDER = Path(__file__).parents[2] / "example_models"
SHIPPED = FOLDER / "tarnwick-cvd-10y-cox.json"

PEOPLE = (
    {"age": "61", "sex": "female", "systolic_bp": "142", "bp_treated": "no", "total_cholesterol": "5.2"}
    | {"hdl_cholesterol": "1.3", "egfr": "78", "smoker": "yes", "diabetes": "no"},
    {"age": "34", "sex": "male", "systolic_bp": "118", "bp_treated": "no", "total_cholesterol": "4.6"}
    | {"hdl_cholesterol": "1.2", "egfr": "99", "smoker": "no", "diabetes": "no"},
    {"age": "79", "sex": "male", "systolic_bp": "165", "bp_treated": "yes", "total_cholesterol": "6.1"}
    | {"hdl_cholesterol": "1.0", "egfr": "52", "smoker": "no", "diabetes": "yes"},
)
FIT = """
library(survival)
d <- read.csv("tarnwick-cohort.csv", na.strings = c("", "unknown"))
d <- d[complete.cases(d), ]
d$days <- as.numeric(as.Date(d$exit_date) - as.Date(d$entry_date))
knots <- quantile(d$age, c(.05, .35, .65, .95))
basis <- function(x, j) {
  up <- function(k) pmax(x - k, 0)^3
  k <- knots
  (up(k[j]) - up(k[3]) * (k[4] - k[j]) / (k[4] - k[3]) + up(k[4]) * (k[3] - k[j]) / (k[4] - k[3])) / (k[4] - k[1])^2
}
prepare <- function(p) {
  p$s1 <- basis(p$age, 1); p$s2 <- basis(p$age, 2); p$male <- as.numeric(p$sex == "M")
  p$smokes <- as.numeric(p$smoker == "yes"); p$product <- (p$age - 55) / 10 * p$smokes
  p
}
fit <- coxph(Surv(days, status == 1) ~ age + s1 + s2 + male + sbp + bp_tablets + chol + hdl + smokes + diabetes + egfr +
  product, data = prepare(d), ties = "efron", control = coxph.control(eps = 1e-12, iter.max = 50))
people <- prepare(data.frame(age = c(61, 34, 79), sex = c("F", "M", "M"), sbp = c(142, 118, 165),
  bp_tablets = c(0, 0, 1), chol = c(5.2, 4.6, 6.1), hdl = c(1.3, 1.2, 1), smoker = c("yes", "no", "no"),
  diabetes = c(0, 0, 1), egfr = c(78, 99, 52)))
"""
ASKED = """
for (row in 1:3) {
  s <- summary(survfit(fit, newdata = people[row, ], conf.type = "log-log"), times = 3652.5)
  say(c(1 - s$surv, 1 - s$upper, 1 - s$lower))
}
say(coef(fit)[c("male", "sbp", "egfr")])
"""
SAID_BY_R = (
    (0.125617942719, 0.098916648061, 0.158866855546),
    (0.009758401191, 0.004514260978, 0.021029880884),
    (0.920370095648, 0.823863714019, 0.974957074816),
)
"""What FIT and ASKED said with R 4.2.2 and survival 3.5-3: probability, lower and upper limit of each of PEOPLE."""


def figures() -> list[float]:
    """Probability, lower and upper limit of each of the people, by the shipped file."""
    model, found = load_model(SHIPPED), list[float]()
    for person in PEOPLE:
        estimate = assess(model, entry_from_texts(person | {"prior_cvd": "no"})).estimate
        assert estimate is not None
        found += [estimate.probability, *limits(estimate)]
    return found


@needs_r
def test_number_and_band_are_those_of_survfit(tmp_path: Path) -> None:
    (tmp_path / "tarnwick-cohort.csv").write_bytes((FOLDER / "tarnwick-cohort.csv").read_bytes())
    said = run_r(tmp_path, FIT, ASKED)
    assert len(said) == 12
    assert figures() == pytest.approx(said[:9], rel=0, abs=1e-9)
    terms = {term.id: term.coefficient for term in load_model(SHIPPED).content.equations[0].terms}
    # pressure and eGFR have 10 units to a step in the file
    file = np.array([terms["male"], terms["systolic_bp"] / 10.0, terms["egfr"] / 10.0])
    assert file == pytest.approx(said[9:], rel=1e-9)


def test_number_and_band_are_those_that_r_said() -> None:
    assert figures() == pytest.approx([figure for person in SAID_BY_R for figure in person], rel=0, abs=1e-9)
