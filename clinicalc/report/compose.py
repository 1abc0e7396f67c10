"""From an assessment to the contents of its print: what stands there, in which words and in which order."""

from datetime import datetime

from msgspec import UnsetType

from clinicalc import __version__
from clinicalc.assessment.fields import NumberField
from clinicalc.assessment.findings import FindingCode, Grade
from clinicalc.assessment.numerals import join_words, percent
from clinicalc.assessment.result import Assessment, Estimate, ValueLine
from clinicalc.coefficients.fingerprint import group_fingerprint
from clinicalc.coefficients.schema import Recalibration
from clinicalc.report import phrases
from clinicalc.report.contents import (
    Column,
    Fact,
    FactList,
    Furniture,
    Prose,
    Remark,
    RemarkList,
    Result,
    Row,
    Section,
    Sheet,
    SignatureLine,
    Table,
)

_WEIGHT = {Grade.STOP: 0, Grade.CAUTION: 1, Grade.NOTE: 2}
_NOT_GIVEN = "not given"
_NOTHING = "–"
_SIGNATURE = SignatureLine(("Practitioner’s signature", "Name", "Date"))


def compose(assessment: Assessment, *, practice: str, printed_at: datetime) -> Sheet:
    """The whole print of one assessment."""
    content = assessment.model.content
    label = assessment.label.strip() or phrases.NO_LABEL
    zone = phrases.zone_words(assessment.at)
    return Sheet(
        title=content.title,
        furniture=Furniture(
            practice=practice.strip(),
            label=label,
            reader="For the clinician",
            strip=phrases.NOT_VETTED,
            model=f"{content.title} {content.version}",
            fingerprint=group_fingerprint(assessment.model.fingerprint, 3),
            program=f"clinicalc {__version__}",
            printed=f"Printed {phrases.moment_words(printed_at)}",
        ),
        label=label,
        person=_person(assessment),
        assessed=f"assessed {phrases.moment_words(assessment.at)}{f' {zone}' if zone else ''}",
        result=_result(assessment),
        facts=FactList(tuple(_result_facts(assessment)), key=True),
        sections=(
            _findings(assessment),
            *_values(assessment),
            _model(assessment),
            Section("Before you rely on it", (Prose(phrases.STANDING_CAUTIONS), _SIGNATURE), whole=True),
        ),
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
        return f"{line.label} {_NOT_GIVEN}"
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
        return Result("No number", "", outcome, (phrases.NO_NUMBER, f"{join_words(reasons)}."))
    figure, sign = percent(estimate.probability, estimate.complement).rsplit("%", 1)[0], "%"
    sentence = phrases.people_sentence(
        estimate.probability, span.words, others_censored=_handled(assessment) == "censored"
    )
    return Result(figure, sign, outcome, (sentence,))


def _handled(assessment: Assessment) -> str:
    """What the fit of the equation that answered did with competing events."""
    equations = assessment.model.content.equations
    return next((e.competing_events.handled for e in equations if e.id == assessment.equation), "")


def _result_facts(assessment: Assessment) -> list[Fact]:
    """The number in words, its band and its recalibration; the horizon alone where there is no number."""
    estimate, span = assessment.estimate, assessment.span
    if estimate is None or span is None:
        horizon = Fact("Horizon", (span.words if span else "not chosen",), strong=span is not None)
        return [horizon, _recalibration(assessment)]
    # the large number is two texts to a program that reads the page; here it is one, with its horizon
    number = f"{percent(estimate.probability, estimate.complement)} within {span.words}"
    return [
        Fact("Probability", (number,), strong=True),
        _band(assessment.level, estimate),
        _recalibration(assessment),
    ]


def _band(level: float, estimate: Estimate) -> Fact:
    name = f"{phrases.level_words(level)} band"
    if estimate.band is None:
        return Fact(name, ("No band", estimate.band_absent_because), strong=True)
    figures, basis = phrases.band_words(estimate.band)
    return Fact(f"{phrases.level_words(estimate.band.level)} band", (figures, f"{phrases.BAND_MEANING} {basis}"), True)


def _recalibration(assessment: Assessment) -> Fact:
    offered = () if assessment.span is None else assessment.model.recalibrations_at(assessment.span)
    chosen: Recalibration | None = next((r for r in offered if r.id == assessment.recalibration), None)
    if chosen is None:
        return Fact("Recalibration", ("none",))
    return Fact("Recalibration", (chosen.label, chosen.source), strong=True)


def _findings(assessment: Assessment) -> Section:
    findings = assessment.findings
    if not findings:
        return Section("No findings", (Prose(("Nothing was found to say about these values.",)),), whole=True)
    remarks = tuple(
        Remark(str(number), finding.grade.value.capitalize(), _WEIGHT[finding.grade], finding.message)
        for number, finding in enumerate(findings, 1)
    )
    return Section(phrases.count_words(len(findings), "finding"), (RemarkList(remarks),))


def _values(assessment: Assessment) -> tuple[Section, ...]:
    """The questions that rule a patient out, and every other value as typed and as used."""
    asked = [line for line in assessment.values if line.exclusion]
    others = [line for line in assessment.values if not line.exclusion]
    questions = tuple(Row((line.label, _typed(line), _marks(assessment, line))) for line in asked)
    rows = tuple(Row((line.label, _typed(line), line.used or _NOTHING, _marks(assessment, line))) for line in others)
    question_columns = (
        Column("asked", 0, 322),
        Column("answered", 336, 116, strong=True),
        Column("finding", 464, 46),
    )
    columns = (
        Column("", 0, 186),
        Column("as typed", 198, 126, strong=True),
        Column("as used, in the file’s unit", 336, 116),
        Column("finding", 464, 46),
    )
    return (
        *((Section("Questions that rule a patient out", (Table(question_columns, questions),)),) if asked else ()),
        Section("Values", (Table(columns, rows),)),
    )


def _typed(line: ValueLine) -> str:
    """The value as typed with its unit; a derived value says whether it was typed or worked out."""
    if line.worked_out:
        return "worked out"
    if not line.typed:
        return _NOT_GIVEN
    origin = " (typed)" if line.derived else ""
    dated = (
        f", of {phrases.day_words(datetime(line.dated.year, line.dated.month, line.dated.day))}" if line.dated else ""
    )
    unused = "" if line.used else " (not used)"
    return f"{line.shown}{origin}{dated}{unused}"


def _marks(assessment: Assessment, line: ValueLine) -> str:
    """The numbers of the findings about a value."""
    return ", ".join(str(number) for number, f in enumerate(assessment.findings, 1) if f.field == line.id)


def _model(assessment: Assessment) -> Section:
    content = assessment.model.content
    use, source = content.use, content.source
    doi = () if isinstance(source.doi, UnsetType) else (f"DOI {source.doi}",)
    facts = [
        Fact("Title and version", (f"{content.title}, version {content.version}",), strong=True),
        Fact("Fingerprint", (group_fingerprint(assessment.model.fingerprint),)),
        Fact("Vetting", (phrases.NOT_VETTED,), strong=True),
        Fact("Source" if source.kind == "published" else "Source (local)", (source.citation, *doi)),
        Fact("Made for", (use.population, use.setting)),
        Fact("Not for", (_listed(use.not_for),)),
        Fact("Does not use", (_listed(use.not_used),)),
        # beside a number they stand among the findings
        *(() if _says_model_cautions(assessment) else (Fact("Its own cautions", use.cautions or ("none stated",)),)),
    ]
    return Section("The model", (FactList(tuple(facts)),), whole=True)


def _says_model_cautions(assessment: Assessment) -> bool:
    return any(finding.code is FindingCode.MODEL for finding in assessment.findings)


def _listed(parts: tuple[str, ...]) -> str:
    return "; ".join(parts) if parts else "nothing stated"
