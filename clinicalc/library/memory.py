"""What this machine has seen of one library: its newest records, the latest time, and what is held here.

The file lies outside the library, so that whoever can change the library cannot make a machine forget. It only grows
forward: a head that was seen goes when a record that follows it has been verified, and never because it is gone.
"""

import hashlib
from collections.abc import Callable, Iterable, Iterator
from contextlib import contextmanager
from datetime import datetime
from pathlib import Path
from typing import Annotated, Literal

import msgspec
from msgspec import Meta
from msgspec.structs import replace

from clinicalc.coefficients.file_types import FileStruct, Text
from clinicalc.errors import FileNotWritten, LibraryError
from clinicalc.library.machine import Machine, read_moment, spell_moment
from clinicalc.library.records import Digest, DigestOrNone, Moment
from clinicalc.library.sole_writer import sole_writer
from clinicalc.replacement import replace_file

MEMORY_FORMAT = "clinicalc.memory/1"
_MOST_BYTES = 1 << 26
_Short = Annotated[str, Meta(max_length=400)]
_MomentOrNone = Annotated[str, Meta(pattern=Moment.__metadata__[0].pattern.replace("^", "^(").replace("$", ")?$"))]


class SeenHead(FileStruct, frozen=True):
    """A record that was the newest when it was seen: its kind, who signed it, when it was written and seen here."""

    digest: Digest
    kind: _Short
    name: _Short
    written: Moment
    seen: Moment


class SeenModel(FileStruct, frozen=True):
    """The newest records about one model, and what it is called.

    `resting`: the mark (`resting_mark`) of all records from which it was last found soundly out of use; "" where it was
    in use, or something was wrong with it.
    """

    fingerprint: Digest
    id: _Short
    version: _Short
    title: _Short
    heads: tuple[SeenHead, ...]
    resting: DigestOrNone


class Hold(FileStruct, frozen=True):
    """A model that somebody stopped using on this machine."""

    fingerprint: Digest
    since: Moment
    why: Text


class Memory(FileStruct, frozen=True):
    """Everything that is kept. `verified`: when the library itself was last opened and found sound, "" for never."""

    format: Literal["clinicalc.memory/1"]
    library: Digest
    practice_key: Digest
    place: Annotated[str, Meta(max_length=4000)]
    latest: Moment
    verified: _MomentOrNone
    library_heads: tuple[SeenHead, ...] = ()
    models: tuple[SeenModel, ...] = ()
    holds: tuple[Hold, ...] = ()

    def model(self, fingerprint: str) -> SeenModel | None:
        """What was seen of one model."""
        return next((model for model in self.models if model.fingerprint == fingerprint), None)


def resting_mark(about_library: Iterable[str], about_model: Iterable[str]) -> str:
    """What stands for exactly these records, by digest, in any order: from the same ones the same is concluded."""
    joined = ",".join(sorted(about_library)) + ";" + ",".join(sorted(about_model))
    return hashlib.sha256(joined.encode()).hexdigest()


def memory_path(machine: Machine, library: str) -> Path:
    """Where the memory of the library with this id lies."""
    return machine.folder / f"memory-{library}.json"


def read_memory(machine: Machine, library: str) -> Memory | None:
    """What was seen of this library; None where it was never opened here.

    Raises LibraryError where there is a memory that cannot be read: it is never taken for an empty one.
    """
    return _read(memory_path(machine, library), library)


def memory_of_place(machine: Machine) -> Memory | None:
    """The memory of the library that was last opened at the machine's place; None where none was.

    A memory that cannot be read raises LibraryError, since it may be the one.
    """
    paths = sorted(machine.folder.glob("memory-" + "[0-9a-f]" * 64 + ".json"))
    memories = [memory for path in paths if (memory := _read(path, path.stem.removeprefix("memory-"))) is not None]
    here = [m for m in memories if m.place == str(machine.place) and m.practice_key == machine.practice_key]
    return max(here, key=lambda memory: memory.latest, default=None)


