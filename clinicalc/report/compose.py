"""From an assessment to the contents of its print: what stands there, in which words and in which order."""

from datetime import datetime

from msgspec import UnsetType

from clinicalc import __version__
from clinicalc.assessment.fields import NumberField
from clinicalc.assessment.findings import FindingCode
from clinicalc.assessment.numerals import join_words
from clinicalc.assessment.result import Assessment, ValueLine
from clinicalc.assessment.shown_figures import shown_probability
from clinicalc.coefficients.fingerprint import group_fingerprint
from clinicalc.coefficients.schema import Recalibration
from clinicalc.report import phrases
from clinicalc.report.compose_beside import compose_further, compose_ruler
from clinicalc.report.contents import (
    Fact,
    FactList,
    Furniture,
    Pair,
    Prose,
    Remark,
    RemarkList,
    Result,
    Section,
    Sheet,
    SignatureLine,
)
from clinicalc.report.parts import USUAL_PARTS, PrintParts
from clinicalc.report.patient import compose_patient
from clinicalc.report.value_table import NOT_GIVEN, compose_values, mark

_SIGNATURE = SignatureLine(("Practitioner’s signature", "Name", "Date"))


def compose(
    assessment: Assessment,
    *,
    practice: str,
    printed_at: datetime,
    parts: PrintParts = USUAL_PARTS,
    letterhead: tuple[str, ...] = (),
) -> Sheet:
    """The whole print of one assessment; a patient's page is made only where there is a number."""
    label = assessment.label.strip() or phrases.NO_LABEL
    zone = phrases.zone_words(assessment.at)
    return Sheet(
        title=assessment.model.content.title,
        furniture=_furniture(assessment, label, practice.strip(), printed_at, letterhead),
        label=label,
        person=_person(assessment),
        assessed=f"assessed {phrases.moment_words(assessment.at)}{f' {zone}' if zone else ''}",
        result=_result(assessment),
        ruler=compose_ruler(assessment, parts),
        facts=FactList(tuple(_result_facts(assessment)), key=True),
        sections=(
            _findings(assessment),
            compose_values(assessment),
            Pair(_model(assessment), Section("Before you rely on it", (Prose(phrases.STANDING_CAUTIONS), _SIGNATURE))),
        ),
        further=compose_further(assessment, parts),
        patient=compose_patient(assessment) if parts.patient_page else None,
    )


def _furniture(
    assessment: Assessment, label: str, practice: str, printed_at: datetime, letterhead: tuple[str, ...]
) -> Furniture:
    content, fingerprint = assessment.model.content, assessment.model.fingerprint
    return Furniture(
        practice=practice,
        label=label,
        strip="" if assessment.vetting else phrases.NOT_VETTED,
        fingerprint_note=f"Fingerprint {group_fingerprint(fingerprint)}",
        caution=phrases.FIRST_PAGE_CAUTION,
        model=f"{content.title} {content.version}",
        fingerprint=group_fingerprint(fingerprint, 3),
        program=f"clinicalc {__version__}",
        printed=f"Printed {phrases.moment_words(printed_at)}",
        approval=phrases.vetting_words(assessment.vetting) if assessment.vetting else "",
        letterhead=tuple(line.strip() for line in letterhead),
    )


def _person(assessment: Assessment) -> str:
    """Age and sex as one line; says so where one of them is not given, not usable or not asked."""
    fields = assessment.model.by_id
    ages = [line for line in assessment.values if _is_age(fields[line.id])]
    sexes = [line for line in assessment.values if line.id == "sex"]
    parts = [_said(line) for line in (*ages[:1], *sexes)]
    absent = [name for name, lines in (("Age", ages), ("Sex", sexes)) if not lines]
    return " · ".join([*parts, *(f"{name} not asked by this model" for name in absent)])


def _is_age(field: object) -> bool:
    return isinstance(field, NumberField) and field.quantity.id == "age"


def _said(line: ValueLine) -> str:
    if not line.typed and not line.worked_out:
        return f"{line.label} {NOT_GIVEN}"
    if not line.used:
        return f"{line.label} {line.shown} (not used)"
    return f"{line.label} {line.shown or line.used}"


def _result(assessment: Assessment) -> Result:
    outcome = assessment.model.content.outcome
    estimate, span = assessment.estimate, assessment.span
    if estimate is None or span is None:
        stops, missing = len(assessment.stops), len(assessment.missing)
        reasons = [
            *([phrases.count_words(stops, "stop")] if stops else []),
            *([f"{phrases.count_words(missing, 'entry', 'entries')} still to be made"] if missing else []),
        ]
        sentences = (phrases.NO_NUMBER, f"{join_words(reasons)}.")
        return Result("No number", None, outcome, "", sentences, vetted=assessment.vetting is not None)
    short, detail = phrases.outcome_words(outcome)
    return Result(
        shown_probability(assessment),
        estimate.probability,
        f"{short} within {span.words}",
        detail,
        (phrases.say_people(assessment),),
        vetted=assessment.vetting is not None,
    )


def _result_facts(assessment: Assessment) -> list[Fact]:
    """The recalibration where one was used; the horizon where there is no number to say it with."""
    span, chosen = assessment.span, _chosen_recalibration(assessment)
    facts = [] if chosen is None else [Fact("Recalibration", (chosen.label,), strong=True)]
    if assessment.estimate is None or span is None:
        facts.insert(0, Fact("Horizon", (span.words if span else "not chosen",), strong=span is not None))
    return facts


def _chosen_recalibration(assessment: Assessment) -> Recalibration | None:
    offered = () if assessment.span is None else assessment.model.recalibrations_at(assessment.span)
    return next((r for r in offered if r.id == assessment.recalibration), None)


def _findings(assessment: Assessment) -> Section:
    findings = assessment.findings
    if not findings:
        return Section("No findings", (Prose(("Nothing was found to say about these values.",)),), whole=True)
    remarks = tuple(
        Remark(mark(number, finding), finding.grade.value.capitalize(), finding.message)
        for number, finding in enumerate(findings, 1)
    )
    return Section(phrases.count_words(len(findings), "finding"), (RemarkList(remarks),))


def _model(assessment: Assessment) -> Section:
    """What stands nowhere else on the page: title, version, fingerprint and vetting are in its foot and its strip."""
    content, chosen = assessment.model.content, _chosen_recalibration(assessment)
    use, source = content.use, content.source
    doi = () if isinstance(source.doi, UnsetType) else (f"DOI {source.doi}",)
    facts = [
        Fact("Recalibration", ("none",) if chosen is None else (chosen.label, chosen.source)),
        Fact("Source" if source.kind == "published" else "Source (local)", (source.citation, *doi)),
        Fact("Made for", (use.population, use.setting)),
        Fact("Not for", (_listed(use.not_for),)),
        Fact("Does not use", (_listed(use.not_used),)),
        # beside a number they stand among the findings
        *(() if _says_model_cautions(assessment) else (Fact("Its own cautions", use.cautions or ("none stated",)),)),
    ]
    return Section("The model", (FactList(tuple(facts)),))


def _says_model_cautions(assessment: Assessment) -> bool:
    return any(finding.code is FindingCode.MODEL for finding in assessment.findings)


def _listed(parts: tuple[str, ...]) -> str:
    return "; ".join(parts) if parts else "nothing stated"
