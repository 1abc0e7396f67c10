"""The [reconstruct] table of a description as the plan by which the bands of a published model are rebuilt."""

from collections.abc import Mapping
from pathlib import Path

from msgspec import UnsetType

from clinicalc.coefficients.schema import ModelContent
from clinicalc.development.description import Description, ReconstructTable
from clinicalc.development.reconstruction import reconstruct_bands
from clinicalc.development.reconstruction_plan import (
    EquationPlan,
    ReconstructionPlan,
    ReferenceRows,
    StatedPatient,
    SurvivalLimits,
)
from clinicalc.development.tables import Fault, read_number_table, read_text
from clinicalc.errors import Problem, ReconstructionRefused

STAND_IN = {"basis": "none", "because": "The band is being rebuilt."}
Tree = dict[str, object]


def rebuild(content: ModelContent, description: Description) -> tuple[ModelContent, tuple[Problem, ...]]:
    """The model with the bands that the description asks for, and what keeps them from being made."""
    table = description.reconstruct
    if table is None:
        return content, ()
    rows = _take_rows(table, description.folder)
    if isinstance(rows, Fault):
        return content, (Problem("/reconstruct/rows", rows.message),)
    try:
        return reconstruct_bands(content, _plan(table, rows)), ()
    except ReconstructionRefused as refused:
        return content, refused.problems


def stand_in_for_band(equation: Mapping[str, object]) -> Tree:
    """The equation without a band, which is rebuilt when all else is known to be right."""
    return {**equation, "uncertainty": STAND_IN}


def _plan(table: ReconstructTable, rows: ReferenceRows | None) -> ReconstructionPlan:
    plain = ReconstructionPlan(seed=table.seed)
    limits = table.survival_limits
    return ReconstructionPlan(
        seed=table.seed,
        people=plain.people if isinstance(table.people, UnsetType) else table.people,
        rows=rows,
        equations=_equations(table),
        survival_limits=plain.survival_limits if isinstance(limits, UnsetType) else SurvivalLimits(limits),
        remarks=() if isinstance(table.remarks, UnsetType) else table.remarks,
        patients=()
        if isinstance(table.patients, UnsetType)
        else tuple(StatedPatient(patient.words, patient.values) for patient in table.patients),
    )


def _equations(table: ReconstructTable) -> tuple[EquationPlan, ...]:
    if isinstance(table.equations, UnsetType):
        return ()
    return tuple(
        EquationPlan(
            id,
            people=None if isinstance(part.people, UnsetType) else part.people,
            standard_errors={} if isinstance(part.standard_errors, UnsetType) else part.standard_errors,
            means={} if isinstance(part.means, UnsetType) else part.means,
        )
        for id, part in table.equations.items()
    )


def _take_rows(table: ReconstructTable, folder: Path) -> ReferenceRows | Fault | None:
    if isinstance(table.rows, UnsetType):
        return None
    if isinstance(table.rows_source, UnsetType):
        return Fault('"rows_source" is missing: who the reference people are.')
    text = read_text(folder / table.rows)
    rows = text if isinstance(text, Fault) else read_number_table(text)
    if isinstance(rows, Fault):
        return rows
    return ReferenceRows({name: rows.column(name) for name in rows.columns}, table.rows_source)
