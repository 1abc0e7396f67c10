"""Models as papers print them: coefficients with intervals and no covariance, for the tests of rebuilt bands."""

from collections.abc import Sequence

from clinicalc.coefficients.schema import (
    Derived,
    Equation,
    ModelContent,
    NumberPredictor,
    Plain,
    Population,
    Predictor,
    Source,
    Use,
    WorkedExample,
)


def numbers(names: Sequence[str]) -> tuple[Predictor, ...]:
    """Bare numbers without limits."""
    return tuple(NumberPredictor(id=name, label=name, quantity="number", unit="1", group="Values") for name in names)


def content_of(
    predictors: tuple[Predictor, ...],
    equations: tuple[Equation, ...],
    *,
    derived: tuple[Derived, ...] = (),
    population: Population | None = None,
) -> ModelContent:
    """Everything else that a coefficient file must say; the one worked example is a placeholder that proves nothing."""
    return ModelContent(
        id="published-only",
        version="1.0.0",
        title="Published only",
        outcome="The outcome of the fit.",
        source=Source(kind="published", citation="Open or invented data."),
        unconfirmed=(),
        use=Use(
            population="The people the fit was made from.",
            setting="Tests of the program.",
            not_for=("patients",),
            not_used=(),
            cautions=(),
            plain=Plain(outcome="the outcome", cautions=()),
        ),
        predictors=predictors,
        derived=derived,
        exclusions=(),
        equations=equations,
        recalibration_required=False,
        recalibrations=(),
        decision_points=(),
        worked_examples=(WorkedExample(values={}, probability=0.5, tolerance=0.001, source="none", years=1.0),),
        population=population,
        documentation=(),
    )
