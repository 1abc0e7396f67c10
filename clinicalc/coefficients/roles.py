"""What each named equation of a derived value takes, and what it gives."""

from collections.abc import Mapping
from dataclasses import dataclass

from clinicalc.coefficients.schema import DerivedEquation

SEX = "sex"


@dataclass(frozen=True, slots=True)
class Role:
    """One input of an equation and the unit it needs; "" is the derived value's own unit, "sex" a 0/1 for female."""

    name: str
    unit: str


ROLES: Mapping[DerivedEquation, tuple[Role, ...]] = {
    "body_mass_index": (Role("weight", "kg"), Role("height", "m")),
    "non_hdl_cholesterol": (Role("total_cholesterol", ""), Role("hdl_cholesterol", "")),
    "ckd_epi_2021": (Role("creatinine", "mg/dL"), Role("age", "a"), Role(SEX, SEX)),
    "friedewald_ldl": (
        Role("total_cholesterol", "mg/dL"),
        Role("hdl_cholesterol", "mg/dL"),
        Role("triglycerides", "mg/dL"),
    ),
    "difference": (Role("minuend", ""), Role("subtrahend", "")),
    "ratio": (Role("numerator", "numerator"), Role("denominator", "numerator")),
}
"""What each equation takes. A unit of "numerator" means: whatever unit the numerator has.

Where `RESULT_QUANTITY` knows the equation, a role's name is the id of the quantity that its input must be of.
"""

RESULT_QUANTITY: Mapping[DerivedEquation, str] = {
    "body_mass_index": "body_mass_index",
    "non_hdl_cholesterol": "non_hdl_cholesterol",
    "ckd_epi_2021": "egfr_indexed",
    "friedewald_ldl": "ldl_cholesterol",
}
"""The quantity that comes out, where the equation fixes it."""

RESULT_UNIT: Mapping[DerivedEquation, str] = {
    "body_mass_index": "kg/m2",
    "ckd_epi_2021": "mL/min/{1.73_m2}",
    "friedewald_ldl": "mg/dL",
    "ratio": "1",
}
"""The unit in which an equation answers, where it is not the unit of its inputs."""


def role_names(equation: DerivedEquation) -> tuple[str, ...]:
    """The names of what the equation takes, in its own order."""
    return tuple(role.name for role in ROLES[equation])
