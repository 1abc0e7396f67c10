"""The basis of the band: a covariance and its centres, or draws, that fit the terms and horizons."""

from collections.abc import Iterator

from clinicalc.coefficients.pointers import point
from clinicalc.coefficients.rules.catalogue import Catalogue, at
from clinicalc.coefficients.rules.horizons import check_span, spans_of
from clinicalc.coefficients.rules.matrices import judge_matrix
from clinicalc.coefficients.schema import (
    CovarianceBand,
    DrawsBand,
    Equation,
    ModelContent,
    ReconstructedBand,
    RobustBand,
)
from clinicalc.coefficients.spans import span_of
from clinicalc.errors import Problem

FEWEST_DRAWS = 200
MOST_DRAWS = 5000


def check_bands(model: ModelContent, names: Catalogue) -> Iterator[Problem]:
    """The uncertainty of every equation."""
    del names
    for index, equation in enumerate(model.equations):
        base = at("equations", index, "uncertainty")
        match equation.uncertainty:
            case CovarianceBand() | RobustBand() | ReconstructedBand() as band:
                yield from _check_covariance(band, equation, base)
            case DrawsBand() as band:
                yield from _check_draws(band, equation, base)
            case _:
                pass


def count_estimated(equation: Equation) -> int:
    """The number of terms whose coefficient was estimated."""
    return sum(term.fixed is not True for term in equation.terms)


def _check_covariance(
    band: CovarianceBand | RobustBand | ReconstructedBand, equation: Equation, base: str
) -> Iterator[Problem]:
    size = count_estimated(equation)
    if size == 0:
        yield Problem(base, 'every term is "fixed": there is nothing to have a covariance. Say "none" and why.')
        return
    fault = judge_matrix(band.covariance, size, "estimated terms (all but those marked fixed)")
    if fault:
        yield Problem(point(base, "covariance"), fault)
    seen = []
    for place, centre in enumerate(band.at_centre):
        here = point(base, "at_centre", place)
        yield from check_span(centre, here)
        if len(centre.centre) != size:
            yield Problem(
                point(here, "centre"),
                f"the centre has {len(centre.centre)} entries, and there are {size} estimated terms.",
            )
        seen.append(span_of(centre))
    for span in spans_of(equation):
        count = seen.count(span)
        if count != 1:
            yield Problem(
                point(base, "at_centre"), f"there must be one entry for the horizon of {span.words}; there are {count}."
            )
    for place, found in enumerate(seen):
        if found is not None and found not in spans_of(equation):
            yield Problem(point(base, "at_centre", place), f"the equation has no horizon of {found.words}.")


def _check_draws(band: DrawsBand, equation: Equation, base: str) -> Iterator[Problem]:
    size, horizons, count = count_estimated(equation), len(equation.horizons), len(band.coefficients)
    if not FEWEST_DRAWS <= count <= MOST_DRAWS:
        yield Problem(
            point(base, "coefficients"),
            f"there are {count} draws; from {FEWEST_DRAWS} to {MOST_DRAWS} must stand here.",
        )
    if len(band.baselines) != count:
        yield Problem(
            point(base, "baselines"), f"there are {len(band.baselines)} rows of baselines and {count} of coefficients."
        )
    for name, rows, width, what in (
        ("coefficients", band.coefficients, size, "estimated terms"),
        ("baselines", band.baselines, horizons, "horizons"),
    ):
        for place, row in enumerate(rows):
            if len(row) != width:
                yield Problem(
                    point(base, name, place), f"this row has {len(row)} entries, and there are {width} {what}."
                )
                break  # one row tells; five thousand of the same would bury the rest
