"""What has to be said of a fit of a study beside its figures, in sentences."""

from collections.abc import Iterator, Sequence

from clinicalc.coefficients.pointers import quoted
from clinicalc.development.fit import FitKind
from clinicalc.development.study_figures import FitFigures


def remark_fit(figures: FitFigures) -> Iterator[str]:
    """What became of competing events, and that there is no C where people came late."""
    yield from remark_competing(figures)
    if figures.follow_up is not None and figures.concordance is None:
        yield (
            f"{figures.id}: people came under observation after time nought, so no C was worked out. Horizons count "
            "from time nought: it must be the moment at which the probability is asked for."
        )


def remark_competing(figures: FitFigures) -> Iterator[str]:
    """What became of competing events."""
    if figures.competing and figures.kind == FitKind.FINE_GRAY:
        yield (
            f"{figures.id}: {figures.competing:,} competing events were counted: whoever had one will not have the "
            "event. The probability is the share of people who will have the event."
        )
    elif figures.competing:
        yield (
            f"{figures.id}: {figures.competing:,} competing events were taken as censored. The probability is that of "
            "a world in which they do not happen, above the share of people who will have the event."
        )


def name_only_fit_nowhere(remarks: Sequence[str], fits: Sequence[FitFigures]) -> Iterator[str]:
    """The remarks to be read: where there is one fit of one equation, they do not begin with its id."""
    alone = fits[0] if len(fits) == 1 and len(fits[0].equations) == 1 else None
    starts = () if alone is None else (f"{alone.id}: ", *(f"Equation {quoted(id)}: " for id in alone.equations))
    for remark in remarks:
        rest = next((remark.removeprefix(start) for start in starts if remark.startswith(start)), remark)
        yield rest[:1].upper() + rest[1:] if rest != remark else remark
