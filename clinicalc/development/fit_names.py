"""The fit's own names against the equation's terms: the intercept, the slopes, and the reference point."""

from collections.abc import Mapping

from msgspec import UnsetType

from clinicalc.coefficients.pointers import listed, quoted, suggest
from clinicalc.development.fit import FitKind
from clinicalc.development.fit_reading import FitReading
from clinicalc.development.named_figures import NamedVector

INTERCEPTS = ("(Intercept)", "Intercept", "intercept", "const", "_cons")


def find_intercept(reading: FitReading, kind: FitKind, vector: NamedVector) -> str | None:
    """The fit's name of its intercept; None where it has none, or where that is a problem."""
    stated = reading.table.intercept
    if not kind.has_intercept:
        found = [name for name in INTERCEPTS if name in vector.figures]
        if found or not isinstance(stated, UnsetType):
            reading.say("kind", f"a {kind} fit has no intercept; {quoted(found[0] if found else stated)} is one.")
        return None
    known = [stated] if not isinstance(stated, UnsetType) else list(INTERCEPTS)
    for name in known:
        if name in vector.figures:
            return name
    slopes = listed(map(quoted, vector.figures))
    reading.say(
        "coefficients",
        f"there is no intercept; the names are {slopes}. Write coef(fit) whole, or say which name it has: intercept = "
        '"...".',
    )
    return None


def match_terms(reading: FitReading, vector: NamedVector, intercept: str | None) -> dict[str, str]:
    """The term id of each of the fit's names, in the order of the equation's terms; problems where they do not pair."""
    given = reading.table.names
    names = {} if isinstance(given, UnsetType) else given
    slopes = [name for name in vector.figures if name != intercept and not (intercept is None and name in INTERCEPTS)]
    for name in names:
        if name not in slopes:
            reading.say("names", f"the fit has no coefficient {quoted(name)}.{suggest(name, slopes)}")
    ids = {name: names.get(name, name) for name in slopes}
    terms = reading.wanted.terms
    for id in dict.fromkeys(ids.values()):
        sources = [name for name, target in ids.items() if target == id]
        if len(sources) > 1:
            reading.say("names", f"{listed(map(quoted, sources))} are both said to be the term {quoted(id)}.")
    for name, id in ids.items():
        if id not in terms:
            how = "" if name in names else f' Where the two differ in name only: names = {{{quoted(name)} = "..."}}.'
            reading.say("coefficients", f"{quoted(name)} goes with no term of the equation.{suggest(id, terms)}{how}")
    for term in terms:
        if term not in ids.values():
            reading.say(
                "coefficients",
                f"the term {quoted(term)} has no coefficient in the fit. A coefficient that was not estimated stands"
                " in the description, with fixed = true.",
            )
    return {name: id for term in terms for name, id in ids.items() if id == term}


def take_reference(reading: FitReading, kind: FitKind, ids: Mapping[str, str]) -> dict[str, float] | None:
    """The reference point by the fit's names; None where none is stated."""
    stated = reading.table.reference
    if isinstance(stated, UnsetType):
        return None
    if stated == "zero" or not isinstance(stated, dict):
        return dict.fromkeys(ids, 0.0)
    by_id = {ids.get(name, name): value for name, value in stated.items()}
    terms = reading.wanted.terms
    absent = [term for term in terms if term not in by_id]
    if absent:
        reading.say(
            "reference", f"{listed(map(quoted, absent))} {'has' if len(absent) == 1 else 'have'} no value there."
        )
    for name in by_id:
        if name not in terms:
            reading.say("reference", f"there is no estimated term {quoted(name)}.{suggest(name, terms)}")
    return {name: by_id[id] for name, id in ids.items() if id in by_id}
