"""How much the name of a column is like what it may be the value of."""

import re
from collections.abc import Mapping
from difflib import SequenceMatcher
from types import MappingProxyType

from clinicalc.coefficients.schema import NumberPredictor, Predictor
from clinicalc.units.quantity import all_quantities
from clinicalc.units.unit import find_unit

LIKE = 0.6
"""From here on a name is like another."""

_WORDS = re.compile(r"[A-Z]+(?![a-z])|[A-Z]?[a-z]+|\d+")

_SHORT: Mapping[str, tuple[str, ...]] = MappingProxyType(
    {
        "age": ("age", "agey", "ageyears"),
        "total_cholesterol": ("chol", "tchol", "totchol", "tc", "cholesterol"),
        "hdl_cholesterol": ("hdl", "hdlc", "hdlchol"),
        "ldl_cholesterol": ("ldl", "ldlc", "ldlchol"),
        "non_hdl_cholesterol": ("nonhdl", "nonhdlc"),
        "triglycerides": ("tg", "trig", "trigs", "trigly"),
        "glucose": ("glu", "gluc", "glc", "fpg"),
        "hba1c": ("a1c", "hba1c", "hb1ac"),
        "creatinine": ("crea", "creat", "scr", "cr"),
        "egfr_indexed": ("egfr", "gfr", "ckdepi"),
        "urine_acr": ("acr", "uacr"),
        "systolic_bp": ("sbp", "sysbp", "systolic", "bpsys", "systbp"),
        "diastolic_bp": ("dbp", "diabp", "diastolic", "bpdia", "diasbp"),
        "heart_rate": ("hr", "pulse", "heartrate"),
        "body_mass_index": ("bmi",),
        "weight": ("wt", "weight", "bodyweight"),
        "height": ("ht", "height"),
        "waist": ("waist", "wc"),
        "haemoglobin": ("hb", "hgb", "haemoglobin", "hemoglobin"),
        "albumin": ("alb",),
        "bilirubin": ("bili", "tbil"),
        "sodium": ("na", "sodium"),
        "potassium": ("k", "potassium"),
        "platelets": ("plt", "platelet"),
        "white_cells": ("wbc", "wcc", "leuco", "leuko"),
        "c_reactive_protein": ("crp", "hscrp"),
        "cigarettes_per_day": ("cigsday", "cpd", "cigperday"),
        "sex": ("gender", "female", "male"),
        "diabetes": ("dm", "diab", "t2d", "t2dm"),
    }
)
"""Names that are usual in tables for a quantity, or for a question of that id.

Units and words such as "baseline" are taken off before.
"""

_BESIDE = frozenset({"baseline", "bl", "base", "at", "of", "the", "v1", "0", "1", "visit", "value", "val", "mean"})


def words_of(name: str) -> tuple[str, ...]:
    """The words in a name, small: "SBP_baseline" and "sbpBaseline" both have "sbp" and "baseline"."""
    return tuple(word.lower() for word in _WORDS.findall(name))


def bare_name(name: str) -> str:
    """A name without units and words that say when, run together: "chol_mmol/L" is "chol"."""
    head = re.sub(r"[(\[].*", "", name) or name
    parts = [part for part in re.split(r"[\s_.]+", head) if part]
    if len(parts) > 1 and find_unit(parts[-1]) is not None:
        parts = parts[:-1]
    words = [word for part in parts for word in words_of(part)]
    kept = [word for word in words if word not in _BESIDE] or words
    return "".join(kept)


def likeness(column: str, predictor: Predictor) -> float:
    """From 0 to 1: 1 where the names are the same, `LIKE` and more where one stands for the other."""
    bare = bare_name(column)
    if not bare:
        return 0.0
    names = {bare_name(predictor.id), bare_name(predictor.label)}
    if bare in names:
        return 1.0
    meant = predictor.quantity if isinstance(predictor, NumberPredictor) else predictor.id
    if bare in _SHORT.get(meant, ()):
        return 0.95
    if _names_another(bare, meant):
        return 0.0
    if any(_says(column, name) for name in (predictor.id, predictor.label)):
        return 0.8
    if any(len(bare) >= 3 and (name.startswith(bare) or bare.startswith(name)) for name in names if name):
        return 0.75
    close = max(SequenceMatcher(None, bare, name).ratio() for name in names)
    return close if close >= 0.8 else 0.5 * close


def _names_another(bare: str, meant: str) -> bool:
    """Whether a name is that of another quantity: LDL cholesterol is no total cholesterol, however alike they are."""
    others = (entry.id for entry in all_quantities() if entry.id != meant)
    return any(bare == bare_name(other) or bare in _SHORT.get(other, ()) for other in others)


def _says(column: str, name: str) -> bool:
    """Whether every word of the column is one of the name, or the initials of some: "bp_tablets" of a longer label."""
    words, known = [word for word in words_of(column) if word not in _BESIDE], words_of(name)
    runs = (known[start:end] for start in range(len(known)) for end in range(start + 2, len(known) + 1))
    initials = {"".join(word[0] for word in run) for run in runs}
    return len(words) > 1 and all(word in known or word in initials for word in words)
