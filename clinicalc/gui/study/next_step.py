"""What comes next, as the study stands and by the step that is shown."""

from dataclasses import dataclass

from clinicalc.gui.study.steps import Step
from clinicalc.gui.study.study_foot import Next
from clinicalc.gui.study.study_state import StudyState


@dataclass(frozen=True, slots=True)
class Offer:
    """The deed at the right, None for none; whether it may be done; and a lesser one beside it, None for none."""

    what: Next | None
    may: bool = True
    also: Next | None = None


def offer_of(state: StudyState, step: Step) -> Offer:
    """The deeds that the foot offers."""
    if state.draft is not None and step in (Step.DATA, Step.MODEL):
        return Offer(Next.SAVE, also=Next.TO_MODEL if step is Step.DATA else None)
    if state.opened is None:
        return Offer(None)
    if step is Step.DATA:
        return Offer(Next.TO_MODEL)
    if step is Step.MODEL or not state.is_fitted:
        return Offer(Next.FIT, may=state.may_fit)
    if step is Step.FIT:
        return Offer(Next.TO_PACKAGE)
    if state.written is not None:
        return Offer(Next.TRY, also=Next.WRITE)
    return Offer(Next.WRITE, may=state.package is not None)
