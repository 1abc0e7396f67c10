"""The assessment as plain text: for the command line, and for copying."""

from clinicalc.assessment.findings import Finding, FindingCode
from clinicalc.assessment.numerals import percent, percent_range
from clinicalc.assessment.result import Assessment, ValueLine
from clinicalc.coefficients.fingerprint import group_fingerprint
from clinicalc.operations.folding import fold
from clinicalc.report import phrases


def summarise(assessment: Assessment) -> str:
    """The whole assessment in reading order, ending in a newline."""
    model = assessment.model
    blocks = [
        [
            f"{model.content.title}, version {model.content.version}",
            f"Fingerprint {group_fingerprint(model.fingerprint, 3)}",
        ],
        [f"{phrases.NOT_VETTED}."],
        number_lines(assessment),
        finding_lines(assessment.findings),
        _values(assessment.values),
    ]
    folded = ([part for line in block for part in fold(line)] for block in blocks if block)
    return "\n\n".join("\n".join(lines) for lines in folded) + "\n"


def people_sentence(assessment: Assessment) -> str:
    """The probability as a count of people with these values; "" where there is no number."""
    estimate, span = assessment.estimate, assessment.span
    if estimate is None or span is None:
        return ""
    equation = next(e for e in assessment.model.equations if e.content.id == assessment.equation)
    censored = equation.content.competing_events.handled == "censored"
    return phrases.people_sentence(estimate.probability, span.words, others_censored=censored)


def band_sentence(assessment: Assessment) -> str:
    """The band with its level, or the reason why there is none; "" where there is no number."""
    estimate = assessment.estimate
    if estimate is None:
        return ""
    if estimate.band is None:
        return f"No band: {estimate.band_absent_because}"
    return f"{phrases.level_words(estimate.band.level)} band {percent_range(estimate.band.lower, estimate.band.upper)}."


def recalibration_label(assessment: Assessment) -> str:
    """The label of the recalibration that was used, "" for none."""
    chosen = [r.label for r in assessment.model.content.recalibrations if r.id == assessment.recalibration]
    return chosen[0] if chosen else ""


def progress_sentence(assessment: Assessment) -> str:
    """Why there is no number: what stops it, or how many entries are still to go and which comes next."""
    labels = {field.id: field.label for field in assessment.model.fields}
    if any(stop.code in (FindingCode.EXCLUDED, FindingCode.OUTSIDE_DERIVATION) for stop in assessment.stops):
        return "This model does not answer for this patient."
    if assessment.stops:
        first = assessment.stops[0].field
        return f"{labels.get(first, first.capitalize())} stops it."
    if not assessment.missing:
        return ""
    entries = phrases.count_words(len(assessment.missing), "entry", "entries")
    return f"{entries} to go. Next: {labels[assessment.missing[0].field]}"


def number_lines(assessment: Assessment) -> list[str]:
    """Outcome, number at its horizon, people, recalibration and band; or why there is no number."""
    estimate, span = assessment.estimate, assessment.span
    outcome = assessment.model.content.outcome
    within = "" if span is None else f" within {span.words}"
    if estimate is None:
        return [outcome, f"No number. {progress_sentence(assessment)}"]
    lines = [outcome, f"{percent(estimate.probability, estimate.complement)}{within}", people_sentence(assessment)]
    label = recalibration_label(assessment)
    if label:
        lines.append(f"Recalibration: {label}.")
    lines.append(band_sentence(assessment))
    if estimate.band is not None:
        lines.append(phrases.BAND_MEANING)
    return lines


def finding_lines(findings: tuple[Finding, ...]) -> list[str]:
    """Each finding with its grade, in reading order; what is missing only where the model may still answer."""
    # what is still to be typed does not matter for a patient whom the model does not answer for
    excluded = any(finding.code is FindingCode.EXCLUDED for finding in findings)
    shown = [f for f in findings if not (excluded and f.code is FindingCode.MISSING)]
    return [f"{finding.grade.value.capitalize()}: {finding.message}" for finding in shown]


def _values(values: tuple[ValueLine, ...]) -> list[str]:
    rows = [line for line in values if line.typed or line.worked_out]
    width = max((len(line.label) for line in rows if not line.exclusion), default=0)
    lines = []
    for line in rows:
        shown = line.shown or f"{line.used} (worked out)"
        used = f"  used as {line.used}" if line.shown and line.used and line.used != line.shown else ""
        dated = f"  of {line.dated.isoformat()}" if line.dated else ""
        lines.append(f"{line.label} {shown}" if line.exclusion else f"{line.label:<{width}}  {shown}{used}{dated}")
    return lines
