"""Judging what an opening gathers: the library itself first, then each model, strictest where it gives a number."""

from collections.abc import Callable, Collection, Iterable
from dataclasses import dataclass, replace
from datetime import datetime

from clinicalc.library.admission import REMOVE, RESTORE
from clinicalc.library.authority import replay_authority
from clinicalc.library.gathering import Contents, Gathered, Source
from clinicalc.library.holds import hold_on
from clinicalc.library.labels import find_other_name
from clinicalc.library.machine import Machine, read_moment, say_moment
from clinicalc.library.memory import Memory, resting_mark
from clinicalc.library.model_chain import replay_model
from clinicalc.library.recollection import find_clock_fault, find_lacking
from clinicalc.library.records import ABOUT_THE_LIBRARY
from clinicalc.library.standing import Authority, Fault, ModelState, SealedRecord, Standing


def tell_nobody(done: int, of: int) -> None:
    """Nobody asked how far the judging is."""


@dataclass(frozen=True, slots=True)
class Judged:
    """The library as it stands before this machine's holds; `records` are those about the library that were found.

    `faults` are about the library itself; those of a model are in its state. `in_use` holds the bytes of the models
    that are in use, by fingerprint.
    """

    authority: Authority
    records: tuple[SealedRecord, ...]
    models: tuple[ModelState, ...]
    faults: tuple[Fault, ...]
    in_use: dict[str, bytes]

    @property
    def stop(self) -> Fault | None:
        """What stops the whole library, None where nothing does."""
        return next((fault for fault in self.faults if fault.stops), None)


@dataclass(frozen=True, slots=True)
class Judging:
    """One opening. `now` is on this machine's own clock, with its zone; `thorough`: every file is read, none recalled.

    `only`: the fingerprints of the models to be judged, None for all. `rests`: models are left out whose records are
    exactly those from which they were found out of use before.
    """

    machine: Machine
    memory: Memory
    source: Source
    now: datetime
    only: Collection[str] | None
    thorough: bool
    is_copy: bool
    rests: bool

    def judge(self, told: Callable[[int, int], None] = tell_nobody) -> Judged:
        """The library and its models. Raises LibraryUnreachable where the source goes away meanwhile.

        `told` hears, after each model, how many of how many are done; what it raises comes through.
        """
        contents = self.source.contents()
        found = self.source.records(ABOUT_THE_LIBRARY, contents.records.get(ABOUT_THE_LIBRARY, ()), freshly=True)
        authority = replay_authority(found.records, self.source.library, self.machine.practice_key)
        authority = replace(authority, faults=self._where(authority.faults))
        in_use: dict[str, bytes] = {}
        chosen = self._chosen(contents)
        found_models: list[ModelState] = []
        for done, name in enumerate(chosen, 1):
            found_models.append(self._judge_model(name, contents, authority, in_use))
            told(done, len(chosen))
        models = tuple(found_models)
        wide = [
            *(fault for fault in contents.faults if fault.about == ABOUT_THE_LIBRARY),
            *found.faults,
            *authority.faults,
            *find_lacking(self.memory.library_heads, found.records, ABOUT_THE_LIBRARY, ""),
        ]
        times = [*found.records, *(sealed for state in models for sealed in state.records)]
        if clock := find_clock_fault(self.memory, times, self.now):
            wide.append(clock)
        return Judged(authority, found.records, models, tuple(wide), in_use)

    def _chosen(self, contents: Contents) -> list[str]:
        """The models that have records here, or had when this machine looked last."""
        names = contents.records.keys() | {model.fingerprint for model in self.memory.models}
        names -= {ABOUT_THE_LIBRARY}
        names -= self._resting(contents) if self.rests else set()
        return sorted(names if self.only is None else names & set(self.only))

    def _resting(self, contents: Contents) -> set[str]:
        about_library = contents.records.get(ABOUT_THE_LIBRARY, ())
        return {
            model.fingerprint
            for model in self.memory.models
            if model.resting
            and model.resting == resting_mark(about_library, contents.records.get(model.fingerprint, ()))
        }

    def _judge_model(
        self, fingerprint: str, contents: Contents, authority: Authority, in_use: dict[str, bytes]
    ) -> ModelState:
        digests = contents.records.get(fingerprint, ())
        found = self.source.records(fingerprint, digests, freshly=self.thorough)
        state = replay_model(fingerprint, found.records, authority, self.now)
        if state.standing is Standing.IN_USE and not found.fresh:
            found = self.source.records(fingerprint, digests, freshly=True)
            state = replay_model(fingerprint, found.records, authority, self.now) if found.faults else state
        content: bytes | Fault = b""
        is_lost = not self.is_copy and (self.thorough or fingerprint not in contents.models)
        if digests and (state.standing is Standing.IN_USE or is_lost):
            content = self.source.model(fingerprint)
            if isinstance(content, Fault):
                state = replay_model(fingerprint, found.records, authority, self.now, content)
        if isinstance(content, bytes) and content and (other := find_other_name(state, content)):
            state = refused(state, (other,))
        state = self._compare(self._placed(state), found, contents)
        if isinstance(content, bytes) and state.standing is Standing.IN_USE:
            in_use[fingerprint] = content
        return state

    def _placed(self, state: ModelState) -> ModelState:
        """The state with its sentences about what lies in this machine's own copy saying so."""
        return replace(state, faults=self._where(state.faults), reason=self._say_where(state.reason))

    def _where(self, faults: tuple[Fault, ...]) -> tuple[Fault, ...]:
        return tuple(replace(fault, sentence=self._say_where(fault.sentence)) for fault in faults)

    def _say_where(self, sentence: str) -> str:
        ending = next((one for one in (REMOVE, RESTORE) if sentence.endswith(one)), "")
        if not self.is_copy or not ending:
            return sentence
        here = (
            f"It lies in this machine’s own copy of the library ({self.machine.folder}): find out who changed that. "
            "Once the library is reached again, clinicalc library verify makes the copy anew."
        )
        return sentence.removesuffix(ending) + here

    def _compare(self, state: ModelState, found: Gathered, contents: Contents) -> ModelState:
        """The state beside what this machine has seen of the model, and beside what was wrong with the files."""
        faults = [*found.faults, *(fault for fault in contents.faults if fault.about == state.fingerprint)]
        state = _named_by_fault(state, faults)
        seen = self.memory.model(state.fingerprint)
        if seen is not None:
            name = f"{seen.id} {seen.version}" if seen.id else f"model {state.fingerprint[:12]}…"
            lacking = find_lacking(seen.heads, found.records, state.fingerprint, name)
            faults += lacking
            if not found.records:  # what was seen here says more than that nobody installed it
                state = _named_by_fault(state, lacking)
            if not state.id:
                state = replace(state, id=seen.id, version=seen.version, title=seen.title)
        return refused(state, faults)


