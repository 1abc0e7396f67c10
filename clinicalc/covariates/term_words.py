"""A term of an equation in words: what its coefficient is multiplied with, and figures as the file has them."""

from collections.abc import Callable

from msgspec import UnsetType

from clinicalc.coefficients.products import products_of
from clinicalc.coefficients.schema import Factor, Step, Term
from clinicalc.covariates.transforms import StepKind, kind_of

_WORDS = {
    StepKind.SUBTRACT: "minus {}",
    StepKind.DIVIDE: "divided by {}",
    StepKind.MULTIPLY: "times {}",
    StepKind.POWER: "to the power {}",
    StepKind.CLIP_LOW: "at least {}",
    StepKind.CLIP_HIGH: "at most {}",
    StepKind.ABOVE: "above {}",
    StepKind.FROM: "{} or above",
    StepKind.BELOW: "below {}",
    StepKind.UP_TO: "{} or below",
}


def say_term(term: Term, say: Callable[[float], str] | None = None) -> str:
    """The products of a term in words: "age x (systolic_bp: natural logarithm, minus 4.8)".

    `say` writes its figures, where they are to be other than as the file has them.
    """
    say = say or say_figure
    products = [" x ".join(_factor(factor, say) for factor in product) for product in products_of(term)]
    return products[0] if len(products) == 1 else f"sum of [{'; '.join(products)}]"


def _factor(factor: Factor, say: Callable[[float], str]) -> str:
    if isinstance(factor.steps, UnsetType) or not factor.steps:
        return factor.of
    return f"({factor.of}: {', '.join(_step(step, say) for step in factor.steps)})"


def _step(step: Step, say: Callable[[float], str]) -> str:
    kind = kind_of(step)
    if not isinstance(step.spline, UnsetType):
        knots = " ".join(say(knot) for knot in step.spline.knots)
        return f"restricted cubic spline basis {step.spline.basis}, knots {knots}"
    if not isinstance(step.is_, UnsetType):
        return f"is {' or '.join(step.is_)}"
    if kind is StepKind.LOG:
        return "natural logarithm"
    value = getattr(step, "from_" if kind is StepKind.FROM else kind.value)
    return _WORDS[kind].format(say(value))


def say_figure(value: float) -> str:
    """A figure of the file as the shortest decimal that reads back to it."""
    return repr(value).removesuffix(".0")


def say_figures(values: tuple[float, ...]) -> str:
    """The same for several, parted by spaces."""
    return " ".join(say_figure(value) for value in values)
