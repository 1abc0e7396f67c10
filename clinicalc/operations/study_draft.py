"""A study file while it is being written in the window: a tree as TOML has it, and the columns that it is about.

Nothing of a draft is checked here: it is saved, and then opened as any study file is, which says all that is wrong.
Every change gives another draft; the one before stays as it was.
"""

import tomllib
from collections.abc import Mapping
from copy import deepcopy
from dataclasses import dataclass, replace
from pathlib import Path

from clinicalc.cohort.dictionary import ColumnEntry, DataDictionary, OutcomeKind, OutcomePlan, Role
from clinicalc.cohort.table import read_table
from clinicalc.errors import DescriptionRefused, Problem
from clinicalc.operations.course import Course
from clinicalc.operations.study_draft_model import begin_model, predictor_of, which_competes, with_competing
from clinicalc.operations.study_proposal import propose_study
from clinicalc.operations.study_revision import find_lost_comments, revise_toml
from clinicalc.operations.study_toml import spell_toml, write_study

Tree = dict[str, object]


@dataclass(frozen=True, slots=True, eq=False)
class StudyDraft:
    """`folder` is where file names are looked for, `path` the study file it was read from or saved to, if any.

    `columns` are the names in the file of people, `reasons` why each was proposed to be what it is. `text` is the study
    file as it was read or saved, of which a saving keeps what is not changed; `is_saved` says that nothing was changed
    since.
    """

    tree: Tree
    folder: Path
    columns: tuple[str, ...]
    reasons: Mapping[str, str]
    path: Path | None = None
    text: str = ""
    is_saved: bool = False

    @property
    def file(self) -> str:
        """The name of the file of people."""
        return str(table_of(self.tree, "cohort").get("file", ""))

    @property
    def lost_comments(self) -> tuple[str, ...]:
        """The parts of the study file whose comments a saving loses, because they are changed."""
        return find_lost_comments(self.text, self.tree)


def begin_draft(people: Path, course: Course) -> StudyDraft:
    """A draft proposed from a file of people. Raises TableRefused where that cannot be read, and Stopped."""
    course.say("Reading the people", 0, 0)
    table = read_table(people, course)
    course.say("Looking at the columns", 0, 0)
    proposal = propose_study(table, course)
    dictionary = proposal.dictionary
    tree = begin_model(people.stem, is_timed=dictionary.outcome.kind is OutcomeKind.TIME_TO_EVENT)
    draft = StudyDraft(tree, people.parent, table.names, {one.column: one.reason for one in dictionary.columns})
    tree["cohort"] = {"file": people.name, "outcome": {}, "columns": {}}
    for entry in dictionary.columns:
        draft = with_column(draft, entry, proposal.predictors.get(entry.predictor))
    return _with_plan(draft, dictionary)


def draft_study(path: Path, columns: tuple[str, ...]) -> StudyDraft:
    """A draft of a study file that is there. Raises DescriptionRefused where it is no TOML any more."""
    try:
        text = path.read_text(encoding="utf-8")
        tree = tomllib.loads(text)
    except (OSError, ValueError) as fault:
        raise DescriptionRefused(path.name, (Problem("", f"the study file cannot be read: {fault}."),)) from None
    return StudyDraft(tree, path.parent, columns, {}, path, text, is_saved=True)


def save_draft(draft: StudyDraft, path: Path, *, replace_file: bool) -> StudyDraft:
    """Put the study file in place whole or not at all; parts that are the same keep their comments.

    Raises FileNotWritten.
    """
    text = revise_toml(draft.text, draft.tree) if draft.text else spell_toml(draft.tree)
    write_study(path, text, replace=replace_file)
    return replace(draft, path=path, text=text, is_saved=True)


def changed(draft: StudyDraft, tree: Tree) -> StudyDraft:
    """The draft with another tree."""
    return replace(draft, tree=tree, is_saved=False)


def table_of(tree: Mapping[str, object], *path: str) -> Tree:
    """The table at a path, empty where there is none; to be read only."""
    found: object = tree
    for key in path:
        found = found.get(key) if isinstance(found, Mapping) else None
    return dict(found) if isinstance(found, Mapping) else {}


def plan_of(draft: StudyDraft) -> OutcomePlan:
    """The outcome as the draft has it."""
    outcome = table_of(draft.tree, "cohort", "outcome")
    kind = OutcomeKind.BINARY if outcome.get("kind") == "binary" else OutcomeKind.TIME_TO_EVENT

    def text(name: str) -> str:
        return str(outcome.get(name, ""))

    return OutcomePlan(
        kind=kind,
        column=text("column"),
        time=text("time"),
        status=text("status"),
        entry=text("entry"),
        start=text("start"),
        end=text("end"),
        born=text("born"),
        unit=text("unit") or "d",
        event=_cells(outcome.get("event")),
        no_event=_cells(outcome.get("no_event")),
        censored=_cells(outcome.get("censored")),
        competing=_cells(outcome.get("competing")),
    )


