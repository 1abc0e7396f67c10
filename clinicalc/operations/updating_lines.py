"""What the command says of an update, as lines of plain text: the sentences that its file carries, and coefficients."""

from collections.abc import Iterator

from clinicalc.operations.folding import fold
from clinicalc.operations.updating_words import say_update
from clinicalc.operations.validation_names import spell_figure
from clinicalc.validation.updated import Refit, Update
from clinicalc.validation.validated import Validation


def tell_update(updated: Update) -> Iterator[str]:
    """What was done and found at each step, the coefficients of a refit, and who was left out."""
    done = "Tested in" if updated.keeps else "Updated to"
    yield f"{done} {updated.people:,} people with {updated.events:,} events"
    for sentence in say_update(updated):
        yield from fold(f"  {sentence}")
    for equation in updated.equations:
        if equation.refit is not None:
            if len(updated.equations) > 1:
                yield f"  Equation {equation.id}, coefficients of the refit:"
            yield from _tell_refit(equation.refit)
    for remark in updated.remarks:
        yield from fold(f"  {remark}")


def tell_after(found: Validation) -> Iterator[str]:
    """How the new version does in the very people it was made from, at each horizon."""
    yield "The new version in the same people, which is no validation of it:"
    for at in found.horizons:
        where = "" if at.span is None else f"{at.span.words}: "
        named = (("observed / expected", at.observed_to_expected), ("slope", at.slope), ("C", at.c))
        yield f"  {where}{', '.join(f'{name} {spell_figure(measure.value)}' for name, measure in named)}"


def _tell_refit(refit: Refit) -> Iterator[str]:
    width = max(len("Term"), *map(len, refit.terms))
    yield f"  {'Term':<{width}}  {'Coefficient':>12}  {'Std. error':>12}"
    for place, term in enumerate(refit.terms):
        se = float(refit.covariance[place, place]) ** 0.5
        yield f"  {term:<{width}}  {float(refit.coefficients[place]):>12.6g}  {se:>12.6g}"
