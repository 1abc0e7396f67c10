"""Makes tarnwick-cvd-10y.json: an invented cohort, a logistic model fitted to it, the coefficient file of the fit.

    python example_models/make_tarnwick_cvd_10y.py [FOLDER]

No person in it exists. The cohort is drawn from a stated rule, so that what the fit found can be set against the truth.
The design is written out here in numpy and does not pass through the program, so that one can be checked by the other.
"""

import platform
import sys
from collections.abc import Mapping
from dataclasses import dataclass
from pathlib import Path
from statistics import NormalDist
from typing import Any

import numpy as np
import pandas as pd
import statsmodels
import statsmodels.api as sm
from numpy.typing import NDArray

from clinicalc.assessment.proof import load_model
from clinicalc.coefficients import schema as s
from clinicalc.coefficients.writer import write_file

Array = NDArray[np.float64]

FILE_NAME = "tarnwick-cvd-10y.json"
PEOPLE = 6000
SEED = 20260301
FACTOR = 0.02586
"""mmol/L for 1 mg/dL of cholesterol, from published unit tables."""
THIN = "\u202f"
TRUE_INTERCEPT = -3.6
TRUTH: Mapping[str, float] = {
    "age": 0.85,
    "age_squared": -0.06,
    "male": 0.45,
    "systolic_bp": 0.14,
    "bp_treated": 0.35,
    "total_cholesterol": 0.20,
    "hdl_cholesterol": -0.75,
    "smoker": 0.75,
    "diabetes": 0.65,
    "age_smoker": -0.15,
    "age_systolic_bp": -0.02,
}
"""The rule by which the outcome is drawn; bent in age by a square, which the fit does not know and has splines for."""

EXAMPLES: tuple[tuple[str, str, str, str, str, str, str, str], ...] = (
    ("61", "female", "142", "no", "5.2 mmol/L", "1.3 mmol/L", "yes", "no"),
    ("61", "female", "142", "no", "5.2 mmol/L", "1.3 mmol/L", "no", "no"),
    ("40", "male", "118", "no", "4.6 mmol/L", "1.2 mmol/L", "no", "no"),
    ("55", "male", "150", "yes", "232 mg/dL", "41 mg/dL", "yes", "yes"),
    ("79", "male", "165", "yes", "6.1 mmol/L", "1.0 mmol/L", "no", "yes"),
    ("35", "female", "104", "no", "4.1 mmol/L", "1.9 mmol/L", "no", "no"),
    ("68", "female", "136", "yes", "189 mg/dL", "58 mg/dL", "no", "no"),
    ("74", "female", "128", "no", "5.0 mmol/L", "1.6 mmol/L", "yes", "no"),
)
ASKED = ("age", "sex", "systolic_bp", "bp_treated", "total_cholesterol", "hdl_cholesterol", "smoker", "diabetes")


# ---------------------------------------------------------------- the invented cohort


def draw_cohort() -> pd.DataFrame:
    """The cohort: one row a person, answers as 0 and 1, values rounded as they are measured, `event` last.

    Made from the raw output of the bit generator, which numpy promises not to change, unlike its distributions.
    """
    raw = np.random.PCG64(SEED).random_raw(9 * PEOPLE).astype(np.uint64).reshape(9, PEOPLE)
    u = ((raw >> np.uint64(11)).astype(np.float64) + 0.5) * 2.0**-53
    normal = NormalDist()
    body, z_sbp, z_tc, z_hdl = (np.array([normal.inv_cdf(float(x)) for x in row]) for row in u[:4])
    age = 35.0 + np.floor(45.0 * u[4] ** 1.15)
    male = (u[5] < 0.48).astype(np.float64)
    a = (age - 55.0) / 10.0
    # `body` stands for what weight and habits do to all of them at once, and is not recorded
    sbp = np.rint(np.exp(4.85 + 0.04 * a + 0.02 * male + 0.045 * body + 0.10 * z_sbp))
    tc = np.round(np.maximum(5.3 + 0.10 * a - 0.15 * male + 0.25 * body + 0.95 * z_tc, 2.4), 1)
    hdl = np.round(np.exp(0.42 - 0.20 * male - 0.08 * body + 0.20 * z_hdl), 1)
    diabetes = (u[6] < _expit(-2.9 + 0.45 * a + 0.6 * body)).astype(np.float64)
    treated = (u[7] < _expit(-1.9 + 0.8 * a + 0.4 * body + 0.6 * diabetes + 0.02 * (sbp - 130.0))).astype(np.float64)
    smoker, event = _split(u[8], _expit(-1.2 - 0.25 * a + 0.2 * male))
    people = pd.DataFrame(
        {
            "age": age,
            "male": male,
            "systolic_bp": sbp,
            "bp_treated": treated,
            "total_cholesterol": tc,
            "hdl_cholesterol": hdl,
            "smoker": smoker,
            "diabetes": diabetes,
        }
    )
    return people.assign(event=(event < true_probability(people)).astype(np.float64))