def _named_by_fault(state: ModelState, faults: Iterable[Fault]) -> ModelState:
    """The refused state with the first of these as its reason: a damaged file says more than a missing record."""
    found = next((fault for fault in faults if fault.stops), None)
    if found is None or state.standing is not Standing.REFUSED:
        return state
    return replace(state, reason=found.sentence)


def refused(state: ModelState, faults: Iterable[Fault]) -> ModelState:
    """The state with more faults; without its approval where one of them stops. What is withdrawn stays withdrawn."""
    faults = tuple(faults)
    state = replace(state, faults=(*state.faults, *faults))
    stop = next((fault for fault in faults if fault.stops), None)
    if stop is None or state.standing in (Standing.WITHDRAWN, Standing.REFUSED):
        return state
    return replace(state, standing=Standing.REFUSED, reason=stop.sentence, approval=None)


def stopped(state: ModelState, stop: Fault | None) -> ModelState:
    """The state where something stops the whole library; that fault stands with the library's own."""
    if stop is None or state.standing is Standing.WITHDRAWN:
        return state
    return replace(state, standing=Standing.REFUSED, reason=stop.sentence, approval=None)


def held(state: ModelState, memory: Memory) -> ModelState:
    """The state as it is on this machine: held where somebody here holds what the library has in use."""
    found = hold_on(memory, state.fingerprint)
    if found is None or state.standing is not Standing.IN_USE:
        return state
    since = say_moment(read_moment(found.since))
    return replace(state, standing=Standing.HELD, reason=f"Held on this machine since {since}: {found.why}")
