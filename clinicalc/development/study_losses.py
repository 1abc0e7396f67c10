"""Bootstrap samples to which a fit could not be made: why, in which words, and when it is too many of them."""

from collections.abc import Iterator, Mapping
from dataclasses import replace

from clinicalc.coefficients.pointers import listed, quoted
from clinicalc.development.study_method_figures import LostReplicates, OptimismFigures
from clinicalc.estimation.faults import FitFault

TELLING = 0.05
"""Share of the samples that may be lost before it is a caution."""
TOO_MANY = 0.20
"""Share of the samples lost beyond which the others are no picture of all."""
MOST_NAMED = 3
"""Terms of one reason that a sentence names."""

_REASONS: Mapping[str, str] = {
    FitFault.SEPARATED: "separation",
    FitFault.CONSTANT: "one and the same value",
    FitFault.COLLINEAR: "terms that follow from one another",
    FitFault.NO_EVENTS: "no event",
    FitFault.NO_OTHERS: "nobody without the event",
    FitFault.MORE_COLUMNS_THAN_EVENTS: "more terms than events",
    FitFault.NOT_CONVERGED: "no convergence",
}


def say_lost(one: LostReplicates) -> str:
    """Why samples were lost, by which terms, and how many: "separation of treated in 3"."""
    of = f" of {listed(one.terms)}" if one.terms else ""
    return f"{_REASONS.get(one.code, one.code.replace('_', ' '))}{of} in {one.count:,}"


def remark_lost(id: str, figures: OptimismFigures) -> Iterator[str]:
    """What samples that could not be fitted mean, in a sentence; none where none were lost."""
    lost = figures.replicates - figures.used
    if not lost:
        return
    reasons = listed(
        [say_lost(replace(one, terms=tuple(quoted(term) for term in one.terms[:MOST_NAMED]))) for one in figures.lost]
    )
    head = (
        f"{id}: {lost:,} of {figures.replicates:,} bootstrap samples could not be fitted ({reasons}) and "
        f"{'was' if lost == 1 else 'were'} left out."
    )
    if lost > TOO_MANY * figures.replicates:
        yield (
            f"{head} That is more than 20\u202f%, so no optimism is stated: those that could be fitted are the easier "
            "ones. Join rare answers, leave terms out, penalise the fit, or gather more events."
        )
    elif lost > TELLING * figures.replicates:
        yield (
            f"{head} That is more than 5\u202f%: the optimism stated is that of the easier samples, and may be too "
            "small. Join rare answers, or leave a term out."
        )
    else:
        yield head