def entry_of(draft: StudyDraft, column: str) -> ColumnEntry:
    """What the draft takes a column for."""
    reason = draft.reasons.get(column, "")
    plan = plan_of(draft)
    cohort = table_of(draft.tree, "cohort")
    names = {role.value: role for role in _OUTCOME_ROLES}
    for name, role in names.items():
        if column and getattr(plan, "column" if role is Role.OUTCOME else name) == column:
            return ColumnEntry(column, role, reason=reason)
    if cohort.get("person") == column:
        return ColumnEntry(column, Role.PERSON, reason=reason)
    for id, table in table_of(draft.tree, "cohort", "columns").items():
        stated = table if isinstance(table, Mapping) else {}
        if stated.get("column", id) == column:
            levels = stated.get("levels", {})
            pairs = tuple((str(a), text) for a, cells in dict(levels).items() for text in _cells(cells))
            missing = _cells(stated.get("missing"))
            return ColumnEntry(column, Role.VALUE, str(id), str(stated.get("unit", "")), pairs, missing, reason)
    if any(predictor.get("id") == column for predictor in _predictors(draft.tree)):
        return ColumnEntry(column, Role.VALUE, column, reason=reason)
    return ColumnEntry(column, Role.IGNORED, reason=reason)


def with_column(draft: StudyDraft, entry: ColumnEntry, predictor: Tree | None = None) -> StudyDraft:
    """The draft with another meaning of one column; `predictor` is its table, proposed where it is None."""
    tree = deepcopy(draft.tree)
    before = entry_of(draft, entry.column)
    cohort = tree.setdefault("cohort", {})
    assert isinstance(cohort, dict)
    _forget(tree, cohort, before)
    if entry.role is Role.VALUE and entry.predictor:
        stated: Tree = {"column": entry.column}
        if entry.unit and not entry.levels:
            stated["unit"] = entry.unit
        if entry.missing:
            stated["missing"] = list(entry.missing)
        if entry.levels:
            levels: dict[str, list[str]] = {}
            for id, text in entry.levels:
                levels.setdefault(id, []).append(text)
            stated["levels"] = {id: texts[0] if len(texts) == 1 else texts for id, texts in levels.items()}
        cohort.setdefault("columns", {})[entry.predictor] = stated
        listed = tree.setdefault("predictors", [])
        assert isinstance(listed, list)
        listed.append(predictor or predictor_of(entry))
    elif entry.role is Role.PERSON:
        cohort["person"] = entry.column
    elif entry.role in _OUTCOME_ROLES:
        name = "column" if entry.role is Role.OUTCOME else entry.role.value
        cohort.setdefault("outcome", {})[name] = entry.column
    return changed(draft, tree)


def with_outcome(draft: StudyDraft, outcome: Tree) -> StudyDraft:
    """The draft with another table of the outcome; how its competing events are handled follows the kind of fit."""
    tree = deepcopy(draft.tree)
    cohort = tree.setdefault("cohort", {})
    assert isinstance(cohort, dict)
    cohort["outcome"] = outcome
    competing = _cells(outcome.get("competing"))
    if bool(competing) != bool(which_competes(tree)):
        tree = with_competing(tree, f"{outcome.get('status')} = {', '.join(competing)}" if competing else "")
    return changed(draft, tree)


_OUTCOME_ROLES = (Role.TIME, Role.STATUS, Role.ENTRY, Role.START, Role.END, Role.BORN, Role.OUTCOME)


def _with_plan(draft: StudyDraft, dictionary: DataDictionary) -> StudyDraft:
    """The draft with the proposed outcome: columns, units and what the texts of the status mean."""
    plan = dictionary.outcome
    outcome: Tree = {"kind": plan.kind.value}
    for name in ("column", "time", "status", "entry", "start", "end", "born"):
        if getattr(plan, name):
            outcome[name] = getattr(plan, name)
    if plan.time:
        outcome["unit"] = plan.unit
    for name in ("event", "no_event", "censored", "competing"):
        if getattr(plan, name):
            outcome[name] = list(getattr(plan, name))
    return with_outcome(draft, outcome)


def _forget(tree: Tree, cohort: Tree, before: ColumnEntry) -> None:
    """Take away what the tree says of a column."""
    outcome = cohort.get("outcome")
    if before.role in _OUTCOME_ROLES and isinstance(outcome, dict):
        outcome.pop("column" if before.role is Role.OUTCOME else before.role.value, None)
    if before.role is Role.PERSON:
        cohort.pop("person", None)
    columns = cohort.get("columns")
    if before.role is Role.VALUE:
        if isinstance(columns, dict):
            columns.pop(before.predictor, None)
        tree["predictors"] = [one for one in _predictors(tree) if one.get("id") != before.predictor]


def _predictors(tree: Mapping[str, object]) -> list[Tree]:
    found = tree.get("predictors")
    return [one for one in found if isinstance(one, dict)] if isinstance(found, list) else []


def _cells(value: object) -> tuple[str, ...]:
    if value is None:
        return ()
    found = value if isinstance(value, list) else [value]
    return tuple(item if isinstance(item, str) else f"{item:.15g}" for item in found)
