"""Kinds of statements in a coefficient file, in the order in which they are compared, and the words for its fields."""

from enum import StrEnum

from clinicalc.coefficients.file_types import FileStruct


class Aspect(StrEnum):
    """What a statement is about; the text is the plural that stands in "Same: …"."""

    IDENTITY = "id and version"
    TITLE = "title and outcome"
    EXCLUSIONS = "exclusions"
    QUESTIONS = "question texts and answers"
    UNITS = "units"
    FACTORS = "factors"
    RANGES = "ranges"
    DERIVED = "values worked out"
    EQUATIONS = "equations"
    COEFFICIENTS = "coefficients"
    INTERVALS = "printed intervals"
    HORIZONS = "horizons"
    BASELINES = "baselines"
    COVARIANCE = "covariance"
    REFERENCE_PERSON = "reference person"
    RECALIBRATIONS = "recalibrations"
    DECISION_POINTS = "decision points"
    CAUTIONS = "cautions"
    USE = "use"
    SOURCE = "source"
    ANCESTRY = "ancestry"
    UNCONFIRMED = "unconfirmed figures"
    EXAMPLES = "worked examples"
    POPULATION = "population"
    DOCUMENTATION = "documentation"


_LISTS = {
    "exclusions": Aspect.EXCLUSIONS,
    "predictors": Aspect.QUESTIONS,
    "derived": Aspect.DERIVED,
    "equations": Aspect.EQUATIONS,
    "recalibration_required": Aspect.RECALIBRATIONS,
    "recalibrations": Aspect.RECALIBRATIONS,
    "decision_points": Aspect.DECISION_POINTS,
    "use": Aspect.USE,
    "source": Aspect.SOURCE,
    "ancestry": Aspect.ANCESTRY,
    "unconfirmed": Aspect.UNCONFIRMED,
    "worked_examples": Aspect.EXAMPLES,
    "population": Aspect.POPULATION,
    "documentation": Aspect.DOCUMENTATION,
    "title": Aspect.TITLE,
    "outcome": Aspect.TITLE,
}
_QUESTION = {
    "unit": Aspect.UNITS,
    "quantity": Aspect.UNITS,
    "factor": Aspect.FACTORS,
    "possible": Aspect.RANGES,
    "usual": Aspect.RANGES,
    "derivation": Aspect.RANGES,
    "outside_derivation": Aspect.RANGES,
}
_EQUATION = {
    "terms": Aspect.COEFFICIENTS,
    "horizons": Aspect.HORIZONS,
    "uncertainty": Aspect.COVARIANCE,
    "reference_person": Aspect.REFERENCE_PERSON,
    "population": Aspect.POPULATION,
}
_BASELINE = dict.fromkeys(
    ("intercept", "baseline_survival", "mean_linear_predictor", "log_cumulative_hazard"), Aspect.BASELINES
)
_BY_TYPE: dict[str, dict[str, Aspect]] = {
    "ModelContent": _LISTS,
    "NumberPredictor": _QUESTION,
    "Derived": _QUESTION,
    "Equation": _EQUATION,
    "Term": {"interval": Aspect.INTERVALS},
    "Horizon": {**_BASELINE, "survival_interval": Aspect.INTERVALS},
    "Use": {"cautions": Aspect.CAUTIONS},
    "Plain": {"cautions": Aspect.CAUTIONS},
    "Choice": {"caution": Aspect.CAUTIONS},
}

_WORDS: dict[str, str] = {
    "ModelContent.ancestry": "updated from",
    "AncestryCohort.words": "who they were",
    "ModelContent.predictors": "questions",
    "ModelContent.derived": "values worked out",
    "ModelContent.recalibration_required": "no number without a recalibration",
    "ModelContent.unconfirmed": "unconfirmed figures",
    "Exclusion.ask": "question",
    "Exclusion.because": "why yes stops",
    "Choice.label": "words of the answer",
    "Term.coefficient": "",
    "Term.interval": "printed interval",
    "Term.fixed": "not estimated",
    "Equation.applies_when": "applies when",
    "Equation.uncertainty": "band",
    "Horizon.mean_linear_predictor": "mean of the linear predictor",
    "Horizon.survival_interval": "printed interval of survival",
    "AtCentre.variance": "variance at the centre",
    "Use.population": "for whom",
    "Plain.outcome": "outcome in plain words",
    "Plain.cautions": "cautions in plain words",
    "Use.plain": "",
    "Unconfirmed.at": "place",
    "NoBand.because": "why there is none",
}
_ANY: dict[str, str] = {
    "label": "question",
    "factor": "mass to molar factor",
    "possible": "possible range",
    "usual": "usual range",
    "derivation": "range of derivation",
    "outside_derivation": "outside the derivation",
    "modifiable": "may be modified",
    "may_be_missing": "may be left not measured",
    "valid_for": "may be used for",
    "within_person": "varies within a person",
    "meaning": "explanation",
    "loinc": "LOINC",
    "doi": "DOI",
    "sd": "standard deviation",
    "cv": "coefficient of variation",
    "from_memory": "from memory",
}


def aspect_of(part: FileStruct, field: str, above: Aspect) -> Aspect:
    """What the field of a part of the file is about; that of the part itself where the field is no exception."""
    return _BY_TYPE.get(type(part).__name__, {}).get(field, above)


def field_words(part: FileStruct, field: str) -> str:
    """The field in words; "" where the part's own name says enough."""
    own = _WORDS.get(f"{type(part).__name__}.{field}")
    if own is not None:
        return own
    if field == "derivation" and type(part).__name__ == "Source":
        return "made from"
    if field == "label" and type(part).__name__ in ("DecisionPoint", "Recalibration"):
        return "label"
    return _ANY.get(field, field.replace("_", " "))
