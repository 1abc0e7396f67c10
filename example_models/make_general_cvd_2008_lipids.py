"""Makes the populations and the rebuilt bands of general-cvd-2008-lipids.json again, from the figures printed in it.

    python example_models/make_general_cvd_2008_lipids.py [FOLDER]

Needs the development install, which puts the checkout on Python's path. What the paper prints (coefficients, intervals,
baselines) stands in the file and is kept as it is; populations, bands and the limits of computed worked examples are
made anew. The file is proved before it is written.
"""

import math
import sys
from dataclasses import dataclass
from pathlib import Path

import msgspec
import numpy as np

from clinicalc.assessment.proof import prove_model
from clinicalc.coefficients import schema as s
from clinicalc.coefficients.reader import read_bytes, read_file
from clinicalc.coefficients.writer import write_bytes, write_file
from clinicalc.development.reconstruction import reconstruct_bands
from clinicalc.development.reconstruction_plan import EquationPlan, ReconstructionPlan, StatedPatient

FILE_NAME = "general-cvd-2008-lipids.json"
SHIPPED = Path(__file__).parent / FILE_NAME
SEED = 20080212
FACTOR = 0.02586
TOLERANCE = 1e-9
UPPER_95 = 1.959963984540054


@dataclass(frozen=True, slots=True)
class Cohort:
    """The women or men of the cohort: means and standard deviations, shares of yes, intercepts that give these shares.

    Means, standard deviations and shares from memory; the mean linear predictor that they give for a log-normal cohort
    is 26.191 in women and 23.983 in men, the paper's 26.1931 and 23.9802.
    """

    people: int
    whose: str
    age: tuple[float, float]
    total_cholesterol: tuple[float, float]
    hdl_cholesterol: tuple[float, float]
    systolic_bp: tuple[float, float]
    intercepts: tuple[float, float, float]
    """Of treatment, diabetes and smoking: among the people drawn, so many say yes as in the cohort (`SHARES`)."""
    correlations: tuple[float, float, float, float, float, float]
    """Age with total cholesterol, HDL cholesterol, pressure; total with HDL, with pressure; HDL with pressure."""


WOMEN = Cohort(
    people=4522,
    whose="women",
    age=(49.1, 11.1),
    total_cholesterol=(215.1, 44.1),
    hdl_cholesterol=(57.6, 15.3),
    systolic_bp=(125.8, 20.0),
    intercepts=(-24.677, -7.133, 2.833),
    correlations=(0.35, 0.05, 0.50, 0.10, 0.25, -0.05),
)
MEN = Cohort(
    people=3969,
    whose="men",
    age=(48.5, 10.8),
    total_cholesterol=(212.5, 39.3),
    hdl_cholesterol=(44.9, 12.2),
    systolic_bp=(129.7, 17.6),
    intercepts=(-24.88, -7.05, 2.738),
    correlations=(0.10, 0.05, 0.35, 0.05, 0.15, 0.0),
)
COHORTS = {"women": WOMEN, "men": MEN}
SHARES = {
    "women": {"bp_treated": 0.1176, "diabetes": 0.0376, "smoker": 0.3423},
    "men": {"bp_treated": 0.1013, "diabetes": 0.0650, "smoker": 0.3522},
}
SLOPES: dict[str, dict[str, float]] = {
    "bp_treated": {"age": 0.06, "systolic_bp": 4.0},
    "diabetes": {"age": 0.04, "hdl_cholesterol": -2.0, "systolic_bp": 2.0},
    "smoker": {"age": -0.03, "hdl_cholesterol": -0.5},
}
"""Assumed log odds ratios, for a year of age and for a unit of the natural logarithm of the others."""

LOGGED = ("total_cholesterol", "hdl_cholesterol", "systolic_bp")

WOMAN_OF_61 = StatedPatient(
    "a woman of 61 years (total cholesterol 180 mg/dL, HDL cholesterol 47 mg/dL, 124 mmHg untreated, smoker, no"
    " diabetes)",
    {
        "sex": "female",
        "age": 61.0,
        "total_cholesterol": 180.0,
        "hdl_cholesterol": 47.0,
        "systolic_bp": 124.0,
        "bp_treated": "no",
        "smoker": "yes",
        "diabetes": "no",
    },
)
MAN_OF_53 = StatedPatient(
    "a man of 53 years (total cholesterol 161 mg/dL, HDL cholesterol 55 mg/dL, 125 mmHg treated, no smoker, diabetes)",
    {
        "sex": "male",
        "age": 53.0,
        "total_cholesterol": 161.0,
        "hdl_cholesterol": 55.0,
        "systolic_bp": 125.0,
        "bp_treated": "yes",
        "smoker": "no",
        "diabetes": "yes",
    },
)

