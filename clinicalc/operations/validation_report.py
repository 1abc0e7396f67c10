"""The report of a validation as the contents of a print: the verdict, the people, how the model does, what was done."""

from collections.abc import Iterator
from dataclasses import dataclass

from clinicalc.assessment.model import Model
from clinicalc.assessment.numerals import EN_DASH
from clinicalc.development.package import Package
from clinicalc.operations.validation_report_decisions import tell_decisions
from clinicalc.operations.validation_report_figures import tell_figures, tell_key_figures
from clinicalc.operations.validation_report_groups import tell_groups
from clinicalc.operations.validation_report_methods import NO_APPROVAL, tell_methods, tell_silence
from clinicalc.operations.validation_report_people import tell_left_out, tell_people
from clinicalc.operations.validation_report_update import tell_update
from clinicalc.operations.validation_words import FAULT_NAMES, by_words, name_field, name_level, p_words
from clinicalc.operations.vetting_furniture import furnish
from clinicalc.report.contents import Column, Prose, Row, Section, Table
from clinicalc.report.vetting_sheet import VettingSheet
from clinicalc.validation.updated import Update
from clinicalc.validation.validated import Fault, Validation

NOT_FOR_PATIENTS = "A validation of a model in some people: nothing in it is a number for a patient"
_JUDGED = "Each p value was judged by a limit that holds for all that was looked for together."


@dataclass(frozen=True, slots=True, eq=False)
class ReportedUpdate:
    """An update for the report: its figures, the file made of it (None where none was), and what that is called.

    `after` is the new version in the same people.
    """

    update: Update
    package: Package | None = None
    file: str = ""
    after: Validation | None = None


@dataclass(frozen=True, slots=True, eq=False)
class ReportedValidation:
    """What is reported: a validation of `model`; `file` is what the file of people is called, "" where nobody says.

    `practice_points` are the decision points that the practice acts at: they stand on wash.
    """

    validation: Validation
    model: Model
    file: str = ""
    practice_points: tuple[float, ...] = ()
    updated: ReportedUpdate | None = None


def compose_validation_report(reported: ReportedValidation) -> VettingSheet:
    """Everything that is known of a validation, and of an update where there is one."""
    validation = reported.validation
    named = f"{validation.title} {validation.version}"
    return VettingSheet(
        kind="Report of a validation",
        title=named,
        about=f"Report of a validation: {named}",
        lines=tuple(_head(reported)),
        says=validation.verdict[0] if validation.verdict else "",
        sections=tuple(_sections(reported)),
        furniture=furnish(
            named,
            "",
            model=named,
            fingerprint=validation.fingerprint,
            strip=NOT_FOR_PATIENTS,
            caution=NO_APPROVAL,
        ),
    )


def _head(reported: ReportedValidation) -> Iterator[str]:
    validation = reported.validation
    people = validation.cohort.rstrip(".") or "people of whom nobody says who they are"
    yield f"In {validation.count.used:,} people: {people}."
    yield f"Outcome: {reported.model.content.outcome}."
    if validation.recalibration:
        yield f"With the recalibration “{_recalibration(reported)}” of the file."


def _recalibration(reported: ReportedValidation) -> str:
    wanted = reported.validation.recalibration
    found = (each.label for each in reported.model.content.recalibrations if each.id == wanted)
    return next(found, wanted)


def _sections(reported: ReportedValidation) -> Iterator[Section]:
    validation, model = reported.validation, reported.model
    yield _verdict(reported)
    yield from (tell_key_figures(horizon) for horizon in validation.horizons)
    yield from tell_people(validation, model, reported.file)
    yield from tell_left_out(validation, model)
    for horizon in validation.horizons:
        yield from tell_figures(horizon)
        yield from tell_decisions(horizon, reported.practice_points)
    yield from tell_groups(validation, model)
    if reported.updated is not None:
        updated = reported.updated
        yield from tell_update(model, updated.update, updated.package, updated.file, (validation, updated.after))
    if validation.remarks:
        yield Section("Remarks", (Prose(validation.remarks),))
    yield tell_methods(validation)
    yield tell_silence()


def _verdict(reported: ReportedValidation) -> Section:
    """What is wrong, by name: the sentences after the first, and what each fault was judged by."""
    validation = reported.validation
    said = " ".join(validation.verdict)
    sentences = [*validation.verdict[1:], *(one.sentence for one in validation.faults if one.sentence not in said)]
    if not validation.faults:
        bare = () if sentences else (_none_found(validation),)  # else the verdict has said what would go unseen
        return Section("What was found", (Prose((*sentences, *bare)),), whole=True)
    columns = (Column("what is wrong", 0.0, 200.0), Column("where", 206.0, 214.0), Column("p value", 426.0, 84.0))
    rows = (Row((FAULT_NAMES[one.kind], _where(reported, one), p_words(one.p))) for one in validation.faults)
    return Section(
        "What was found", (Prose((*sentences, _JUDGED), keep=True), Table(columns, tuple(rows), small=True)), whole=True
    )


def _none_found(validation: Validation) -> str:
    """What a clean verdict rests on."""
    events = max((horizon.events for horizon in validation.horizons), default=0)
    span = validation.horizons[-1].span if validation.horizons else None
    return (
        f"No fault found is not the same as no fault: in {validation.count.used:,} people with {events:,} events"
        f"{by_words(span)} smaller ones would go unseen. The limits below show how much room there is for them."
    )


def _where(reported: ReportedValidation, fault: Fault) -> str:
    if not fault.at:
        return "everybody"
    name = name_field(reported.model, fault.at)
    return f"{name}: {name_level(reported.model, fault.at, fault.level)}" if fault.level else name or EN_DASH
