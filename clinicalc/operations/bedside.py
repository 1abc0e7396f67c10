"""One model and one patient: open the file, take the entries, choose horizon and recalibration, assess."""

from collections.abc import Iterable, Iterator, Mapping, Sequence
from datetime import datetime
from difflib import get_close_matches
from pathlib import Path

from clinicalc.assessment.assess import assess
from clinicalc.assessment.changeable import why_unchangeable
from clinicalc.assessment.choices import DEFAULT_LEVEL
from clinicalc.assessment.entry import PatientEntry, Typed, entry_from_texts
from clinicalc.assessment.model import Model
from clinicalc.assessment.proof import load_model, load_model_bytes
from clinicalc.assessment.result import Assessment
from clinicalc.assessment.vetting import Vetting
from clinicalc.coefficients.spans import Span
from clinicalc.errors import UsageError
from clinicalc.resources import read_shipped
from clinicalc.settings import PracticePoint
from clinicalc.units.quoting import quote
from clinicalc.units.reading import Reading, read_value


def open_model(path: Path) -> Model:
    """The proved model of a coefficient file. Raises CoefficientFileRefused with every problem found."""
    return load_model(path)


def open_example(name: str) -> Model:
    """The proved model of a shipped coefficient file, such as "tarnwick-cvd-10y.json"."""
    return load_model_bytes(read_shipped(f"example_models/{name}"), name)


def assess_patient(
    model: Model,
    entry: PatientEntry,
    *,
    span: Span | None = None,
    recalibration: str | None = None,
    level: float = DEFAULT_LEVEL,
    at: datetime | None = None,
    practice_points: Sequence[PracticePoint] = (),
    matching_age: bool = False,
    vetting: Vetting | None = None,
) -> Assessment:
    """The assessment of one entry; never raises on what a person typed about the patient."""
    return assess(
        model,
        entry,
        span=span,
        recalibration=recalibration,
        level=level,
        at=at,
        practice_points=practice_points,
        matching_age=matching_age,
        vetting=vetting,
    )


def take_texts(model: Model, texts: Iterable[str], label: str = "") -> PatientEntry:
    """The entry from words such as "age=61". Raises UsageError for an unknown or repeated key, or no "="."""
    known = [field.id for field in model.fields]
    taken: dict[str, str] = {}
    for id, text in _split_words(texts, "value", "age=61"):
        if id not in known:
            raise UsageError(
                f"{quote(id)} is not a field of this model.",
                why=_hint(id, known),
                do=f"Its fields are {', '.join(known)}.",
            )
        taken[id] = text
    return entry_from_texts(taken, label)


def take_changes(model: Model, texts: Iterable[str]) -> Mapping[str, Typed]:
    """The changed values of a comparison from words such as "smoker=no", for `PatientEntry.changes`.

    Raises UsageError for no "=", a key given twice, no text after the sign, and a field that a comparison cannot
    change; whether the text can be used is for the assessment to say.
    """
    taken: dict[str, Typed] = {}
    for id, text in _split_words(texts, "change", "smoker=no"):
        reason = why_unchangeable(model, id)
        if reason:
            raise UsageError(reason)
        if not text.strip():
            raise UsageError(f"the change of {id} has no value.", do=f"Write the changed value after it: {id}=…")
        taken[id] = Typed(text)
    return taken


def _split_words(words: Iterable[str], kind: str, example: str) -> Iterator[tuple[str, str]]:
    """Field and text of words such as "age=61". Raises UsageError for a field given twice, or no "="."""
    seen: set[str] = set()
    for word in words:
        id, mark, text = word.partition("=")
        id = id.strip()
        if not mark:
            raise UsageError(
                f"{quote(word)} is not a {kind}.", do=f"Write the field, an equals sign and the value: {example}."
            )
        if id in seen:
            raise UsageError(f"{id} is given twice.", do="Give each field once.")
        seen.add(id)
        yield id, text


def choose_span(model: Model, *, years: float | None = None, time: str | None = None) -> Span:
    """The model's horizon that was asked for, or its only one. Raises UsageError where it has no such horizon."""
    offered = ", ".join(span.words for span in model.spans)
    if years is not None and time is not None:
        raise UsageError("a horizon is given both in years and as a time.", do="Give one of the two.")
    if years is None and time is None:
        if len(model.spans) == 1:
            return model.spans[0]
        raise UsageError(
            f"this model answers for several time spans ({offered}).", do="Say which, with --years or --time."
        )
    asked = Span(years) if years is not None else _read_span(time or "")
    if asked not in model.spans:
        same = [span.words for span in model.spans if abs(span.days - asked.days) < 1]
        hint = f"Write it as the file does: {same[0]}." if same else ""
        raise UsageError(f"this model has no horizon of {asked.words}.", why=f"It answers for {offered}.", do=hint)
    return asked


def choose_recalibration(model: Model, span: Span, id: str | None) -> str | None:
    """The id of a recalibration that the model offers at this horizon. Raises UsageError for an unknown one."""
    if id is None:
        return None
    offered = [recalibration.id for recalibration in model.recalibrations_at(span)]
    if id in offered:
        return id
    if not offered:
        raise UsageError(f"this model offers no recalibrations for {span.words}.", do="Leave the option out.")
    raise UsageError(
        f"{quote(id)} is not a recalibration of this model.",
        why=_hint(id, offered),
        do=f"It offers {', '.join(offered)}.",
    )


def _read_span(text: str) -> Span:
    reading = read_value(text)
    if not isinstance(reading, Reading) or reading.unit is None:
        raise UsageError(f"{quote(text)} is not a time span.", do='Write a number and a unit of time, such as "90 d".')
    return Span(reading.number, reading.unit)


def _hint(word: str, known: list[str]) -> str:
    close = get_close_matches(word, known, n=1)
    return f"Did you mean {close[0]}?" if close else ""
