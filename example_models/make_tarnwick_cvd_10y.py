"""Makes tarnwick-cvd-10y.json, the coefficient file of a model fitted to an invented cohort.

    python example_models/make_tarnwick_cvd_10y.py [FOLDER]

Needs the development install, which puts the checkout on Python's path. The file is proved before it is written.
"""

import platform
import sys
from pathlib import Path
from typing import Any

import numpy as np
import pandas as pd
import statsmodels
from msgspec import UNSET

from clinicalc.assessment.proof import prove_model
from clinicalc.coefficients import schema as s
from clinicalc.coefficients.reader import read_bytes
from clinicalc.coefficients.writer import write_bytes, write_file
from example_models.tarnwick_cohort import (
    PEOPLE,
    SEED,
    TRUE_INTERCEPT,
    TRUTH,
    Array,
    Fit,
    concordance,
    draw_cohort,
    fit_model,
    maximise,
    true_probability,
    widest_gap,
)

FILE_NAME = "tarnwick-cvd-10y.json"
FACTOR = 0.02586
"""mmol/L for 1 mg/dL of cholesterol, from published unit tables."""
THIN = "\u202f"
MINUS = "\u2212"
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

BP_TREATED = s.YesNoPredictor(
    "bp_treated",
    "Takes tablets for blood pressure",
    "Blood pressure",
    treatment=True,
    meaning="any blood-pressure-lowering drug taken now, for whatever reason",
)
SMOKER = s.YesNoPredictor(
    "smoker",
    "Smokes now",
    "History",
    modifiable=True,
    loinc=("72166-2",),
    meaning="smokes tobacco now; a person who has stopped answers no",
)
DIABETES = s.YesNoPredictor(
    "diabetes",
    "Has diabetes",
    "History",
    meaning="diabetes diagnosed by a clinician or treated with tablets or insulin",
)
LIPID_SPREAD = (
    "Random-effects meta-analysis of 30 studies, 1970–1992: Smith SJ et al. Clin Chem 1993;39:1012"
    " (citation from memory)"
)
PRESSURE_SPREAD = (
    "Keenan et al. BMJ 2009;338:b1492: mean of two readings at one visit, visits three months apart, treated people"
    " after a stroke; SD worked out as √(186.5/2) from the printed variance of differences 200.9 less its long-term"
    " part 14.4"
)


