"""The people of a validation for its report: who they are, where everybody in the file went, what lay outside."""

from collections.abc import Iterator

from clinicalc.assessment.model import Model
from clinicalc.assessment.numerals import EN_DASH
from clinicalc.operations.validation_words import by_words, name_field, share_of_all
from clinicalc.report.contents import Column, Fact, FactList, FlowPart, Prose, Row, Section, Table
from clinicalc.report.flow_figure import Flow, Leaving, Stage
from clinicalc.validation.validated import HorizonValidation, PeopleCount, Validation

_EACH_ONCE = "Each person is counted once, under the first that holds."
_LACKS_SEVERAL = (
    "Somebody may lack several values, or lie outside of several limits, and is then counted under each of them."
    " “Missing” and “refused” are people left out for that and for nothing before it; “outside of the derivation range”"
    " are people used, to whom the program would give a number with a caution."
)


def tell_people(validation: Validation, model: Model, file: str) -> Iterator[Section]:
    """Who they are, and the way from the file into the validation; `file` is its name, "" where nobody says."""
    use = model.content.use
    facts = [
        Fact("Their file", (file,)) if file else None,
        *(Fact(f"Seen{by_words(each.span)}", (_seen(each),)) for each in validation.horizons),
        Fact("Made for", (use.population, use.setting)),
        Fact("Not for", ("; ".join(use.not_for),)) if use.not_for else None,
    ]
    yield Section(
        "These people, and whom the model is for", (FactList(tuple(fact for fact in facts if fact is not None)),)
    )
    flow = draw_up_way(validation.count, model)
    yield Section("Where everybody went", (FlowPart(flow), Prose((_EACH_ONCE,))), whole=True)


def draw_up_way(count: PeopleCount, model: Model) -> Flow:
    """From everybody in the file to those used."""
    excluded = tuple(
        Leaving(people, f"outside of the model: yes to “{name_field(model, id)}”")
        for id, people in count.excluded.items()
        if people
    )
    others = (
        Leaving(count.not_covered, "to whom no equation applies, or of whom that is not known"),
        Leaving(count.no_outcome, "of whom it is not known whether they had the event"),
        Leaving(count.missing, "who lack a value that the model needs"),
        Leaving(count.refused, "with a value at which the model gives no number"),
    )
    leaving = (*excluded, *(one for one in others if one.count))
    return Flow((Stage(count.in_file, "people in the file", leaving), Stage(count.used, "used")))


def tell_left_out(validation: Validation, model: Model) -> Iterator[Section]:
    """What was missing and what lay outside of the model's limits, by predictor."""
    count = validation.count
    order = [predictor.id for predictor in model.content.predictors]
    order += [derived.id for derived in model.content.derived]
    named = dict.fromkeys([*order, *count.missing_by, *count.refused_by, *count.beyond])
    rows = []
    for id in named:
        missing, refused, beyond = (by.get(id, 0) for by in (count.missing_by, count.refused_by, count.beyond))
        if missing or refused or beyond:
            cells = (_count(missing, count.in_file), _count(refused, count.in_file), _count(beyond, count.used))
            rows.append(Row((name_field(model, id), *cells)))
    heading = "Missing, and outside of the model’s limits"
    if not rows:
        nothing = "Nobody lacked a value, and no value lay outside of the limits or of the derivation range."
        yield Section(heading, (Prose((nothing,)),), whole=True)
        return
    columns = (
        Column("value", 0.0, 186.0),
        Column("missing, of all in the file", 186.0, 104.0, at_end=True),
        Column("refused, of all in the file", 296.0, 104.0, at_end=True),
        Column("outside of the derivation range, of those used", 406.0, 104.0, at_end=True),
    )
    yield Section(heading, (Prose((_LACKS_SEVERAL,), keep=True), Table(columns, tuple(rows), small=True)))


def _count(people: int, of: int) -> str:
    return f"{people:,} ({share_of_all(people / of)})" if people and of else EN_DASH


def _seen(horizon: HorizonValidation) -> str:
    other = f"; another event came first in {horizon.competing:,}" if horizon.competing else ""
    return f"{horizon.events:,} of {horizon.people:,} people had the event{other}"
