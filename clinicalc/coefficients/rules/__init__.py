"""What must hold between the fields of a model: every rule is a function that yields problems, and all are asked.

Nothing here repairs, warns or computes a probability; a file that breaks a rule is refused.
"""

from collections.abc import Callable, Iterator

from clinicalc.coefficients.rules.ancestry import check_ancestry
from clinicalc.coefficients.rules.bands import check_bands
from clinicalc.coefficients.rules.catalogue import Catalogue, list_names
from clinicalc.coefficients.rules.coverage import check_coverage
from clinicalc.coefficients.rules.derivations import check_derived
from clinicalc.coefficients.rules.examples import check_examples
from clinicalc.coefficients.rules.horizons import check_horizons
from clinicalc.coefficients.rules.labels import check_labels
from clinicalc.coefficients.rules.naming import (
    check_applies_when,
    check_flags,
    check_names,
    check_reference_person,
    check_sex,
)
from clinicalc.coefficients.rules.populations import check_populations
from clinicalc.coefficients.rules.quantities import check_loinc, check_quantities
from clinicalc.coefficients.rules.recalibrations import check_recalibrations
from clinicalc.coefficients.rules.statements import check_counts, check_decision_points, check_unconfirmed
from clinicalc.coefficients.rules.terms import check_terms
from clinicalc.coefficients.schema import ModelContent
from clinicalc.errors import Problem

Rule = Callable[[ModelContent, Catalogue], Iterator[Problem]]

RULES: tuple[Rule, ...] = (
    check_names,
    check_labels,
    check_sex,
    check_flags,
    check_counts,
    check_quantities,
    check_loinc,
    check_derived,
    check_applies_when,
    check_coverage,
    check_terms,
    check_horizons,
    check_reference_person,
    check_bands,
    check_recalibrations,
    check_examples,
    check_populations,
    check_unconfirmed,
    check_decision_points,
    check_ancestry,
)


def check_model(model: ModelContent) -> Iterator[Problem]:
    """Every problem of a model whose shape is right, in the order of the rules; none when it may be used."""
    names = list_names(model)
    for rule in RULES:
        yield from rule(model, names)
