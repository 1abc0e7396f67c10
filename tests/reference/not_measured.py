"""Two fits with the people behind them described, so that a value of theirs can stand open."""

from functools import cache

import msgspec
import numpy as np

from clinicalc.assessment.model import Model
from clinicalc.coefficients.schema import Population, PopulationAnswer, PopulationNumber, YesNoPredictor
from tests.reference.figures import BinaryFit, Figures, Matrix, Pair, Row, load
from tests.reference.packaging import matrix, package_binary, through_file, typed_number


class OpenNumbers(msgspec.Struct, frozen=True, forbid_unknown_fields=True):
    """One profile with numbers left out (None), and what follows for them and for the risk."""

    profile: dict[str, float | None]
    missing: tuple[str, ...]
    conditional_mean: Row
    conditional_cov: Matrix
    lp_mean: float
    lp_sd_missing: float
    lp_se_coefficients_at_mean: float
    marginal_risk: float
    band95_missing_only: Pair
    band95_missing_and_coefficients: Pair


class PimaOpen(Figures, frozen=True, forbid_unknown_fields=True):
    """Numbers left out of the fit in pima_logit."""

    predictors: tuple[str, ...]
    population_mean: Row
    population_cov: Matrix
    cases: tuple[OpenNumbers, ...]


class OpenAnswer(msgspec.Struct, frozen=True, forbid_unknown_fields=True):
    """One profile without the answer to smoke, and what follows."""

    profile: dict[str, float | None]
    p_smoke_given_rest: float
    risk_if_1: float
    risk_if_0: float
    marginal_risk: float


class BirthsOpen(Figures, frozen=True, forbid_unknown_fields=True):
    """smoke left out of the fit in birthwt_logit; `smoke_row`: intercept and coefficients of its log odds."""

    given: tuple[str, ...]
    smoke_row: Row
    cases: tuple[OpenAnswer, ...]


PIMA = load("pima_not_measured", PimaOpen)
BIRTHS = load("birthwt_not_measured", BirthsOpen)


def pima_population(shrink: dict[str, float] | None = None) -> Population:
    """The people of the fit; `shrink` multiplies standard deviations."""
    covariance = np.array(PIMA.population_cov)
    sd = np.sqrt(np.diag(covariance))
    factors = shrink or {}
    return Population(
        source="The rows of the fit",
        numbers=tuple(
            PopulationNumber(id=id, mean=mean, sd=float(own) * factors.get(id, 1.0))
            for id, mean, own in zip(PIMA.predictors, PIMA.population_mean, sd, strict=True)
        ),
        correlations=matrix(covariance / np.outer(sd, sd)),
        yes_no=(),
    )


@cache
def pima_model() -> Model:
    """The fit with its people; every value of theirs may stand open."""
    return described(load("pima_logit", BinaryFit), pima_population())


def described(fit: BinaryFit, population: Population | None) -> Model:
    """A fit with a population, its predictors free to stand open but for `age`, which nothing may take away."""
    content = package_binary(fit)
    predictors = tuple(msgspec.structs.replace(p, may_be_missing=p.id != "age") for p in content.predictors)
    return through_file(msgspec.structs.replace(content, population=population, predictors=predictors))


@cache
def births_model() -> Model:
    """The fit of births with smoke as a question, its row given age, weight and race; their moments are not used."""
    content = package_binary(load("birthwt_logit", BinaryFit))
    question = YesNoPredictor(id="smoke", label="smoke", group="Values", may_be_missing=True)
    names = BIRTHS.given
    population = Population(
        source="The rows of the fit",
        numbers=tuple(PopulationNumber(id=id, mean=0.0, sd=1.0) for id in names),
        correlations=matrix(np.eye(len(names))),
        yes_no=(
            PopulationAnswer(
                id="smoke",
                intercept=BIRTHS.smoke_row[0],
                coefficients=dict(zip(names, BIRTHS.smoke_row[1:], strict=True)),
            ),
        ),
    )
    (example,) = content.worked_examples
    answer = "yes" if example.values["smoke"] == "1.0" else "no"
    return through_file(
        msgspec.structs.replace(
            content,
            population=population,
            predictors=tuple(question if p.id == "smoke" else p for p in content.predictors),
            worked_examples=(msgspec.structs.replace(example, values={**example.values, "smoke": answer}),),
        )
    )


def texts_of(profile: dict[str, float | None]) -> dict[str, str]:
    """What is typed for a profile: "unknown" where a value was left out."""
    return {id: "unknown" if value is None else typed_number(value) for id, value in profile.items()}
