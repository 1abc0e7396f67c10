"""The shipped Fine–Gray example: the command makes it again, and its numbers are shares of people with the event."""

import json
import subprocess
import sys
from pathlib import Path

import numpy as np
import pytest

from clinicalc.assessment.assess import assess
from clinicalc.assessment.entry import entry_from_texts
from clinicalc.assessment.proof import load_model
from tests.example_models.test_tarnwick_cox import leaves

FOLDER = Path(__file__).parents[2] / "example_models"
SHIPPED = FOLDER / "tarnwick-cvd-10y-finegray.json"
STUDY = FOLDER / "tarnwick-cvd-10y-finegray.toml"
COX = FOLDER / "tarnwick-cvd-10y-cox.json"


def test_fit_makes_the_shipped_file_again(tmp_path: Path) -> None:
    path = tmp_path / SHIPPED.name
    # in a process of its own, whose number of threads it settles itself
    words = [sys.executable, "-m", "clinicalc", "fit", str(STUDY), "-o", str(path)]
    done = subprocess.run(words, capture_output=True, text=True)
    assert done.returncode == 0, done.stderr
    if path.read_bytes() == SHIPPED.read_bytes():  # the same libraries: the same bits
        return
    # another linear algebra library may choose another donor where two are equally near: figures are near, not equal
    here, there = (dict(leaves(json.loads(one.read_bytes()))) for one in (path, SHIPPED))
    assert here.keys() == there.keys()
    for place, said in there.items():
        if place.startswith("/model/equations/0/terms/") and place.endswith("/coefficient"):
            assert here[place] == pytest.approx(said, rel=0.05, abs=0.02), place


def test_competing_events_lower_every_number() -> None:
    """One minus Kaplan-Meier lies above the cumulative incidence, and so does a Cox number; most of all in the old."""
    ours, theirs = load_model(SHIPPED), load_model(COX)
    ratios = []
    for age in (40, 60, 79):
        texts = {
            "prior_cvd": "no",
            "age": str(age),
            "sex": "male",
            "systolic_bp": "140",
            "bp_treated": "no",
            "total_cholesterol": "5.2 mmol/L",
            "hdl_cholesterol": "1.3 mmol/L",
            "egfr": "80",
            "smoker": "no",
            "diabetes": "no",
        }
        found = [assess(model, entry_from_texts(texts)).estimate for model in (ours, theirs)]
        assert found[0] is not None
        assert found[1] is not None
        ratios.append(found[0].probability / found[1].probability)
    assert ratios[-1] < 1.0
    assert ratios[-1] == min(ratios)


def test_the_mean_number_is_the_share_who_had_the_event() -> None:
    """The documentation's Aalen-Johansen share by 10 years, 10.1 %, is met by numbers for a sample of the people."""
    lines = (FOLDER / "tarnwick-cohort.csv").read_text(encoding="utf-8").splitlines()
    names = lines[0].split(",")
    model = load_model(SHIPPED)
    answers = {"1": "yes", "0": "no"}
    numbers = []
    for line in lines[1::5]:
        row = dict(zip(names, line.split(","), strict=True))
        if "" in row.values() or row["smoker"] == "unknown":
            continue
        texts = {
            "prior_cvd": "no",
            "age": row["age"],
            "sex": "female" if row["sex"] == "F" else "male",
            "systolic_bp": row["sbp"],
            "bp_treated": answers[row["bp_tablets"]],
            "total_cholesterol": f"{row['chol']} mmol/L",
            "hdl_cholesterol": f"{row['hdl']} mmol/L",
            "egfr": row["egfr"],
            "smoker": row["smoker"],
            "diabetes": answers[row["diabetes"]],
        }
        estimate = assess(model, entry_from_texts(texts)).estimate
        assert estimate is not None
        numbers.append(estimate.probability)
    # the standard error of such a mean from some 870 people is 0.004
    assert len(numbers) > 800
    assert np.mean(numbers) == pytest.approx(0.101, abs=0.012)
