"""Why something was not done, as the graded sentences of a list."""

from clinicalc.assessment.findings import Grade
from clinicalc.errors import ClinicalcError, CoefficientFileRefused, DescriptionRefused, TableRefused, ValidationRefused
from clinicalc.gui.study.problem_list import Stated
from clinicalc.gui.window_words import capital, replace_commands, sentence_of


def state_refusal(error: ClinicalcError) -> tuple[Stated, ...]:
    """Each problem of a file as a stop of its own, or the one sentence."""
    if isinstance(error, DescriptionRefused | CoefficientFileRefused | TableRefused | ValidationRefused):
        return tuple(Stated(Grade.STOP, _said(str(problem), problem.path)) for problem in error.problems)
    return (Stated(Grade.STOP, sentence_of(error)),)


def _said(words: str, path: str) -> str:
    """A place in the file at the head of a sentence keeps its spelling."""
    return replace_commands(words if path else capital(words))
