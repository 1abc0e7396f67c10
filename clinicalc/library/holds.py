"""Holding a model on this machine: anybody at the bedside may, without a key, because it only ever takes away."""

from datetime import datetime

from msgspec.structs import replace

from clinicalc.errors import LibraryError
from clinicalc.library.machine import Machine, spell_moment
from clinicalc.library.memory import Hold, Memory, change_memory, memory_of_place

LONGEST_WHY = 4000


def hold(machine: Machine, fingerprint: str, why: str, now: datetime) -> Hold:
    """From now on the model gives no number on this machine. A model that is held already keeps its first reason.

    Raises LibraryError where no reason is given or this machine has not opened the library yet, and FileNotWritten.
    """
    reason = why.strip()
    if not reason or len(reason) > LONGEST_WHY:
        raise LibraryError(
            "a hold needs its reason." if not reason else f"the reason has {len(reason)} characters.",
            why=f"Whoever meets the held model reads it; up to {LONGEST_WHY} characters.",
            do="Say what is wrong with the model.",
        )
    new = Hold(fingerprint=fingerprint, since=spell_moment(now), why=reason)
    kept = change_memory(machine, _known(machine).library, lambda memory: _with(memory, new), now)
    return next(held for held in kept.holds if held.fingerprint == fingerprint)


def release(machine: Machine, fingerprint: str, now: datetime) -> Hold:
    """The hold is over, and the model stands again where the library says; what was held comes back.

    Raises LibraryError where the model is not held here, and FileNotWritten.
    """
    memory = _known(machine)
    held = hold_on(memory, fingerprint)
    if held is None:
        raise LibraryError(
            "this model is not held on this machine.",
            where=fingerprint[:16] + "…",
            do="A model that the library itself withdrew is put back in use by an approval only.",
        )
    change_memory(machine, memory.library, lambda memory: _without(memory, fingerprint), now)
    return held


def hold_on(memory: Memory, fingerprint: str) -> Hold | None:
    """The hold on one model, None for none."""
    return next((held for held in memory.holds if held.fingerprint == fingerprint), None)


def _known(machine: Machine) -> Memory:
    memory = memory_of_place(machine)
    if memory is None:
        raise LibraryError(
            "this machine has not opened the library yet.",
            where=str(machine.place),
            do="Open it once, for instance with: clinicalc library list.",
        )
    return memory


def _with(memory: Memory, new: Hold) -> Memory:
    if hold_on(memory, new.fingerprint):
        return memory
    return replace(memory, holds=(*memory.holds, new))


def _without(memory: Memory, fingerprint: str) -> Memory:
    return replace(memory, holds=tuple(held for held in memory.holds if held.fingerprint != fingerprint))
