"""Fits of many forms made by R here and now, packaged from the tables R writes, against what R predicts for others."""

from pathlib import Path
from typing import Any

import pytest

from clinicalc.assessment.assess import assess
from clinicalc.assessment.entry import entry_from_texts
from clinicalc.assessment.model import Model
from clinicalc.coefficients.schema import RobustBand
from clinicalc.coefficients.spans import Span
from clinicalc.development.description import read_description
from clinicalc.development.package import package_model
from tests.development.describing import bare_number, linear_terms, plain_model, write_description
from tests.development.r_here import needs_r, run_r
from tests.reference.test_against_r import limits

CLOSE = 1e-9

LUNG = """
library(survival)
d <- with(survival::cancer, data.frame(
  time, dead = status - 1, age, female = sex - 1, ecog = ph.ecog, karno = ph.karno, inst))
d <- d[complete.cases(d) & d$ecog < 3, ]
"""
WRITE = """
write.csv(coef(fit), "coef.csv")
write.csv(vcov(fit), "vcov.csv")
table_of <- function(shown, columns) {
  data.frame(time = rep(shown$time, times = nrow(columns)),
    cumhaz = as.vector(shown$cumhaz), std.chaz = as.vector(shown$std.chaz),
    columns[rep(seq_len(nrow(columns)), each = length(shown$time)), ], check.names = FALSE)
}
"""
OTHERS = """
for (time in times) for (row in seq_len(nrow(others))) {
  s <- summary(survfit(fit, newdata = others[row, ], conf.type = "log-log"), times = time)
  say(c(1 - s$surv, 1 - s$upper, 1 - s$lower))
}
"""
TABLES = {"coefficients": "coef.csv", "covariance": "vcov.csv"}


def packaged(folder: Path, tree: dict[str, Any]) -> Model:
    return package_model(read_description(write_description(folder, tree))).model


def figures(model: Model, people: list[dict[str, str]], spans: list[Span]) -> list[float]:
    found = []
    for span in spans:
        for person in people:
            estimate = assess(model, entry_from_texts(person), span=span).estimate
            assert estimate is not None
            found += [estimate.probability, *limits(estimate)]
    return found


def described(equations: list[dict[str, Any]], names: list[str], fits: dict[str, Any], person: Any) -> dict[str, Any]:
    tree = plain_model("R 4.2.2, survival 3.5-3.", [bare_number(name) for name in names], equations)
    return tree | {"fit": fits, "patients": [{"values": person}]}


