"""What goes with every number of a run, whoever the patient is: it stands once at the head and not in each row.

These are notes only: the file's own cautions, and that a recalibration's imprecision is unknown. A caution stays with
its row, also where every row has it.
"""

from clinicalc.assessment.cautions import say_own_cautions
from clinicalc.assessment.estimate import say_imprecise_recalibration
from clinicalc.assessment.findings import Finding
from clinicalc.assessment.model import Model, ModelEquation
from clinicalc.coefficients.schema import Recalibration
from clinicalc.coefficients.spans import Span
from clinicalc.prediction.line import Draws, adjustment_of
from clinicalc.scoring.scored import SaidOnce


def said_once(model: Model, span: Span, recalibration: Recalibration | None, level: float) -> SaidOnce:
    """The notes that stand once."""
    findings = [*say_own_cautions(model)]
    if all(is_imprecise(equation, span, recalibration, level) for equation in model.equations):
        findings.append(say_imprecise_recalibration())
    return SaidOnce(tuple(findings))


def is_said_once(finding: Finding, once: SaidOnce) -> bool:
    """Whether a finding of a row stands at the head."""
    return any((finding.code, finding.field) == (said.code, said.field) for said in once.findings)


def is_imprecise(equation: ModelEquation, span: Span, recalibration: Recalibration | None, level: float) -> bool:
    """Whether the numbers of one equation have a band that lacks the imprecision of the recalibration."""
    band = equation.line_at(span).band
    if recalibration is None or band is None or (isinstance(band, Draws) and not band.enough_for(level)):
        return False
    return adjustment_of(recalibration.equations[equation.content.id]).covariance is None
