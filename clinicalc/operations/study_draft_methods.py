"""What a study's draft says is done about missing values and about optimism: two tables, each there or not."""

from collections.abc import Mapping
from copy import deepcopy
from dataclasses import dataclass

from clinicalc.development.study_tables import BootstrapTable, ImputationTable
from clinicalc.operations.study_draft_model import Tree

IMPUTATION, BOOTSTRAP = "imputation", "bootstrap"


@dataclass(frozen=True, slots=True)
class Methods:
    """The tables as a study file has them; None where it has no such table, and the method is then not used."""

    imputation: Tree | None = None
    bootstrap: Tree | None = None


def usual_imputation() -> Tree:
    """The table of an imputation of which nothing is said but that it is wanted."""
    table = ImputationTable()
    return {"sets": table.sets, "rounds": table.rounds, "seed": table.seed}


def usual_bootstrap() -> Tree:
    """The same of a bootstrap."""
    table = BootstrapTable()
    return {"replicates": table.replicates, "seed": table.seed}


def methods_of(tree: Mapping[str, object]) -> Methods:
    """The methods that a tree says, with what it leaves out at its usual value."""
    found = []
    for name, usual in ((IMPUTATION, usual_imputation()), (BOOTSTRAP, usual_bootstrap())):
        stated = tree.get(name)
        found.append({**usual, **stated} if isinstance(stated, Mapping) else None)
    return Methods(*found)


def with_methods(tree: Tree, methods: Methods) -> Tree:
    """The tree with other methods; a method that is not wanted leaves no table."""
    made = deepcopy(tree)
    for name, table in ((IMPUTATION, methods.imputation), (BOOTSTRAP, methods.bootstrap)):
        if table is None:
            made.pop(name, None)
        else:
            before = made.get(name)
            made[name] = {**before, **table} if isinstance(before, dict) else dict(table)
    return made