@needs_r
def test_a_factor_products_powers_and_clusters(tmp_path: Path) -> None:
    """A robust Cox fit whose terms cannot be raised one by one: people by hand, columns by model.matrix."""
    said = run_r(
        tmp_path,
        LUNG
        + """
formula <- Surv(time, dead) ~ age + I(age^2) + factor(ecog) * female + log(karno)
fit <- coxph(formula, data = d, cluster = inst)
"""
        + WRITE
        + """
people <- d[seq(1, nrow(d), by = 9), ]
shown <- summary(survfit(fit, newdata = people), times = c(200, 400))
write.csv(table_of(shown, model.matrix(fit, data = people)), "baseline.csv", row.names = FALSE)
""",
        """
others <- data.frame(age = c(70, 41), female = c(1, 0), ecog = c(2, 1), karno = c(60, 90), inst = 1)
times <- c(200, 400)
"""
        + OTHERS,
    )
    female = {"of": "female"}
    answers = [{"id": f"ecog_{n}", "product": [{"of": "ecog", "steps": [{"is": [f"grade_{n}"]}]}]} for n in (1, 2)]
    products = [
        {"id": f"ecog_{n}_female", "product": [{"of": "ecog", "steps": [{"is": [f"grade_{n}"]}]}, female]}
        for n in (1, 2)
    ]
    equation = {
        "id": "all",
        "competing_events": {"handled": "not_applicable"},
        "horizons": [{"time": 200, "unit": "d"}, {"time": 400, "unit": "d"}],
        "terms": [
            {"id": "log_karno", "product": [{"of": "karno", "steps": [{"log": "natural"}]}]},
            {"id": "age", "product": [{"of": "age"}]},
            {"id": "age_squared", "product": [{"of": "age", "steps": [{"power": 2}]}]},
            *answers,
            {"id": "female", "product": [female]},
            *products,
        ],
    }
    names = {"I(age^2)": "age_squared", "log(karno)": "log_karno"}
    names |= {f"factor(ecog){n}": f"ecog_{n}" for n in (1, 2)} | {
        f"factor(ecog){n}:female": f"ecog_{n}_female" for n in (1, 2)
    }
    fit = {"kind": "cox", **TABLES, "covariance_kind": "robust", "baseline": "baseline.csv", "names": names}
    tree = described([equation], ["karno", "age", "female"], {"all": fit}, None)
    for predictor in tree["predictors"]:
        predictor["possible"] = [0, 120] if predictor["id"] != "karno" else [10, 100]
    choices = [{"id": f"grade_{n}", "label": f"Grade {n}"} for n in (0, 1, 2)]
    tree["predictors"].append({"id": "ecog", "label": "Grade", "kind": "choice", "group": "Values", "choices": choices})
    people = [
        {"age": "70", "female": "1", "ecog": "grade_2", "karno": "60"},
        {"age": "41", "female": "0", "ecog": "grade_1", "karno": "90"},
    ]
    tree["patients"] = [{"values": people[0]}]
    model = packaged(tmp_path, tree)
    assert isinstance(model.content.equations[0].uncertainty, RobustBand)
    assert figures(model, people, [Span(200.0, "d"), Span(400.0, "d")]) == pytest.approx(said, rel=0, abs=CLOSE)


@needs_r
def test_strata_are_one_equation_each(tmp_path: Path) -> None:
    said = run_r(
        tmp_path,
        LUNG
        + "fit <- coxph(Surv(time, dead) ~ age + ecog + strata(female), data = d)\n"
        + WRITE
        + """
for (female in 0:1) {
  people <- data.frame(age = c(60, 61, 60, 61), ecog = c(1, 1, 2, 2), female = female)
  shown <- summary(survfit(fit, newdata = people), times = 365)
  shown <- list(time = 365, cumhaz = shown$cumhaz, std.chaz = shown$std.chaz)
  write.csv(table_of(shown, people[c("age", "ecog")]), paste0("stratum_", female, ".csv"), row.names = FALSE)
}
""",
        """
others <- data.frame(age = c(45, 80), ecog = c(0, 2), female = c(1, 0))
times <- 365
"""
        + OTHERS,
    )
    equations, fits = [], {}
    for number, answer in enumerate(("no", "yes")):
        id = f"female_{answer}"
        equations.append(
            {
                "id": id,
                "applies_when": {"female": [answer]},
                "competing_events": {"handled": "not_applicable"},
                "horizons": [{"years": 1}],
                "terms": linear_terms(["age", "ecog"]),
            }
        )
        fits[id] = {
            "kind": "cox",
            **TABLES,
            "covariance_kind": "model",
            "baseline": f"stratum_{number}.csv",
            "times": [365],
        }
    tree = described(equations, ["age", "ecog"], fits, {"age": 60, "ecog": 1, "female": True})
    tree["predictors"].append({"id": "female", "label": "Female", "kind": "yes_no", "group": "Values"})
    tree["patients"].append({"values": {"age": 60, "ecog": 1, "female": False}})
    people = [{"age": "45", "ecog": "0", "female": "yes"}, {"age": "80", "ecog": "2", "female": "no"}]
    assert figures(packaged(tmp_path, tree), people, [Span(1.0)]) == pytest.approx(said, rel=0, abs=CLOSE)