def true_probability(people: pd.DataFrame) -> Array:
    """The probability by which each person's event is drawn, shape (n,)."""
    columns = design_frame(people, (36.0, 50.0, 60.0, 78.0))  # knots play no part in the columns used here
    columns["age_squared"] = columns["age"] ** 2
    eta = TRUE_INTERCEPT + sum(value * columns[name].to_numpy() for name, value in TRUTH.items())
    return _expit(np.asarray(eta, dtype=np.float64))


def _split(u: Array, share: Array) -> tuple[Array, Array]:
    """A yes/no with the given shares, and what is left of u: uniform again and independent of the answer."""
    yes = u < share
    return yes.astype(np.float64), np.where(yes, u / share, (u - share) / (1.0 - share))


def _expit(eta: Array) -> Array:
    return 1.0 / (1.0 + np.exp(-eta))


# ---------------------------------------------------------------- the fit


@dataclass(frozen=True, slots=True, eq=False)
class Fit:
    """The fitted model: `result` is statsmodels' own object, whose first parameter is the intercept."""

    cohort: pd.DataFrame
    knots: tuple[float, float, float, float]
    result: Any

    @property
    def fitted(self) -> Array:
        """The fitted probability of each person, shape (n,)."""
        return np.asarray(self.result.predict(), dtype=np.float64)

    def limits(self, people: pd.DataFrame) -> Array:
        """Probability, lower and upper 95 % limit by statsmodels' get_prediction, shape (n, 3)."""
        prediction = self.result.get_prediction(with_constant(design_frame(people, self.knots)), which="mean")
        return np.column_stack([prediction.predicted, prediction.conf_int(alpha=0.05)])


def fit_model(cohort: pd.DataFrame) -> Fit:
    """The logistic model by maximum likelihood. Raises RuntimeError where it does not converge."""
    low, lower, upper, high = (float(np.rint(np.quantile(cohort["age"], q))) for q in (0.05, 0.35, 0.65, 0.95))
    knots = (low, lower, upper, high)
    model = sm.Logit(cohort["event"], with_constant(design_frame(cohort, knots)))
    result = model.fit(method="newton", maxiter=100, tol=1e-11, disp=False)
    if not result.mle_retvals["converged"]:
        raise RuntimeError("the fit did not converge")
    return Fit(cohort, knots, result)


def design_frame(people: pd.DataFrame, knots: tuple[float, float, float, float]) -> pd.DataFrame:
    """The design terms in file order, one column each, without the intercept."""
    years = people["age"].to_numpy(dtype=np.float64)
    decades, pressure = (years - 55.0) / 10.0, (people["systolic_bp"] - 120.0) / 10.0
    return pd.DataFrame(
        {
            "age": decades,
            "age_spline_1": _spline(years, knots, 0) / 10.0,
            "age_spline_2": _spline(years, knots, 1) / 10.0,
            "male": people["male"],
            "systolic_bp": pressure,
            "bp_treated": people["bp_treated"],
            "total_cholesterol": people["total_cholesterol"] - 5.0,
            "hdl_cholesterol": people["hdl_cholesterol"] - 1.4,
            "smoker": people["smoker"],
            "diabetes": people["diabetes"],
            "age_smoker": decades * people["smoker"],
            "age_systolic_bp": decades * pressure,
        }
    )


def with_constant(design: pd.DataFrame) -> pd.DataFrame:
    """The design with the intercept's column of ones in front."""
    return pd.concat([pd.Series(1.0, index=design.index, name="intercept"), design], axis=1)


def _spline(x: Array, knots: tuple[float, float, float, float], j: int) -> Array:
    """Restricted cubic spline function j (from 0). Source: Harrell, Regression Modeling Strategies, 2015, eq. 2.25."""
    cubes = [np.clip(x - knot, 0.0, None) ** 3 for knot in knots]
    gap = knots[3] - knots[2]
    restricted = cubes[j] - cubes[2] * (knots[3] - knots[j]) / gap + cubes[3] * (knots[2] - knots[j]) / gap
    return np.asarray(restricted / (knots[3] - knots[0]) ** 2, dtype=np.float64)


# ---------------------------------------------------------------- the coefficient file