def build_file(fit: Fit) -> s.CoefficientFile:
    """The coefficient file of a fit."""
    model = s.ModelContent(
        id="tarnwick-cvd-10y",
        version="1.0.0",
        title="Tarnwick cardiovascular disease, invented example",
        outcome="First heart attack or stroke: fatal or not, in invented people",
        source=_source(int(fit.cohort["event"].sum())),
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


def _source(events: int) -> s.Source:
    return s.Source(
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
    )


def _use() -> s.Use:
    return s.Use(
        population="Nobody: it was fitted to 6,000 invented people of 35–79 years without cardiovascular disease."
        " For trying the program out only, not for any patient.",
        setting="Demonstration and tests",
        not_for=("any patient", "people who already have cardiovascular disease", "emergencies", "pregnancy"),
        not_used=("family history", "kidney function", "body weight", "ethnic group", "lipid-lowering treatment"),
        cautions=("It is invented; its numbers are true of nobody and must not guide any decision.",),
        plain=s.Plain(
            outcome="a first heart attack or stroke",
            cautions=(
                "This figure comes from invented people. It is for trying the program out and says nothing about you.",
            ),
        ),
    )


def _predictors(cohort: pd.DataFrame) -> tuple[s.Predictor, ...]:
    return (
        _measured(cohort, "age", "Age", "a", "Person", outside_derivation="stop"),
        s.ChoicePredictor("sex", "Sex", "Person", (s.Choice("female", "Female"), s.Choice("male", "Male"))),
        _measured(
            cohort,
            "systolic_bp",
            "Systolic blood pressure",
            "mm[Hg]",
            "Blood pressure",
            outside_derivation="caution",
            modifiable=True,
            within_person=s.WithinPerson(PRESSURE_SPREAD, sd=9.7),
            loinc=("8480-6",),
        ),
        BP_TREATED,
        _lipid(cohort, "total_cholesterol", "Total cholesterol", 0.061, ("14647-2", "2093-3")),
        _lipid(cohort, "hdl_cholesterol", "HDL cholesterol", 0.074, ("14646-4", "2085-9")),
        SMOKER,
        DIABETES,
    )


def _lipid(cohort: pd.DataFrame, id: str, label: str, cv: float, loinc: tuple[str, ...]) -> s.NumberPredictor:
    return _measured(
        cohort,
        id,
        label,
        "mmol/L",
        "Blood tests",
        factor=FACTOR,
        outside_derivation="caution",
        modifiable=True,
        valid_for=s.ValidFor(days=365),
        within_person=s.WithinPerson(LIPID_SPREAD, cv=cv),
        loinc=loinc,
    )


def _measured(cohort: pd.DataFrame, id: str, label: str, unit: str, group: str, **rest: Any) -> s.NumberPredictor:
    ends = (float(cohort[id].min()), float(cohort[id].max()))
    return s.NumberPredictor(id=id, label=label, quantity=id, unit=unit, group=group, derivation=ends, **rest)


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
        row = maximise(cohort[name], given)
        slopes = {other: float(row.params[other]) for other in given.columns}
        answers.append(s.PopulationAnswer(name, float(row.params["intercept"]), slopes))
        given[name] = cohort[name]
    correlations = np.corrcoef(scale.to_numpy(), rowvar=False)
    np.fill_diagonal(correlations, 1.0)
    share = float(cohort["male"].mean())
    return s.Population(
        source="The invented cohort itself; nobody's values.",
        numbers=tuple(
            s.PopulationNumber(
                name,
                float(scale[name].mean()),
                float(scale[name].std()),
                log="natural" if name in logged else UNSET,
            )
            for name in numbers
        ),
        correlations=_rows(correlations),
        yes_no=tuple(answers),
        choices=(s.PopulationChoice("sex", {"female": 1.0 - share, "male": share}),),
    )


def _rows(matrix: Array) -> s.Matrix:
    return tuple(tuple(float(entry) for entry in row) for row in matrix)


def document(fit: Fit) -> tuple[s.Documentation, ...]:
    """What a reporting guideline asks (TRIPOD+AI, BMJ 2024;385:e078378), with the figures of this fit."""
    items = _document_making(fit) | _document_performance(fit)
    return tuple(s.Documentation(item, text) for item, text in items.items())


def _document_making(fit: Fit) -> dict[str, str]:
    events, slopes = int(fit.cohort["event"].sum()), len(fit.slopes)
    knots = ", ".join(f"{knot:.0f}" for knot in fit.knots)
    truth = " ".join(f"{'+' if value > 0 else MINUS} {abs(value):g} {name}" for name, value in TRUTH.items())
    return {
        "data source and eligibility": f"{PEOPLE:,} invented people of 35–79 years without cardiovascular disease,"
        f" patients of practices that do not exist, drawn with seed {SEED}; no dates.",
        "outcome": "One yes or no for each person at 10 years, drawn by the true rule; everybody was followed to the"
        " end and nobody died of anything else first.",
        "true rule": f"Log odds {MINUS}{abs(TRUE_INTERCEPT):g} {truth}; values centred and scaled as in the terms.",
        "sample size and events": f"{PEOPLE:,} people, {events:,} events ({100 * events / PEOPLE:.1f}{THIN}%);"
        f" {events / slopes:.0f} events for each of {slopes} coefficients.",
        "missing data": "None.",
        "analysis": "Logistic regression by maximum likelihood; all terms chosen beforehand, none selected or shrunk.",
        "spline knots": f"Age: {knots} years, the 0.05, 0.35, 0.65 and 0.95 quantiles in whole years.",
        "full specification": "All coefficients, the intercept and their whole covariance matrix.",
        "code": "example_models/make_tarnwick_cvd_10y.py draws the cohort, fits the model and writes this file.",
        "software": f"Python {platform.python_version()}, numpy {np.__version__}, pandas {pd.__version__},"
        f" statsmodels {statsmodels.__version__}.",
    }


def _document_performance(fit: Fit) -> dict[str, str]:
    away = float(np.mean(np.abs(fit.fitted - true_probability(fit.cohort))))
    women, men = (concordance(fit, fit.cohort["male"].to_numpy() == sex) for sex in (0.0, 1.0))
    return {
        "discrimination": f"C statistic {concordance(fit):.3f} in the people the model was fitted to, not corrected for"
        " optimism. It was tried in no other people.",
        "subgroups": f"C statistic {women:.3f} in women, {men:.3f} in men, in the people the model was fitted to.",
        "apparent calibration": "By tenths of the fitted probability, observed and mean fitted share differ by at most"
        f" {100 * widest_gap(fit):.1f} percentage points; on the whole they agree, as in any such fit.",
        "distance from the truth": f"Fitted and true probability are {100 * away:.2f} percentage points apart on"
        " average.",
        "limitations": "Everything is invented, and but for age the model has the very form of the true rule: it does"
        " better here than any real model can.",
    }


def main(folder: Path) -> Path:
    """Draws, fits, proves the file as it is proved at every load and puts it into `folder`."""
    # what is read has the answers in the order of the fingerprinted bytes; written so, the file is its own copy
    checked = read_bytes(write_bytes(build_file(fit_model(draw_cohort()))), FILE_NAME)
    prove_model(checked)
    path = folder / FILE_NAME
    write_file(path, checked.content)
    return path


if __name__ == "__main__":
    print(main(Path(sys.argv[1]) if len(sys.argv) > 1 else Path(__file__).parent))
