"""Why a fit of a study cannot be made, in sentences that name its terms."""

from collections.abc import Iterator, Sequence

from msgspec import UnsetType

from clinicalc.assessment.findings import Grade
from clinicalc.coefficients.pointers import listed, quoted
from clinicalc.development.estimated_penalised import SEPARATION, ease_separation
from clinicalc.development.fit_ground import Ground
from clinicalc.development.study_screening import screen_fit
from clinicalc.errors import FitRefused, Problem
from clinicalc.estimation.faults import FitFault
from clinicalc.estimation.screened import Screened
from clinicalc.estimation.screening_words import word_screened

_PENALTIES = {"logistic": ("firth", "ridge"), "cox": ("ridge",)}


def say_stops(screened: Sequence[Screened], ground: Ground) -> Iterator[Problem]:
    """What a screening says against a fit, at the table of the fit."""
    for one in screened:
        if one.gravity is Grade.STOP:
            offers = penalties_for(ground) if one.code in SEPARATION else ()
            yield Problem(f"estimate.{ground.plan.id}", f"{word_screened(one)}{_offer(offers, ground)}", offers)


def say_refused(refused: FitRefused, ground: Ground) -> tuple[Problem, ...]:
    """The refusal of the engine in the words of the study; what screening finds comes first, as it says more."""
    screening = screen_fit(ground.model, ground.equations, ground.people, ground.cohort)
    stops = tuple(say_stops(ease_separation(screening.found, ground.plan.table), ground))
    if stops:
        return stops
    offers = penalties_for(ground) if refused.code == FitFault.SEPARATED else ()
    return (Problem(f"estimate.{ground.plan.id}", f"{_sentence(refused, ground)}{_offer(offers, ground)}", offers),)


def penalties_for(ground: Ground) -> tuple[str, ...]:
    """The penalties with which a fit that has no estimate has one; none where it has a penalty already."""
    table = ground.plan.table
    return _PENALTIES.get(table.kind, ()) if isinstance(table.penalty, UnsetType) else ()


def _offer(penalties: Sequence[str], ground: Ground) -> str:
    """What may be written instead; nothing is switched without its being written."""
    if not penalties:
        return ""
    lines = " or ".join(f'penalty = "{penalty}"' for penalty in penalties)
    return f" Or say {lines} in [estimate.{ground.plan.id}]: with a penalty every coefficient is finite."


def _sentence(refused: FitRefused, ground: Ground) -> str:
    terms = [quoted(ground.estimated[place]) for place in refused.columns if place < len(ground.estimated)]
    names = listed(terms) if terms else "the terms"
    match refused.code:
        case FitFault.SEPARATED:
            return (
                f"{names} {'tells' if len(terms) == 1 else 'tell'} those with the event from those without "
                "(separation), so that there is no largest likelihood. Join rare answers, leave a term out, or gather "
                "more events."
            )
        case FitFault.COLLINEAR:
            return f"{names} follow from one another, so that their coefficients cannot be told apart. Leave one out."
        case FitFault.CONSTANT:
            return f"{names}: the same for everybody who can be compared, which tells nothing. Leave it out."
        case FitFault.NOT_FINITE:
            return f"{names}: no finite value for some people, such as the logarithm of 0."
        case FitFault.MORE_COLUMNS_THAN_EVENTS:
            return f"there are {len(ground.estimated)} terms and fewer events. Leave terms out, or gather more events."
        case FitFault.NOT_CONVERGED:
            return f"the fit does not come to rest ({names}). Are there terms that are almost the same?"
        case FitFault.TIME_NOT_POSITIVE | FitFault.ENTRY_NOT_BEFORE_TIME:
            # what stands so in the file was told when it was checked
            return (
                f"once times are rounded, {refused.what.rstrip('.')}. Say more decimals in round_times, of which 0 "
                "makes whole units of the time, or correct the times."
            )
    return f"{refused.what}"