def build_file(fit: Fit) -> s.CoefficientFile:
    """The coefficient file of a fit."""
    events = int(fit.cohort["event"].sum())
    model = s.ModelContent(
        id="tarnwick-cvd-10y",
        version="1.0.0",
        title="Tarnwick cardiovascular disease, invented example",
        outcome="First heart attack or stroke, fatal or not, within 10 years (invented)",
        source=s.Source(
            kind="local",
            citation="Invented: a cohort of the Tarnwick practices that do not exist, drawn and fitted by "
            "example_models/make_tarnwick_cvd_10y.py.",
            derivation=s.Derivation(people=PEOPLE, events=events),
            notes=(
                "No person in the cohort exists. For trying the program out and for its tests, not for any patient.",
                "Logistic regression by maximum likelihood; age by a restricted cubic spline with four knots.",
                "Cholesterol typed in mg/dL is turned into mmol/L with 1 mg/dL = 0.02586 mmol/L, from published unit"
                " tables; the within-person figures are published ones, all else is invented.",
            ),
        ),
        unconfirmed=(),
        use=_use(),
        predictors=_predictors(fit.cohort),
        derived=(),
        exclusions=(
            s.Exclusion(
                id="prior_cvd",
                ask="Has the patient ever had a heart attack, angina, a stroke, a transient ischaemic attack or"
                " peripheral artery disease?",
                because="The invented cohort holds only people without cardiovascular disease.",
            ),
        ),
        equations=(_equation(fit),),
        recalibration_required=False,
        recalibrations=(),
        decision_points=(
            s.DecisionPoint(
                probability=0.1, label="Practice setting", source="invented for the demonstration; no guideline"
            ),
        ),
        worked_examples=_worked_examples(fit),
        population=_population(fit.cohort),
        documentation=document(fit),
    )
    return s.CoefficientFile(format="clinicalc.coefficients/1", model=model, signatures=())


def _use() -> s.Use:
    return s.Use(
        population="Nobody: it was fitted to 6,000 invented people of 35–79 years without cardiovascular disease."
        " For trying the program out only, not for any patient.",
        setting="Demonstration and tests",
        not_for=("any patient", "people who already have cardiovascular disease", "emergencies", "pregnancy"),
        not_used=("family history", "kidney function", "body weight", "ethnic group", "lipid-lowering treatment"),
        cautions=("This model is invented. Its numbers are true of nobody and must not guide any decision.",),
        plain=s.Plain(
            outcome="a first heart attack or stroke",
            cautions=(
                "This figure comes from invented people. It is for trying the program out and says nothing about you.",
            ),
        ),
    )


def _predictors(cohort: pd.DataFrame) -> tuple[s.Predictor, ...]:
    def measured(id: str, label: str, unit: str, group: str, **rest: Any) -> s.NumberPredictor:
        ends = (float(cohort[id].min()), float(cohort[id].max()))
        return s.NumberPredictor(id=id, label=label, quantity=id, unit=unit, group=group, derivation=ends, **rest)

    lipids = (
        "Random-effects meta-analysis of 30 studies, 1970–1992: Smith SJ et al. Clin Chem 1993;39:1012"
        " (citation from memory)"
    )
    pressure = (
        "Keenan et al. BMJ 2009;338:b1492: mean of two readings at one visit, visits three months apart, treated"
        " people after a stroke; SD worked out as √(186.5/2) from the printed variance of differences 200.9 less its"
        " long-term part 14.4"
    )
    blood = {"outside_derivation": "caution", "factor": FACTOR, "modifiable": True, "valid_for": s.ValidFor(days=365)}
    return (
        measured("age", "Age", "a", "Person", outside_derivation="stop"),
        s.ChoicePredictor("sex", "Sex", "Person", (s.Choice("female", "Female"), s.Choice("male", "Male"))),
        measured(
            "systolic_bp",
            "Systolic blood pressure",
            "mm[Hg]",
            "Blood pressure",
            outside_derivation="caution",
            modifiable=True,
            within_person=s.WithinPerson(source=pressure, sd=9.7),
            loinc=("8480-6",),
        ),
        s.YesNoPredictor(
            "bp_treated",
            "Takes tablets for blood pressure",
            "Blood pressure",
            treatment=True,
            meaning="any blood-pressure-lowering drug taken now, for whatever reason",
        ),
        measured(
            "total_cholesterol",
            "Total cholesterol",
            "mmol/L",
            "Blood tests",
            within_person=s.WithinPerson(source=lipids, cv=0.061),
            loinc=("14647-2", "2093-3"),
            **blood,
        ),
        measured(
            "hdl_cholesterol",
            "HDL cholesterol",
            "mmol/L",
            "Blood tests",
            within_person=s.WithinPerson(source=lipids, cv=0.074),
            loinc=("14646-4", "2085-9"),
            **blood,
        ),
        s.YesNoPredictor(
            "smoker",
            "Smokes now",
            "History",
            modifiable=True,
            loinc=("72166-2",),
            meaning="smokes tobacco now; a person who has stopped answers no",
        ),
        s.YesNoPredictor(
            "diabetes",
            "Has diabetes",
            "History",
            meaning="diabetes diagnosed by a clinician or treated with tablets or insulin",
        ),
    )


