"""What the parts of a list in a coefficient file are called: the name by which two versions are set side by side."""

from collections import Counter
from collections.abc import Sequence

from clinicalc.coefficients.file_types import FileStruct
from clinicalc.coefficients.schema import (
    AtCentre,
    Choice,
    ChoicePredictor,
    DecisionPoint,
    Derived,
    Documentation,
    Equation,
    Exclusion,
    Horizon,
    ModelContent,
    NumberPredictor,
    Recalibration,
    Term,
    Unconfirmed,
    WorkedExample,
    YesNoPredictor,
)
from clinicalc.coefficients.spans import HasSpan, span_of


def name_items(items: Sequence[FileStruct]) -> list[tuple[str, str]]:
    """For each part its name, which no other part of the list has, and the words for it."""
    seen: Counter[str] = Counter()
    named = []
    for item in items:
        name, words = _name(item)
        seen[name] += 1
        again = f" ({seen[name]})" if seen[name] > 1 else ""
        named.append((name + again, words + again))
    return named


_SPAN = frozenset({"years", "time", "unit"})


def said_by_name(item: FileStruct) -> frozenset[str]:
    """The fields that a part's name already says: where one of them differs, it is another part."""
    match item:
        case Recalibration():
            return _SPAN | {"id"}
        case Horizon() | AtCentre():
            return _SPAN
        case WorkedExample():
            return _SPAN | {"values", "recalibration"}
        case DecisionPoint():
            return frozenset({"label"})
        case Unconfirmed():
            return frozenset({"at"})
        case Documentation():
            return frozenset({"item"})
        case ModelContent():
            return frozenset()
    return frozenset({"id"})


def say_values(example: WorkedExample) -> str:
    """The values of a worked example as typed, in one line: "age 61, sex female (10 years)"."""
    typed = ", ".join(f"{id} {' '.join(example.values[id].split())}" for id in sorted(example.values))
    recalibration = example.recalibration if isinstance(example.recalibration, str) else ""
    return f"{typed} ({_span(example)}{f', recalibration {recalibration}' if recalibration else ''})"


def _name(item: FileStruct) -> tuple[str, str]:
    match item:
        case Equation():
            return item.id, f"equation {item.id}"
        case Term():
            return item.id, f"coefficient {item.id}"
        case Horizon() | AtCentre():
            return _span(item), _span(item)
        case Exclusion():
            return item.id, f"exclusion {item.id}"
        case NumberPredictor() | ChoicePredictor() | YesNoPredictor() | Derived():
            return item.id, item.label
        case Choice():
            return item.id, f"answer {item.id}"
        case Recalibration():
            return f"{item.id} {_span(item)}", f"recalibration {item.id}, {_span(item)}"
        case DecisionPoint():
            return item.label, f"decision point “{item.label}”"
        case WorkedExample():
            return say_values(item), f"worked example {say_values(item)}"
        case Unconfirmed():
            return item.at, f"unconfirmed {item.at or 'whole model'}"
        case Documentation():
            return item.item, item.item
    id = getattr(item, "id", "")
    return id, id


def _span(part: HasSpan) -> str:
    span = span_of(part)
    return "" if span is None else span.words
