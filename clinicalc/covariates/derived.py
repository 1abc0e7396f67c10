"""Values worked out from other values by published, named equations. All work on columns, shape (n,)."""

from collections.abc import Mapping

import numpy as np

from clinicalc.coefficients.schema import DerivedEquation
from clinicalc.covariates.transforms import Column

FRIEDEWALD_LIMIT = 400.0
"""mg/dL of triglycerides above which the Friedewald equation does not hold (4.5 mmol/L)."""

BENDS: Mapping[tuple[DerivedEquation, str], tuple[float, ...]] = {("ckd_epi_2021", "creatinine"): (0.7, 0.9)}
"""Equation and role -> where the equation bends in it, in the role's unit: for women and for men."""


def derive(equation: DerivedEquation, inputs: Mapping[str, Column]) -> Column:
    """The derived column, shape (n,), in the equation's unit; not a number where the equation does not hold.

    `inputs` has one column for each role, in the unit that the role asks for.
    """
    with np.errstate(all="ignore"):
        match equation:
            case "body_mass_index":
                return inputs["weight"] / (inputs["height"] * inputs["height"])
            case "non_hdl_cholesterol":
                return inputs["total_cholesterol"] - inputs["hdl_cholesterol"]
            case "ckd_epi_2021":
                return ckd_epi_2021(inputs["creatinine"], inputs["age"], inputs["sex"])
            case "friedewald_ldl":
                return friedewald_ldl(inputs["total_cholesterol"], inputs["hdl_cholesterol"], inputs["triglycerides"])
            case "difference":
                return inputs["minuend"] - inputs["subtrahend"]
            case "ratio":
                return inputs["numerator"] / inputs["denominator"]


def ckd_epi_2021(creatinine: Column, age: Column, female: Column) -> Column:
    """Estimated glomerular filtration rate, mL/min/1.73 m², from serum creatinine (mg/dL), age (years) and sex.

    CKD-EPI creatinine equation without race: Inker LA et al., N Engl J Med 2021;385:1737-1749.
    """
    kappa = np.where(female == 1, 0.7, 0.9)
    alpha = np.where(female == 1, -0.241, -0.302)
    ratio = creatinine / kappa
    low = np.power(np.minimum(ratio, 1.0), alpha)
    high = np.power(np.maximum(ratio, 1.0), -1.200)
    return np.ascontiguousarray(142.0 * low * high * np.power(0.9938, age) * np.where(female == 1, 1.012, 1.0))


def friedewald_ldl(total: Column, hdl: Column, triglycerides: Column) -> Column:
    """LDL cholesterol in mg/dL; not a number above 400 mg/dL of triglycerides.

    Friedewald WT, Levy RI, Fredrickson DS, Clin Chem 1972;18:499-502.
    """
    return np.where(triglycerides <= FRIEDEWALD_LIMIT, total - hdl - triglycerides / 5.0, np.nan)
