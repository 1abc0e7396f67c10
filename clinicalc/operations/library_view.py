"""One reading of the practice's library as a list shows it: rows in their groups, and what holds for all of them."""

from dataclasses import dataclass, field

from clinicalc.library.memory import Hold, read_memory
from clinicalc.library.opening import OpenedLibrary
from clinicalc.library.records import Approver, Policy
from clinicalc.library.standing import ModelState, Standing
from clinicalc.operations.library_words import Shelf, say_shortly, say_standing, shelf_of

UNNAMED = "A file without a record of its installation"
"""The title of a row whose records do not say what it is called."""


@dataclass(frozen=True, slots=True)
class ModelRow:
    """One model in the list. `says` is short; `reason` is the whole sentence of where it stands and why.

    `outcome` is "" where the file itself was not read: records do not state it.
    """

    fingerprint: str
    title: str
    version: str
    outcome: str
    standing: Standing
    shelf: Shelf
    says: str
    reason: str


@dataclass(frozen=True, slots=True)
class LibraryView:
    """One reading. `faults` are sentences about the whole library; `caution` is not among them.

    `caution` goes with every number while the verified copy serves, "" otherwise.
    """

    place: str
    practice: str
    practice_key: str
    reachable: bool
    caution: str
    rows: tuple[ModelRow, ...]
    approvers: tuple[Approver, ...]
    policy: Policy
    faults: tuple[str, ...]
    opened: OpenedLibrary = field(repr=False, compare=False)

    def row(self, fingerprint: str) -> ModelRow | None:
        """The row of one model, None where it is not in the library."""
        return next((row for row in self.rows if row.fingerprint == fingerprint), None)


def view_of(opened: OpenedLibrary) -> LibraryView:
    """The rows in the order of the groups, then of title and version. Raises LibraryError as `read_memory` does."""
    authority = opened.authority
    holds = _holds(opened)
    rows = sorted((row_of(state, holds.get(state.fingerprint)) for state in opened.models), key=_place)
    faults = dict.fromkeys(fault.sentence for fault in opened.faults)
    faults.pop(opened.caution, None)
    return LibraryView(
        place=str(opened.place),
        practice=authority.practice,
        practice_key=authority.practice_key,
        reachable=opened.reachable,
        caution=opened.caution,
        rows=tuple(rows),
        approvers=authority.approvers,
        policy=authority.policy,
        faults=tuple(faults),
        opened=opened,
    )


def row_of(state: ModelState, hold: Hold | None = None, outcome: str = "") -> ModelRow:
    """The row of one model; `hold` is this machine's own on it."""
    return ModelRow(
        fingerprint=state.fingerprint,
        title=state.title or state.id or UNNAMED,
        version=state.version,
        outcome=outcome,
        standing=state.standing,
        shelf=shelf_of(state),
        says=say_shortly(state, hold),
        reason=say_standing(state),
    )


def version_order(version: str) -> tuple[int, ...]:
    """What versions are sorted by: 1.10.0 comes after 1.9.0."""
    return tuple(int(part) for part in version.split(".") if part.isdigit())


def _holds(opened: OpenedLibrary) -> dict[str, Hold]:
    if all(state.standing is not Standing.HELD for state in opened.models):
        return {}
    memory = read_memory(opened.machine, opened.library)
    return {hold.fingerprint: hold for hold in memory.holds} if memory else {}


def _place(row: ModelRow) -> tuple[int, str, tuple[int, ...], str]:
    return list(Shelf).index(row.shelf), row.title.casefold(), version_order(row.version), row.fingerprint
