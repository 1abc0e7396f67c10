"""The assessment as plain text: for the command line, and for copying."""

from clinicalc.assessment.findings import Finding, FindingCode
from clinicalc.assessment.result import Assessment, ValueLine
from clinicalc.assessment.shown_figures import shown_band, shown_probability
from clinicalc.coefficients.fingerprint import group_fingerprint
from clinicalc.operations.beside_lines import (
    comparison_lines,
    decision_lines,
    matching_age_lines,
    share_lines,
    spread_lines,
)
from clinicalc.operations.folding import fold
from clinicalc.report import phrases


def summarise(assessment: Assessment, *, with_shares: bool = False) -> str:
    """The whole assessment in reading order, ending in a newline; shares only where asked for.

    What a rebuilt band assumes is not listed: the band's line says where it is.
    """
    model = assessment.model
    blocks = [
        [
            f"{model.content.title}, version {model.content.version}",
            f"Fingerprint {group_fingerprint(model.fingerprint, 3)}",
        ],
        [f"{phrases.vetting_words(assessment.vetting)}."],
        number_lines(assessment),
        decision_lines(assessment),
        comparison_lines(assessment),
        share_lines(assessment) if with_shares else [],
        matching_age_lines(assessment),
        finding_lines(assessment.findings),
        _values(assessment.values),
    ]
    folded = ([part for line in block for part in fold(line)] for block in blocks if block)
    return "\n\n".join("\n".join(lines) for lines in folded) + "\n"


def band_sentence(assessment: Assessment) -> str:
    """The band with its level, or the reason why there is none; "" where there is no number."""
    estimate = assessment.estimate
    if estimate is None:
        return ""
    if estimate.band is None:
        return f"No band: {estimate.band_absent_because}"
    return f"{phrases.level_words(estimate.band.level)} band {shown_band(assessment)}."


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
    """Outcome, number at its horizon, people, recalibration, band and spread; or why there is no number."""
    estimate, span = assessment.estimate, assessment.span
    outcome = assessment.model.content.outcome
    within = "" if span is None else f" within {span.words}"
    if estimate is None:
        return [outcome, f"No number. {progress_sentence(assessment)}"]
    lines = [outcome, f"{shown_probability(assessment)}{within}", phrases.say_people(assessment)]
    label = recalibration_label(assessment)
    if label:
        lines.append(f"Recalibration: {label}.")
    lines.append(band_sentence(assessment))
    if estimate.band is not None:
        approximate = f" {phrases.basis_words(estimate.band)}" if estimate.band.basis == "reconstructed" else ""
        lines.append(f"{phrases.band_meaning(estimate)}{approximate}")
    return [*lines, *spread_lines(assessment)]


def finding_lines(findings: tuple[Finding, ...]) -> list[str]:
    """Each finding with its grade, in reading order; what is missing only where the model may still answer."""
    # what is still to be typed does not matter for a patient whom the model does not answer for
    excluded = any(finding.code is FindingCode.EXCLUDED for finding in findings)
    shown = [f for f in findings if not (excluded and f.code is FindingCode.MISSING)]
    return [phrases.say_finding(finding) for finding in shown]


def _values(values: tuple[ValueLine, ...]) -> list[str]:
    rows = [line for line in values if line.typed or line.worked_out]
    width = max((len(line.label) for line in rows if not line.exclusion), default=0)
    lines = []
    for line in rows:
        shown = line.shown or f"{line.used} (worked out)"
        used = f"  used as {line.used}" if line.shown and line.used and line.used != line.shown else ""
        mean = f"  {line.averaged.words}" if line.averaged else ""
        dated = f"  of {line.dated.isoformat()}" if line.dated else ""
        after = f"{mean}{used}{dated}"
        lines.append(f"{line.label} {shown}" if line.exclusion else f"{line.label:<{width}}  {shown}{after}")
    return lines
