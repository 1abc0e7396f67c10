"""What comes next, as the study stands and by the step that is shown."""

from dataclasses import dataclass

from clinicalc.gui.study.steps import Step
from clinicalc.gui.study.study_foot import Next
from clinicalc.gui.study.study_state import StudyState
from clinicalc.gui.study.validation_state import ValidationState

GOES_TO = {
    Next.TO_MODEL: Step.MODEL,
    Next.TO_PACKAGE: Step.PACKAGE,
    Next.TO_VALIDATION: Step.VALIDATION,
    Next.TO_UPDATE: Step.UPDATE,
}
"""What only leads to another step."""


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
    if step is Step.VALIDATION:
        return _offer_validation(state.validating)
    if step is Step.UPDATE:
        return _offer_update(state.validating)
    if state.people_only is not None:
        return Offer(Next.TO_MODEL) if step is Step.DATA else Offer(Next.TO_VALIDATION)
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


def _offer_validation(validating: ValidationState) -> Offer:
    opened = validating.opened
    if validating.is_validated:
        return Offer(Next.TO_UPDATE)
    return Offer(None) if opened is None else Offer(Next.VALIDATE, may=opened.may_validate)


def _offer_update(validating: ValidationState) -> Offer:
    made, opened = validating.update, validating.opened
    if made is None or made.package is None or validating.is_update_stale:
        return Offer(None) if opened is None else Offer(Next.UPDATE, may=opened.may_validate)
    if validating.written is not None:
        return Offer(Next.INSTALL, also=Next.WRITE_VERSION)
    return Offer(Next.WRITE_VERSION)
