"""Opening the library on this machine: read, replayed, compared with what was seen here, and remembered."""

from collections.abc import Callable, Collection
from dataclasses import dataclass, field
from datetime import datetime, time, timedelta
from pathlib import Path

from clinicalc.errors import LibraryError, LibraryUnreachable
from clinicalc.library.folder import LibraryFolder
from clinicalc.library.gathering import PATIENCE, FolderSource, KeptSource, Source, reach_library
from clinicalc.library.judging import Judged, Judging, held, stopped, tell_nobody
from clinicalc.library.kept_copy import forgetful, keep, read_kept
from clinicalc.library.machine import Machine, read_moment, say_moment
from clinicalc.library.memory import Memory, change_memory, memory_of_place, new_memory, read_memory
from clinicalc.library.recollection import brought_forward
from clinicalc.library.records import ABOUT_THE_LIBRARY
from clinicalc.library.sealing import is_proved
from clinicalc.library.standing import Authority, Fault, FaultKind, ModelState, Standing


@dataclass(frozen=True, slots=True)
class OpenedLibrary:
    """A library as it stood at `opened_at`, on this machine: what is held or stopped here is no longer in use in it.

    `faults` are about the library itself, those of a model are in its state. Where the library is out of reach,
    `reachable` is False and the verified copy serves until `served_until` (None where it is reachable, or nothing
    serves).
    """

    machine: Machine
    library: str
    authority: Authority
    models: tuple[ModelState, ...]
    reachable: bool
    opened_at: datetime
    served_until: datetime | None
    faults: tuple[Fault, ...]
    source: Source = field(repr=False, compare=False)

    @property
    def place(self) -> Path:
        """Where the library lies."""
        return self.machine.place

    @property
    def caution(self) -> str:
        """What goes with every number while the library is out of reach, "" otherwise."""
        out = (f.sentence for f in self.faults if f.kind is FaultKind.OUT_OF_REACH and not f.stops)
        return next(out, "")

    @property
    def good_until(self) -> datetime:
        """When it is to be opened again at the latest: at the next midnight here, or when the copy no longer serves."""
        tomorrow = self.opened_at.astimezone().date() + timedelta(days=1)
        midnight = datetime.combine(tomorrow, time()).astimezone()
        return min(midnight, self.served_until) if self.served_until else midnight

    def state(self, fingerprint: str) -> ModelState | None:
        """Where one model stands, None where it is not in the library."""
        return next((state for state in self.models if state.fingerprint == fingerprint), None)

    def in_use(self) -> tuple[ModelState, ...]:
        """The models that give a number on this machine now."""
        return tuple(state for state in self.models if state.standing is Standing.IN_USE)


@dataclass(frozen=True, slots=True)
class _How:
    """How an opening goes about it: all models or some, everything anew or not, those at rest left out or not.

    `told` hears how many of how many models are done, and may raise to end it: nothing was changed then.
    """

    only: Collection[str] | None = None
    patience: float = PATIENCE
    thorough: bool = False
    rests: bool = False
    told: Callable[[int, int], None] = tell_nobody


def open_library(
    machine: Machine,
    now: datetime,
    *,
    only: Collection[str] | None = None,
    patience: float = PATIENCE,
    told: Callable[[int, int], None] = tell_nobody,
) -> OpenedLibrary:
    """The library as it stands, or the verified copy where it is out of reach; `now` carries a zone.

    Every signature is verified at every opening. The files of the library itself and of the models in use are read and
    compared with their names each time; what is known of models that give no number is recalled from this machine's
    copy by its digest, and its signature verified like any other (`verify_all` reads everything). `only`: the
    fingerprints of the models that matter, None for all. `patience`: the seconds that the place has for its first
    answer; a share that falls silent later is waited for as long as the system waits. `told` hears how many of how many
    models are done; what it raises ends the opening, and nothing was remembered.

    Raises LibraryUnreachable where the library is out of reach and was never opened here, LibraryError where there is
    no library, another one than before, or a memory that cannot be read, and FileNotWritten where what was seen cannot
    be kept. Whatever else is wrong becomes a fault, and the models concerned give no number.
    """
    return _open(machine, now.astimezone(), _How(only, patience, told=told))


def open_for_bedside(machine: Machine, now: datetime, *, patience: float = PATIENCE) -> OpenedLibrary:
    """The same in less time: models are left out that are not in use and about which nobody has said a word since."""
    return _open(machine, now.astimezone(), _How(patience=patience, rests=True))


def verify_all(
    machine: Machine,
    now: datetime,
    *,
    patience: float = PATIENCE,
    told: Callable[[int, int], None] = tell_nobody,
) -> OpenedLibrary:
    """The same with every file of the library read and every record opened anew. Raises what `open_library` raises.

    Where all of it is sound, this machine's copy of the records is made anew as well.
    """
    return _open(machine, now.astimezone(), _How(patience=patience, thorough=True, told=told))


