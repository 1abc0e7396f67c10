"""What a rebuilt band rests on, in plain sentences that are kept with the file and shown beside the band."""

from collections.abc import Iterator, Sequence

from msgspec import UnsetType

from clinicalc.assessment.model import Model, ModelEquation
from clinicalc.assessment.numerals import NARROW_SPACE
from clinicalc.coefficients.described import population_of
from clinicalc.coefficients.pointers import listed
from clinicalc.coefficients.schema import Population
from clinicalc.development.reconstruction_intervals import StandardError
from clinicalc.development.reconstruction_plan import ReconstructionPlan
from clinicalc.development.reference_people import ReferencePeople

NOTEWORTHY = 0.01
"""A rounding that moves a standard error by less than this share is not spoken of."""


def word_assumptions(
    model: Model,
    equation: ModelEquation,
    plan: ReconstructionPlan,
    people: ReferencePeople | None,
    errors: Sequence[StandardError],
    baselines: Sequence[str],
) -> tuple[str, ...]:
    """Every assumption of one equation's band, the most important first."""
    return tuple(_sentences(model, equation, plan, people, errors, baselines))


def _sentences(
    model: Model,
    equation: ModelEquation,
    plan: ReconstructionPlan,
    people: ReferencePeople | None,
    errors: Sequence[StandardError],
    baselines: Sequence[str],
) -> Iterator[str]:
    yield (
        "Approximate: rebuilt from printed intervals of single coefficients, because the source prints no covariance"
        " matrix."
    )
    population = population_of(model.content, equation.content)
    if people is None:
        yield (
            "Rougher than with a description of the people: the coefficients are taken as unrelated to each other,"
            " around the published means."
        )
    elif plan.rows is not None:
        yield (
            f"The correlations of the coefficients are worked out from {people.count:,} reference people."
            f" {_sentence(plan.rows.source)}{_left_out(people)}"
        )
    elif population is not None:
        yield from _drawn(population, plan, people)
    yield from plan.remarks
    yield from baselines
    if len(equation.lines) > 1 and people is not None:
        longest = max((line.span for line in equation.lines), key=lambda span: span.days)
        yield f"The correlations of the coefficients are those at {longest.words}, for every horizon."
    given = [error.term for error in errors if not error.printed]
    if given:
        yield f"Standard errors were given, not taken from an interval, for {listed(given)}."
    worst = max(errors, key=lambda error: error.rounding)
    if worst.rounding >= NOTEWORTHY:
        yield (
            f"The printed limits are rounded: half a unit of their last digit moves the standard error of {worst.term}"
            f" by up to {_share(worst.rounding)}, of every other term by no more."
        )


def _drawn(population: Population, plan: ReconstructionPlan, people: ReferencePeople) -> Iterator[str]:
    yield (
        f"The correlations of the coefficients are worked out from {people.count:,} people who do not exist, drawn"
        f" from a description (NumPy’s Generator on PCG64, seed {plan.seed})."
    )
    yield f"The description: {_sentence(population.source)}"
    logged = [number.id for number in population.numbers if not isinstance(number.log, UnsetType)]
    scale = f", on the scale of the logarithm for {listed(logged)}" if logged else ""
    yield (
        f"Numbers are drawn as normally distributed{scale}. People outside the limits within which the model gives a"
        f" number, or with values that contradict each other, {_share(people.left_out)} of those drawn, are left out"
        " and others drawn in their place."
    )


def _left_out(people: ReferencePeople) -> str:
    if people.left_out == 0.0:
        return ""
    return f" {_share(people.left_out)} of the rows are people for whom the model gives no number, and were left out."


def _share(value: float) -> str:
    return f"{100.0 * value:.1f}{NARROW_SPACE}%"


def _sentence(text: str) -> str:
    return f"{text.rstrip('. ')}."
