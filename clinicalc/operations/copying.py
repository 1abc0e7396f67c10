"""The assessment as text for the clipboard: for the notes of a patient, so complete, and never folded."""

from clinicalc.assessment.result import Assessment, ValueLine
from clinicalc.coefficients.fingerprint import group_fingerprint
from clinicalc.operations.beside_lines import (
    assumption_lines,
    comparison_lines,
    decision_lines,
    matching_age_lines,
    share_lines,
)
from clinicalc.operations.summary import finding_lines, number_lines
from clinicalc.report import phrases


def copy_text(assessment: Assessment, *, with_label: bool = False) -> str:
    """The whole assessment as plain text, one statement a line, ending in a newline.

    Number, horizon, band (or why there is none) with what it assumes, the figures beside the number, findings and
    values stand together, with the model, its fingerprint and the time, so that the number cannot be read without
    them. The patient label is left out unless asked for.
    """
    model, at = assessment.model, assessment.at
    label = assessment.label.strip() if with_label else ""
    head = [
        *([label] if label else []),
        f"{model.content.title}, version {model.content.version},"
        f" fingerprint {group_fingerprint(model.fingerprint, 3)}",
        f"Assessed {phrases.moment_words(at)} {phrases.zone_words(at)}".rstrip(),
        f"{phrases.vetting_words(assessment.vetting)}.",
    ]
    if assessment.estimate is None and assessment.span is not None:
        head.append(f"Horizon: {assessment.span.words}")
    values = [line for line in assessment.values if line.typed or line.worked_out]
    blocks = [
        head,
        number_lines(assessment),
        assumption_lines(assessment),
        decision_lines(assessment),
        comparison_lines(assessment),
        share_lines(assessment, as_table=False),
        matching_age_lines(assessment),
        finding_lines(assessment.findings),
        [_say_value(line) for line in values],
    ]
    return "\n\n".join("\n".join(block) for block in blocks if block) + "\n"


def _say_value(line: ValueLine) -> str:
    shown = line.shown or f"{line.used} (worked out)"
    used = f", used as {line.used}" if line.shown and line.used and line.used != line.shown else ""
    mean = f", {line.averaged.words}" if line.averaged else ""
    dated = f", of {line.dated.isoformat()}" if line.dated else ""
    mark = "" if line.label.endswith("?") else ":"
    return f"{line.label}{mark} {shown}{mean}{used}{dated}"
