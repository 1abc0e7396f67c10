"""One patient gets the same bits alone, in a slice and inside a million."""

from collections.abc import Sequence

import numpy as np
import pytest

from clinicalc.coefficients.schema import Spline
from clinicalc.covariates.derived import ckd_epi_2021
from clinicalc.covariates.design import DesignFactor, DesignTerm, design_columns
from clinicalc.covariates.transforms import StepKind, Transform, apply_transform
from clinicalc.prediction.line import Adjustment, Line
from clinicalc.prediction.links import Link
from clinicalc.prediction.predict import BLOCK, Prediction, predict
from tests.prediction.invented import Array, invent_columns, invent_draws, invent_line, invent_precision, rows_of

MILLION = 1_000_000
TERMS = 12
# the first and last of all, both sides of a block's edge, and some in between
PLACES = (0, 1, 777, BLOCK - 1, BLOCK, BLOCK + 1, 123_457, 500_000, 999_998, 999_999)
SLICES = (slice(0, 777), slice(BLOCK - 300, BLOCK + 477), slice(MILLION - 777, MILLION))
ADJUSTMENT = Adjustment(-0.4, 0.85, (0.02, 0.006, 0.01))


def parts(prediction: Prediction) -> dict[str, Array]:
    found = {
        "eta": prediction.eta,
        "probability": prediction.probability,
        "complement": prediction.complement,
        "lower": prediction.lower,
        "upper": prediction.upper,
        "eta_lower": prediction.eta_lower,
        "eta_upper": prediction.eta_upper,
    }
    return {name: part for name, part in found.items() if part is not None}


def assert_same_bits(line: Line, columns: Sequence[Array], whole: Prediction, adjustment: Adjustment | None) -> None:
    everyone = parts(whole)
    assert len(everyone) == 7
    for rows in (*SLICES, *(slice(place, place + 1) for place in PLACES)):
        some = parts(predict(line, rows_of(columns, rows), adjustment=adjustment))
        for name, part in everyone.items():
            assert np.array_equal(some[name].view(np.uint64), part[rows].view(np.uint64)), (name, rows)


@pytest.fixture(scope="module")
def columns() -> tuple[Array, ...]:
    return invent_columns(MILLION, TERMS)


@pytest.mark.parametrize("adjustment", [None, ADJUSTMENT], ids=["plain", "recalibrated"])
@pytest.mark.parametrize("link", ["logit", "cloglog"])
def test_one_patient_inside_a_million(link: Link, adjustment: Adjustment | None, columns: tuple[Array, ...]) -> None:
    line = invent_line(link, TERMS, invent_precision(TERMS))
    assert_same_bits(line, columns, predict(line, columns, adjustment=adjustment), adjustment)


def test_one_patient_among_others_with_draws() -> None:
    line = invent_line("logit", 4, invent_draws(400, 4))
    columns = invent_columns(1500, 4)
    together = predict(line, columns, adjustment=ADJUSTMENT)
    for place in (0, 1, 800, 1499):
        alone = parts(predict(line, rows_of(columns, slice(place, place + 1)), adjustment=ADJUSTMENT))
        for name, part in parts(together).items():
            assert alone[name][0] == part[place], name


KNOTS = (20.0, 40.0, 55.0, 80.0)
STEPS = {
    "log": Transform(StepKind.LOG),
    "square": Transform(StepKind.POWER, 2.0),
    "root": Transform(StepKind.POWER, 0.5),
    "power -1": Transform(StepKind.POWER, -1.0),
    "power -1.2": Transform(StepKind.POWER, -1.2),
    "cube": Transform(StepKind.POWER, 3.0),
    "subtract": Transform(StepKind.SUBTRACT, 0.1),
    "divide": Transform(StepKind.DIVIDE, 3.0),
    "multiply": Transform(StepKind.MULTIPLY, 0.02586),
    "clip_low": Transform(StepKind.CLIP_LOW, 50.0),
    "clip_high": Transform(StepKind.CLIP_HIGH, 50.0),
    "spline 1": Transform(StepKind.SPLINE, spline=Spline(KNOTS, 1)),
    "spline 2": Transform(StepKind.SPLINE, spline=Spline(KNOTS, 2)),
    "above": Transform(StepKind.ABOVE, 50.0),
    "up_to": Transform(StepKind.UP_TO, 50.0),
}


@pytest.fixture(scope="module")
def values() -> Array:
    """A million values above 0, some of them at the cuts and knots."""
    x = np.random.default_rng(5).uniform(0.01, 120, MILLION)
    x[::1000] = 50.0
    x[1::1000] = 55.0
    return x


@pytest.mark.parametrize("name", STEPS)
def test_steps(name: str, values: Array) -> None:
    step = STEPS[name]
    together = apply_transform(step, values)
    for rows in (*SLICES, *(slice(place, place + 1) for place in PLACES)):
        assert np.array_equal(apply_transform(step, np.array(values[rows])), together[rows]), rows


def test_design_term_of_several_products(values: Array) -> None:
    logged = DesignFactor("x", (STEPS["log"],))
    term = DesignTerm("t", 1.0, False, ((logged, DesignFactor("y", (STEPS["root"],))), (DesignFactor("y", ()), logged)))
    columns = {"x": values, "y": values[::-1].copy()}
    together = design_columns((term,), columns)[0]
    for rows in SLICES:
        some = {name: np.array(column[rows]) for name, column in columns.items()}
        assert np.array_equal(design_columns((term,), some)[0], together[rows])


def test_derived_value(values: Array) -> None:
    creatinine = values / 40
    female = (values > 50).astype(np.float64)
    together = ckd_epi_2021(creatinine, values, female)
    for place in PLACES:
        row = slice(place, place + 1)
        assert ckd_epi_2021(creatinine[row].copy(), values[row].copy(), female[row].copy())[0] == together[place]
