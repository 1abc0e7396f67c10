"""The demonstration: an invented patient of the invented Tarnwick practices, with a shipped file."""

from dataclasses import dataclass

from clinicalc.assessment.entry import PatientEntry, entry_from_texts
from clinicalc.assessment.model import Model
from clinicalc.operations.bedside import open_example

DEMO_FILE = "tarnwick-cvd-10y.json"


@dataclass(frozen=True, slots=True, eq=False)
class DemoCase:
    """A model and one entry for it."""

    model: Model
    entry: PatientEntry


def demo_case() -> DemoCase:
    """The shipped Tarnwick model with an invented woman of 61."""
    texts = {
        "prior_cvd": "no",
        "age": "61",
        "sex": "female",
        "systolic_bp": "142",
        "bp_treated": "no",
        "total_cholesterol": "5.2 mmol/L",
        "hdl_cholesterol": "1.3 mmol/L",
        "smoker": "yes",
        "diabetes": "no",
    }
    return DemoCase(open_example(DEMO_FILE), entry_from_texts(texts, label="Invented patient, Tarnwick Northgate"))