@needs_r
def test_a_fine_gray_fit_with_clusters(tmp_path: Path) -> None:
    said = run_r(
        tmp_path,
        """
library(survival)
d <- with(survival::mgus2, data.frame(
  id, age, male = as.numeric(sex == "M"), hgb, mspike,
  etime = ifelse(pstat == 1, ptime, futime),
  event = factor(ifelse(pstat == 1, 1, 2 * death), 0:2, c("none", "pcm", "death"))))
d <- d[complete.cases(d), ]
weighted <- finegray(Surv(etime, event) ~ ., data = d, etype = "pcm", id = id)
fit <- coxph(Surv(fgstart, fgstop, fgstatus) ~ age + male + hgb + mspike, data = weighted, weights = fgwt, cluster = id)
"""
        + WRITE
        + """
reference <- data.frame(age = 70, male = 0, hgb = 13, mspike = 1.2)
people <- reference[rep(1, 6), ] + rbind(0, diag(4), 1)
shown <- summary(survfit(fit, newdata = people), times = c(60, 240))
write.csv(table_of(shown, people), "baseline.csv", row.names = FALSE)
""",
        """
others <- data.frame(age = c(40, 90), male = c(1, 1), hgb = c(15, 9), mspike = c(0.3, 2.5))
times <- c(60, 240)
"""
        + OTHERS,
    )
    names = ["age", "male", "hgb", "mspike"]
    equation = {
        "id": "all",
        "competing_events": {"handled": "subdistribution", "which": "death"},
        "horizons": [{"years": 5}, {"years": 20}],
        "terms": linear_terms(names),
    }
    fit = {"kind": "fine-gray", **TABLES, "covariance_kind": "robust", "baseline": "baseline.csv", "times": [60, 240]}
    people = [
        dict(zip(names, ("40", "1", "15", "0.3"), strict=True)),
        dict(zip(names, ("90", "1", "9", "2.5"), strict=True)),
    ]
    model = packaged(tmp_path, described([equation], names, {"all": fit}, people[0]))
    assert figures(model, people, [Span(5.0), Span(20.0)]) == pytest.approx(said, rel=0, abs=CLOSE)


@needs_r
def test_a_logistic_fit_on_centred_columns_with_a_product(tmp_path: Path) -> None:
    """The terms of the description are not centred but for the product: `reference` says where the intercept holds."""
    said = run_r(
        tmp_path,
        LUNG
        + """
d$soon <- as.numeric(d$time < 90 & d$dead == 1)
d$age60 <- d$age - 60
d$karno80 <- d$karno - 80
fit <- glm(soon ~ age60 + karno80 + female + age60:karno80, family = binomial, data = d, epsilon = 1e-14)
"""
        + WRITE,
        """
others <- data.frame(age60 = c(10, -21), karno80 = c(-20, 10), female = c(1, 0))
link <- predict(fit, others, se.fit = TRUE)
for (row in 1:2) say(plogis(link$fit[row] + c(0, -1, 1) * qnorm(0.975) * link$se.fit[row]))
""",
    )
    centred = [{"of": "age", "steps": [{"subtract": 60}]}, {"of": "karno", "steps": [{"subtract": 80}]}]
    equation = {
        "id": "all",
        "competing_events": {"handled": "not_applicable"},
        "horizons": [{"time": 90, "unit": "d"}],
        "terms": [*linear_terms(["female", "karno", "age"]), {"id": "age_karno", "product": centred}],
    }
    fit = {
        "kind": "logistic",
        **TABLES,
        "covariance_kind": "model",
        "names": {"age60": "age", "karno80": "karno", "age60:karno80": "age_karno"},
        "reference": {"age": 60, "karno": 80, "female": 0, "age_karno": 0},
    }
    people = [{"age": "70", "karno": "60", "female": "1"}, {"age": "39", "karno": "90", "female": "0"}]
    model = packaged(tmp_path, described([equation], ["age", "karno", "female"], {"all": fit}, people[0]))
    assert figures(model, people, [Span(90.0, "d")]) == pytest.approx(said, rel=0, abs=CLOSE)