def _open(machine: Machine, now: datetime, how: _How) -> OpenedLibrary:
    try:
        library = reach_library(machine.place, how.patience)
        memory = _memory_for(machine, library, now)
        kept = read_kept(machine, library)
        source = FolderSource(library, LibraryFolder(machine.place), forgetful(kept) if how.thorough else kept)
        judging = Judging(machine, memory, source, now, how.only, how.thorough, is_copy=False, rests=how.rests)
        judged = judging.judge(how.told)
    except LibraryUnreachable as fault:
        return _open_copy(machine, now, how, fault)
    memory = _remember(machine, library, judged, now, sound=judged.stop is None and how.only is None)
    proved = [sealed for state in judged.models for sealed in state.records if is_proved(sealed)]
    gone = [s.fingerprint for s in judged.models if s.standing in (Standing.WITHDRAWN, Standing.REVIEW_OVERDUE)]
    # what a damaged library lacks may be in the copy only, so that nothing leaves it then
    whole = judged.stop is None and all(state.standing is not Standing.REFUSED for state in judged.models)
    in_use = judged.in_use if judged.stop is None else {}
    afresh = whole and how.thorough and how.only is None
    keep(kept, [*judged.authority.records, *proved], in_use, gone, afresh=afresh)
    return _opened(machine, source, judged, memory, now, reachable=True, served_until=None)


def _open_copy(machine: Machine, now: datetime, how: _How, unreachable: LibraryUnreachable) -> OpenedLibrary:
    memory = memory_of_place(machine)
    if memory is None:
        raise unreachable
    source = KeptSource(memory.library, read_kept(machine, memory.library))
    judging = Judging(machine, memory, source, now, how.only, thorough=False, is_copy=True, rests=how.rests)
    judged = judging.judge(how.told)
    until = None
    if memory.verified and judged.stop is None:
        until = read_moment(memory.verified) + timedelta(hours=judged.authority.policy.offline_hours)
    serves = until is not None and now < until
    notice = _out_of_reach(memory, unreachable, until.astimezone() if until is not None else None, serves=serves)
    # what is wrong with the copy itself says more than that the library is away
    faults = (notice, *judged.faults) if judged.stop is None else (*judged.faults, notice)
    judged = Judged(judged.authority, judged.records, judged.models, faults, judged.in_use)
    memory = _remember(machine, memory.library, judged, now, sound=False)
    return _opened(machine, source, judged, memory, now, reachable=False, served_until=until if serves else None)


def _opened(
    machine: Machine,
    source: Source,
    judged: Judged,
    memory: Memory,
    now: datetime,
    *,
    reachable: bool,
    served_until: datetime | None,
) -> OpenedLibrary:
    models = tuple(held(stopped(state, judged.stop), memory) for state in judged.models)
    return OpenedLibrary(
        machine, source.library, judged.authority, models, reachable, now, served_until, judged.faults, source
    )


def _remember(machine: Machine, library: str, judged: Judged, now: datetime, *, sound: bool) -> Memory:
    return change_memory(
        machine,
        library,
        lambda memory: brought_forward(
            memory, machine, judged.authority, judged.records, judged.models, now, sound=sound
        ),
        now,
    )


def _memory_for(machine: Machine, library: str, now: datetime) -> Memory:
    """What was seen of this library. Raises LibraryError where another one lay at the place before."""
    memory = read_memory(machine, library)
    if memory is not None:
        return memory
    before = memory_of_place(machine)
    if before is not None:
        raise LibraryError(
            "another library lies where this machine’s library was.",
            where=str(machine.place),
            why=f"Until {say_moment(read_moment(before.latest))} it was the library {before.library[:12]}…, now it is "
            f"{library[:12]}….",
            do="Bring the former one back. If the practice founded a new one, join that: clinicalc library join.",
        )
    return new_memory(machine, library, now)


def _out_of_reach(memory: Memory, why: LibraryUnreachable, until: datetime | None, *, serves: bool) -> Fault:
    """The caution while the copy serves, or the stop."""
    seen = f"It was last verified here on {say_moment(read_moment(memory.verified))}" if memory.verified else ""
    said = f"The practice’s library cannot be reached. {why.why} {seen}".strip()
    if serves and until is not None:
        sentence = (
            f"{said}; this machine’s copy serves until {say_moment(until)}. A withdrawal since then is not known here."
        )
        return Fault(FaultKind.OUT_OF_REACH, ABOUT_THE_LIBRARY, sentence, stops=False)
    if not seen:
        said += " This machine has never found it sound, so no model gives a number."
    elif until is not None:
        said += f", and the copy served until {say_moment(until)}. No model gives a number until it is reached again."
    else:
        said += ", and this machine’s copy does not serve, for the reason that is said besides."
    return Fault(FaultKind.OUT_OF_REACH, ABOUT_THE_LIBRARY, f"{said} {why.do}".strip())
