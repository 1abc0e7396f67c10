"""A band for a published model that prints intervals and no covariance: rebuilt, and judged under other assumptions.

The method is in `reconstruction_bands`; here the figures of its sensitivity are put beside its other assumptions.
"""

import msgspec

from clinicalc.assessment.numerals import percent_range
from clinicalc.coefficients.schema import Equation, ModelContent, ReconstructedBand
from clinicalc.development.reconstruction_bands import rebuild_bands
from clinicalc.development.reconstruction_plan import ReconstructionPlan
from clinicalc.development.reconstruction_sensitivity import CorrelationCase, judge_correlations


def reconstruct_bands(content: ModelContent, plan: ReconstructionPlan) -> ModelContent:
    """The model with a reconstructed band at every equation; the plan's patients under other correlations in words.

    Raises ReconstructionRefused with everything that is lacking or cannot be, in any equation.
    """
    made = rebuild_bands(content, plan)
    if not plan.patients:
        return made
    cases = judge_correlations(content, plan)
    return msgspec.structs.replace(made, equations=tuple(_add_cases(equation, cases) for equation in made.equations))


def _add_cases(equation: Equation, cases: tuple[CorrelationCase, ...]) -> Equation:
    band = equation.uncertainty
    own = [case for case in cases if case.equation == equation.id]
    if not own or not isinstance(band, ReconstructedBand) or not isinstance(band.assumptions, tuple):
        return equation
    said = []
    for patient in dict.fromkeys(case.patient for case in own):
        rows = [case for case in own if case.patient == patient]
        ranges = "; ".join(f"{case.words} {percent_range(case.lower, case.upper)}" for case in rows)
        said.append(f"What the assumed correlations do, for {patient}: {ranges}.")
    whole = msgspec.structs.replace(band, assumptions=(*band.assumptions, *said))
    return msgspec.structs.replace(equation, uncertainty=whole)
