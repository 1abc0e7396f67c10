"""Comparing a library with what this machine has seen of it, and bringing that forward."""

from collections.abc import Callable, Iterable, Mapping
from datetime import datetime, timedelta

from msgspec.structs import replace

from clinicalc.library.machine import Machine, read_moment, say_moment, spell_moment
from clinicalc.library.memory import Memory, SeenHead, SeenModel, resting_mark
from clinicalc.library.model_chain import AHEAD
from clinicalc.library.records import ABOUT_THE_LIBRARY, Record
from clinicalc.library.sealing import is_proved
from clinicalc.library.standing import Authority, Fault, FaultKind, ModelState, SealedRecord, Standing

CLOCK_TOLERANCE = timedelta(minutes=2)
"""How far this machine's own clock may go back: it is set by its network now and then."""
_OFTEN_ENOUGH = timedelta(minutes=1)
"""The time seen is written down no more often than this."""
_WORDS = {
    "founding": "founding record",
    "approvers": "list of approvers",
    "policy": "policy",
    "key_revoked": "revocation of a key",
    "installed": "installation",
    "approved": "approval",
    "withdrawn": "withdrawal",
    "commented": "remark",
}


def find_lacking(
    heads: Iterable[SeenHead], present: Iterable[SealedRecord], about: str, name: str
) -> tuple[Fault, ...]:
    """A fault for each record that this machine has seen and that is not among those present."""
    there = {sealed.digest for sealed in present}
    return tuple(_lacking(head, about, name) for head in heads if head.digest not in there)


def find_clock_fault(memory: Memory, records: Iterable[SealedRecord], now: datetime) -> Fault | None:
    """A stop where `now` lies before a time that this machine has seen.

    On a machine that has not yet found the library sound, and so knows nothing else about its clock, the times of all
    proved records count; afterwards those of `records` about the library. (A record about a model that lies in the
    future is a fault of that model: one wrong clock elsewhere does not stop a practice.)
    """
    seen = [(read_moment(memory.latest), CLOCK_TOLERANCE, "the library was last opened on this machine")]
    seen += [
        (read_moment(sealed.record.written), AHEAD, f"{sealed.record.name} signed the record {sealed.digest[:12]}…")
        for sealed in records
        if is_proved(sealed) and (not memory.verified or sealed.record.about == ABOUT_THE_LIBRARY)
    ]
    latest, tolerance, what = max(seen, key=lambda one: one[0] - one[1])
    if now >= latest - tolerance:
        return None
    sentence = (
        f"This computer’s clock says {say_moment(now)}, and {what} at {say_moment(latest)}. One of the two is wrong, "
        "so no review date can be relied on. Set the clock; if it is right now and was wrong then, join the library "
        "again."
    )
    return Fault(FaultKind.CLOCK_SET_BACK, ABOUT_THE_LIBRARY, sentence)


def brought_forward(
    memory: Memory,
    machine: Machine,
    authority: Authority,
    present: Iterable[SealedRecord],
    states: Iterable[ModelState],
    now: datetime,
    *,
    sound: bool,
) -> Memory:
    """The memory after an opening; `present` are the records about the library that were found.

    `sound`: the library itself was read whole and nothing about it stops.
    """
    present = tuple(present)
    models = {model.fingerprint: model for model in memory.models}
    for state in states:
        old = models.get(state.fingerprint)
        heads = _forward(old.heads if old else (), state.heads, state.records, lambda r: r.follows.model, now)
        if heads:
            label = state if state.id or old is None else old
            mark = _mark(state, present)
            models[state.fingerprint] = SeenModel(
                state.fingerprint, label.id, label.version, label.title, heads, resting=mark
            )
    return replace(
        memory,
        place=str(machine.place),
        library_heads=_forward(memory.library_heads, authority.heads, present, lambda r: r.follows.library, now),
        models=tuple(models[fingerprint] for fingerprint in sorted(models)),
        latest=_later(memory.latest, now),
        verified=_later(memory.verified, now) if sound else memory.verified,
    )


def _mark(state: ModelState, about_library: Iterable[SealedRecord]) -> str:
    """The mark of a model that cannot come into use without another record; "" for any other."""
    if state.standing not in (Standing.WAITING, Standing.WITHDRAWN) or any(fault.stops for fault in state.faults):
        return ""
    return resting_mark((one.digest for one in about_library), (one.digest for one in state.records))


def _forward(
    seen: tuple[SeenHead, ...],
    heads: tuple[str, ...],
    present: Iterable[SealedRecord],
    read_follows: Callable[[Record], tuple[str, ...]],
    now: datetime,
) -> tuple[SeenHead, ...]:
    """The new heads, and of the old ones those that no new one follows: what is gone or broken is not forgotten."""
    records = {sealed.digest: sealed for sealed in present}
    proved = [digest for digest in heads if digest in records and is_proved(records[digest])]
    followed = _all_before(proved, records, read_follows)
    kept = {head.digest: head for head in seen if head.digest not in followed}
    for digest in proved:
        kept.setdefault(digest, _seen(records[digest], now))
    return tuple(kept[digest] for digest in sorted(kept))


def _all_before(
    heads: Iterable[str], records: Mapping[str, SealedRecord], read_follows: Callable[[Record], tuple[str, ...]]
) -> set[str]:
    before = set[str]()
    waiting = list(heads)
    while waiting:
        sealed = records.get(waiting.pop())
        new = set(read_follows(sealed.record)) - before if sealed is not None else set[str]()
        before |= new
        waiting += new
    return before


def _seen(sealed: SealedRecord, now: datetime) -> SeenHead:
    record = sealed.record
    kind = str(record.statement.__struct_config__.tag)
    return SeenHead(sealed.digest, kind, record.name, record.written, spell_moment(now))


def _later(moment: str, now: datetime) -> str:
    if moment and now < read_moment(moment) + _OFTEN_ENOUGH:
        return moment
    return spell_moment(now)


def _lacking(head: SeenHead, about: str, name: str) -> Fault:
    what = _WORDS.get(head.kind, "record")
    of = "" if about == ABOUT_THE_LIBRARY else f" of {name}"
    gives = "no model gives a number" if about == ABOUT_THE_LIBRARY else f"{name} gives no number"
    sentence = (
        f"The library lacks the {what}{of} that {head.name} signed on {say_moment(read_moment(head.written))} "
        f"(record {head.digest[:12]}…). This machine saw it on {say_moment(read_moment(head.seen))}; since then it was "
        f"removed, or an older copy of the library was put in place. Until it is back {gives} here. Bring it "
        "back from another copy of the library, or ask who looks after it."
    )
    return Fault(FaultKind.LACKS_WHAT_WAS_SEEN, about, sentence, head.digest)
