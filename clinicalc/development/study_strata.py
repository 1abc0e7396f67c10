"""An equation fitted in strata becomes one equation for each answer: the same terms, a baseline for each."""

from collections.abc import Iterator, Mapping
from dataclasses import dataclass

from msgspec import UnsetType

from clinicalc.coefficients.pointers import point, quoted, suggest
from clinicalc.development.study_tables import EstimateTable
from clinicalc.development.study_terms import Tree, parts
from clinicalc.errors import Problem


@dataclass(frozen=True, slots=True)
class FitPlan:
    """One fit of a study: the id and table it has there, and the equations of the file that it fills, by id.

    There are several equations where it is fitted in strata, one for each answer to `table.strata`.
    """

    id: str
    table: EstimateTable
    equations: tuple[str, ...]


def spread_strata(
    model: Mapping[str, object], tables: Mapping[str, EstimateTable], answers: Mapping[str, tuple[str, ...]]
) -> tuple[Tree, tuple[FitPlan, ...]]:
    """The model with an equation for each stratum, and the fits that fill its equations."""
    found = model.get("equations")
    if not isinstance(found, list):
        return dict(model), ()
    equations: list[object] = []
    plans: list[FitPlan] = []
    for equation in found:
        table = tables.get(str(equation.get("id"))) if isinstance(equation, dict) else None
        if not isinstance(equation, dict) or table is None:
            equations.append(equation)
            continue
        spread = list(_spread(equation, table, answers))
        equations += spread
        plans.append(FitPlan(str(equation.get("id")), table, tuple(str(one.get("id")) for one in spread)))
    return {**model, "equations": equations}, tuple(plans)


def find_strata_problems(
    model: Mapping[str, object], tables: Mapping[str, EstimateTable], answers: Mapping[str, tuple[str, ...]]
) -> Iterator[Problem]:
    """Strata that are no question of the model, or that its terms use too."""
    for equation in parts(model, "equations"):
        table = tables.get(str(equation.get("id")))
        if table is None or isinstance(table.strata, UnsetType):
            continue
        path = point("/estimate", str(equation.get("id")), "strata")
        if table.strata not in answers:
            yield Problem(
                path,
                f"there is no choice or yes/no question {quoted(table.strata)}.{suggest(table.strata, answers)}",
            )


def _spread(equation: Tree, table: EstimateTable, answers: Mapping[str, tuple[str, ...]]) -> Iterator[Tree]:
    strata = table.strata
    if isinstance(strata, UnsetType) or strata not in answers:
        yield equation
        return
    applies = equation.get("applies_when")
    conditions = dict(applies) if isinstance(applies, dict) else {}
    covered = conditions.get(strata)
    for answer in covered if isinstance(covered, list) else answers[strata]:
        yield {**equation, "id": f"{equation.get('id')}_{answer}", "applies_when": {**conditions, strata: [answer]}}