def new_memory(machine: Machine, library: str, now: datetime) -> Memory:
    """A memory of a library that was not opened here before; nothing is written."""
    return Memory(
        format="clinicalc.memory/1",
        library=library,
        practice_key=machine.practice_key,
        place=str(machine.place),
        latest=spell_moment(now),
        verified="",
    )


def begin_memory(machine: Machine, library: str, now: datetime) -> Memory:
    """To be called where a person founds or joins a library, having had the practice key read aloud.

    The records seen and the holds stay; the latest time seen begins again at `now`, so that a clock that once stood
    wrong can be put right. A memory that could not be read is set aside beside a new one. Raises FileNotWritten.
    """
    path = memory_path(machine, library)
    try:
        read_memory(machine, library)
    except LibraryError:
        _set_aside(path)
    new = new_memory(machine, library, now)
    return change_memory(
        machine,
        library,
        lambda memory: replace(
            new, library_heads=memory.library_heads, models=memory.models, holds=memory.holds, latest=spell_moment(now)
        ),
        now,
    )


def change_memory(machine: Machine, library: str, change: Callable[[Memory], Memory], now: datetime) -> Memory:
    """The memory after `change`, written whole or not at all, with nothing that another process wrote in between lost.

    Raises FileNotWritten, and LibraryError where what is there cannot be read.
    """
    path = memory_path(machine, library)
    with _said_plainly(path):
        path.parent.mkdir(parents=True, exist_ok=True)
        with sole_writer(path.with_suffix(".lock")):
            before = _read(path, library)
            after = change(before or new_memory(machine, library, now))
            if after != before:
                replace_file(path, msgspec.json.encode(after))
    return after


def _read(path: Path, library: str) -> Memory | None:
    try:
        with path.open("rb") as file:
            content = file.read(_MOST_BYTES + 1)
    except FileNotFoundError:
        return None
    except OSError as fault:
        raise _unreadable(path, f"The computer says: {fault.strerror or fault}.") from None
    try:
        memory = msgspec.json.decode(content, type=Memory)
    except (msgspec.MsgspecError, RecursionError) as fault:
        raise _unreadable(path, f"It was cut short, or changed by hand ({fault}).") from None
    if msgspec.json.encode(memory) != content:  # a name that stands twice would hide what stands first
        raise _unreadable(path, "It was changed by hand.")
    try:
        for moment in _moments(memory):
            read_moment(moment)
    except ValueError:
        raise _unreadable(path, "It states a day or an hour that does not exist.") from None
    if memory.library != library:
        raise _unreadable(path, "It is the memory of another library.")
    return memory


def _moments(memory: Memory) -> Iterator[str]:
    yield memory.latest
    yield from filter(None, [memory.verified])
    for head in (*memory.library_heads, *(head for model in memory.models for head in model.heads)):
        yield from (head.written, head.seen)
    yield from (held.since for held in memory.holds)


def _unreadable(path: Path, why: str) -> LibraryError:
    return LibraryError(
        "what this machine remembers of the library cannot be read, so no approved model is used.",
        where=str(path),
        why=why,
        do="Ask who looks after the library. clinicalc library join sets this file aside and begins a new one.",
    )


def _set_aside(path: Path) -> None:
    number = 1
    while (kept := path.with_name(f"{path.stem}-{number}{path.suffix}")).exists():
        number += 1
    with _said_plainly(path):
        path.rename(kept)


@contextmanager
def _said_plainly(path: Path) -> Iterator[None]:
    try:
        yield
    except OSError as fault:
        raise FileNotWritten(
            "what this machine has seen of the library could not be kept.",
            where=str(path),
            why=f"The computer says: {fault.strerror or fault}.",
            do="Without it no approved model is used. Make room there, or ask who looks after this computer.",
        ) from None
