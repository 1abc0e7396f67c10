"""The case of a full entry, as an assessment makes it, for the tests of the figures beside the number."""

from collections.abc import Mapping

import msgspec

from clinicalc.assessment.assess import read_entry
from clinicalc.assessment.case import Case
from clinicalc.assessment.choices import DEFAULT_LEVEL
from clinicalc.assessment.entry import entry_from_texts
from clinicalc.assessment.limits import clamp, giving_limits
from clinicalc.assessment.model import Model, prepare_model
from clinicalc.assessment.requirements import possible_equations
from clinicalc.assessment.worked_out import work_out
from clinicalc.coefficients.schema import ModelContent
from clinicalc.coefficients.spans import Span
from clinicalc.prediction.line import adjustment_of
from tests.assessment.cases import NOW
from tests.coefficients.tiny_model import Tree, read_of


def model_of(tree: Tree) -> Model:
    """A model from a tree as `tree_of` gives it, without asking the rules."""
    return prepare_model(read_of(msgspec.convert(tree["model"], ModelContent)))


def case_of(
    model: Model, texts: Mapping[str, str], *, span: Span | None = None, recalibration: str | None = None
) -> Case:
    """The case; texts that leave anything open or stop the model are a mistake of the test."""
    taken = read_entry(model, entry_from_texts(dict(texts)), NOW)
    (equation,) = possible_equations(model, taken.answers)
    columns = taken.columns
    worked_out = {}
    for field in model.derived:
        column = work_out(model, field, columns)
        if column is not None and field.id not in columns and field.id in equation.uses:
            worked_out[field.id] = clamp(float(column[0]), giving_limits(field))
    assert equation.uses <= columns.keys() | worked_out.keys(), [finding.message for finding in taken.findings]
    span = span or model.spans[0]
    offered = {offer.id: offer for offer in model.recalibrations_at(span)}
    adjustment = None
    if recalibration is not None:
        adjustment = adjustment_of(offered[recalibration].equations[equation.content.id])
    return Case(
        model=model,
        equation=equation,
        line=equation.line_at(span),
        adjustment=adjustment,
        level=DEFAULT_LEVEL,
        numbers=taken.numbers,
        answers=taken.answers,
        columns=columns,
        worked_out=worked_out,
    )