PLAN = ReconstructionPlan(
    seed=SEED,
    people=100_000,
    equations=tuple(EquationPlan(id, people=cohort.people) for id, cohort in COHORTS.items()),
    remarks=(
        "Only ages of 30–74 years count, so ages spread less among the people drawn than in the cohort: standard"
        " deviation 9.7 instead of 11.1 years in women, 9.5 instead of 10.8 in men.",
        "The paper prints 1,174 first events over 12 years, 456 of them in women; how many fell into the first 10 years"
        " it does not print.",
    ),
    patients=(WOMAN_OF_61, MAN_OF_53),
)


def describe(cohort: Cohort) -> s.Population:
    """The population of one equation; means and standard deviations of logarithms are those of log-normal values."""
    numbers = [s.PopulationNumber("age", *cohort.age)]
    for id in LOGGED:
        mean, sd = getattr(cohort, id)
        variance = math.log1p((sd / mean) * (sd / mean))
        middle = math.log(mean) - variance / 2.0
        numbers.append(s.PopulationNumber(id, round(middle, 5), round(math.sqrt(variance), 5), log="natural"))
    matrix = np.eye(4)
    matrix[np.triu_indices(4, 1)] = cohort.correlations
    matrix = matrix + np.triu(matrix, 1).T
    return s.Population(
        source=f"Means, standard deviations and shares of the {cohort.whose} in the paper’s cohort, from memory, their"
        " logarithms as if log-normal. The correlations, and how the answers to yes/no questions depend on the numbers,"
        " are assumed: of the size commonly met in cohorts of adults, from memory, not the paper’s.",
        numbers=tuple(numbers),
        correlations=tuple(tuple(float(entry) for entry in row) for row in matrix),
        yes_no=tuple(
            s.PopulationAnswer(id, intercept, dict(slopes))
            for (id, slopes), intercept in zip(SLOPES.items(), cohort.intercepts, strict=True)
        ),
    )


def build_file(printed: s.CoefficientFile) -> s.CoefficientFile:
    """The whole file, from one in which the printed figures stand."""
    model = printed.model
    described = tuple(
        msgspec.structs.replace(
            equation, population=describe(COHORTS[equation.id]), uncertainty=s.NoBand("It is made anew.")
        )
        for equation in model.equations
    )
    made = reconstruct_bands(msgspec.structs.replace(model, equations=described), PLAN)
    examples = tuple(_with_limits(made, example) for example in model.worked_examples)
    whole = msgspec.structs.replace(made, worked_examples=examples)
    return s.CoefficientFile(format="clinicalc.coefficients/1", model=whole, signatures=())


def _with_limits(model: s.ModelContent, example: s.WorkedExample) -> s.WorkedExample:
    """A computed example with exact figures: sums and products written out, apart from the program's own path."""
    if example.computed is not True or example.tolerance > TOLERANCE:
        return example
    values = {id: _number(text) for id, text in example.values.items() if text[0].isdigit()}
    yes = {id: text == "yes" for id, text in example.values.items()}
    equation = next(e for e in model.equations if e.applies_when["sex"] == (example.values["sex"],))
    pressure = math.log(values["systolic_bp"])
    x = np.array(
        [
            math.log(values["age"]),
            math.log(values["total_cholesterol"]),
            math.log(values["hdl_cholesterol"]),
            0.0 if yes["bp_treated"] else pressure,
            pressure if yes["bp_treated"] else 0.0,
            float(yes["smoker"]),
            float(yes["diabetes"]),
        ]
    )
    band, horizon = equation.uncertainty, equation.horizons[0]
    assert isinstance(band, s.ReconstructedBand)
    assert isinstance(horizon.baseline_survival, float)
    assert isinstance(horizon.mean_linear_predictor, float)
    away = x - np.array(band.at_centre[0].centre)
    deviation = math.sqrt(band.at_centre[0].variance + float(away @ np.array(band.covariance) @ away))
    lp = math.fsum(term.coefficient * float(part) for term, part in zip(equation.terms, x, strict=True))
    eta = math.log(-math.log(horizon.baseline_survival)) + lp - horizon.mean_linear_predictor
    risk, lower, upper = (
        round(-math.expm1(-math.exp(eta + step * deviation)), 11) for step in (0.0, -UPPER_95, UPPER_95)
    )
    return msgspec.structs.replace(example, probability=risk, lower=lower, upper=upper)


def _number(typed: str) -> float:
    digits, _, unit = typed.partition(" ")
    return float(digits) / (FACTOR if unit == "mmol/L" else 1.0)


def main(folder: Path) -> Path:
    """Makes, proves and writes the file into a folder; its path."""
    # what is read has answers in the order of the fingerprinted bytes; written so, the file is its own copy
    checked = read_bytes(write_bytes(build_file(read_file(SHIPPED).content)), FILE_NAME)
    prove_model(checked)
    target = folder / FILE_NAME
    write_file(target, checked.content)
    return target


if __name__ == "__main__":
    print(main(Path(sys.argv[1]) if len(sys.argv) > 1 else Path(__file__).parent))