def _products(knots: tuple[float, ...]) -> dict[str, tuple[s.Factor, ...]]:
    age = s.Factor("age", (s.Step(subtract=55.0), s.Step(divide=10.0)))
    pressure = s.Factor("systolic_bp", (s.Step(subtract=120.0), s.Step(divide=10.0)))
    splines = {
        f"age_spline_{j}": (s.Factor("age", (s.Step(spline=s.Spline(knots, j)), s.Step(divide=10.0))),) for j in (1, 2)
    }
    return {
        "age": (age,),
        **splines,
        "male": (s.Factor("sex", (s.Step(is_=("male",)),)),),
        "systolic_bp": (pressure,),
        "bp_treated": (s.Factor("bp_treated"),),
        "total_cholesterol": (s.Factor("total_cholesterol", (s.Step(subtract=5.0),)),),
        "hdl_cholesterol": (s.Factor("hdl_cholesterol", (s.Step(subtract=1.4),)),),
        "smoker": (s.Factor("smoker"),),
        "diabetes": (s.Factor("diabetes"),),
        "age_smoker": (age, s.Factor("smoker")),
        "age_systolic_bp": (age, pressure),
    }


def _equation(fit: Fit) -> s.Equation:
    products = _products(fit.knots)
    names = ["intercept", *products]
    full = np.asarray(fit.result.cov_params().loc[names, names], dtype=np.float64)
    full = (full + full.T) / 2.0
    slopes, row = full[1:, 1:], full[0, 1:]
    # var = v00 + 2 x'v0 + x'Vx, with the square completed
    centre = -np.linalg.solve(slopes, row)
    variance = float(full[0, 0] + row @ centre)
    return s.Equation(
        id="all",
        applies_when={},
        link="logit",
        competing_events=s.CompetingEvents(handled="not_applicable"),
        terms=tuple(s.Term(name, float(fit.result.params[name]), product) for name, product in products.items()),
        horizons=(s.Horizon(years=10.0, intercept=float(fit.result.params["intercept"])),),
        uncertainty=s.CovarianceBand(
            covariance=_rows(slopes), at_centre=(s.AtCentre(variance, tuple(centre.tolist()), years=10.0),)
        ),
        reference_person={
            "systolic_bp": 120.0,
            "bp_treated": "no",
            "total_cholesterol": 5.0,
            "hdl_cholesterol": 1.4,
            "smoker": "no",
            "diabetes": "no",
        },
    )


def _worked_examples(fit: Fit) -> tuple[s.WorkedExample, ...]:
    def number(typed: str) -> float:
        digits, _, unit = typed.partition(" ")
        return float(digits) * (FACTOR if unit == "mg/dL" else 1.0)

    codes = {"no": 0.0, "yes": 1.0, "female": 0.0, "male": 1.0}
    read = [[codes[typed] if typed in codes else number(typed) for typed in example] for example in EXAMPLES]
    limits = fit.limits(pd.DataFrame(read, columns=["male" if name == "sex" else name for name in ASKED]))
    return tuple(
        s.WorkedExample(
            values={"prior_cvd": "no", **dict(zip(ASKED, example, strict=True))},
            years=10.0,
            probability=float(p),
            tolerance=1e-9,
            lower=float(lower),
            upper=float(upper),
            source="get_prediction of statsmodels, from the fit that made this file",
            computed=True,
        )
        for example, (p, lower, upper) in zip(EXAMPLES, limits, strict=True)
    )


def _population(cohort: pd.DataFrame) -> s.Population:
    logged = ("systolic_bp", "hdl_cholesterol")
    numbers = ("age", "systolic_bp", "total_cholesterol", "hdl_cholesterol")
    scale = pd.DataFrame({name: np.log(cohort[name]) if name in logged else cohort[name] for name in numbers})
    given, answers = scale.copy(), []
    for name in ("diabetes", "bp_treated", "smoker"):
        row = sm.Logit(cohort[name], with_constant(given)).fit(method="newton", maxiter=100, tol=1e-11, disp=False)
        slopes = {other: float(row.params[other]) for other in given.columns}
        answers.append(s.PopulationAnswer(name, float(row.params["intercept"]), slopes))
        given[name] = cohort[name]
    share = float(cohort["male"].mean())
    rest: dict[str, Any] = {"log": "natural"}
    return s.Population(
        source="The invented cohort itself; nobody's values.",
        numbers=tuple(
            s.PopulationNumber(
                name, float(scale[name].mean()), float(scale[name].std()), **(rest if name in logged else {})
            )
            for name in numbers
        ),
        correlations=_rows(np.corrcoef(scale.to_numpy(), rowvar=False)),
        yes_no=tuple(answers),
        choices=(s.PopulationChoice("sex", {"female": 1.0 - share, "male": share}),),
    )


def _rows(matrix: Array) -> s.Matrix:
    return tuple(tuple(float(entry) for entry in row) for row in matrix)
