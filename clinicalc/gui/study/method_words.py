"""What a study says of its methods beside the plain fit, in words: penalty, imputation, bootstrap, competing events."""

from collections.abc import Iterator

from clinicalc.development.study_tables import BootstrapTable, EstimateTable, ImputationTable
from clinicalc.gui.study.data_words import count
from clinicalc.operations.study_draft_model import Tree

COMPLETE_CASES = "people who lack a value are left out (complete cases)"
NO_OPTIMISM = "not looked into: figures are those in the people of the fit"
PENALTIES = {"firth": "Firth’s", "ridge": "ridge"}
HANDLED = {
    "censored": "taken as censored",
    "subdistribution": "kept among those at risk (subdistribution)",
    "not_applicable": "none",
}


def penalty_line(penalty: str, strength: object) -> str:
    """The penalty that is planned; `strength` is None where a ridge does not say it."""
    said = PENALTIES.get(penalty, penalty)
    if penalty != "ridge":
        return said
    if strength is None:
        return f"{said}, of a strength chosen by 10-fold cross-validation"
    return f"{said}, strength {strength:g}" if isinstance(strength, int | float) else f"{said}, strength {strength}"


def table_penalty(table: EstimateTable) -> str:
    """The same of a table that was read; "" for none."""
    if not isinstance(table.penalty, str):
        return ""
    return penalty_line(table.penalty, table.ridge_strength if isinstance(table.ridge_strength, float) else None)


def method_lines(imputation: ImputationTable | None, bootstrap: BootstrapTable | None) -> Iterator[tuple[str, str]]:
    """What a study that was read plans."""
    filled = None if imputation is None else (imputation.sets, imputation.rounds, imputation.seed)
    drawn = None if bootstrap is None else (bootstrap.replicates, bootstrap.seed)
    yield from _lines(filled, drawn)


def draft_lines(imputation: Tree | None, bootstrap: Tree | None) -> Iterator[tuple[str, str]]:
    """The same of a study file that is being written, whose figures nobody has checked yet."""
    filled = None if imputation is None else tuple(imputation[name] for name in ("sets", "rounds", "seed"))
    drawn = None if bootstrap is None else tuple(bootstrap[name] for name in ("replicates", "seed"))
    yield from _lines(filled, drawn)


def _lines(filled: tuple[object, ...] | None, drawn: tuple[object, ...] | None) -> Iterator[tuple[str, str]]:
    missing = COMPLETE_CASES
    if filled is not None:
        sets, rounds, seed = filled
        missing = f"filled in: {_some(sets, 'set')}, each after {_some(rounds, 'round')} over the columns, seed {seed}"
    yield "Missing values", missing
    optimism = NO_OPTIMISM
    if drawn is not None:
        replicates, seed = drawn
        optimism = f"found by bootstrap: {_some(replicates, 'sample')}, seed {seed}"
    yield "Optimism", optimism


def _some(number: object, one: str) -> str:
    return count(number, one) if isinstance(number, int) else f"{number} {one}s"
