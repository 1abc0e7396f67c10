"""Writers that are killed: at each call to the system in turn, or at a random moment. Run as a process of its own.

    python -m tests.library.dying_writers put|make|fill FOLDER      deaths before and after each call, and within writes
    python -m tests.library.dying_writers random FOLDER COUNT SEED  deaths at random moments

Writes one JSON object per death: what was called, and what the library looked like afterwards. Children are forked from
a process with one thread and kill themselves with SIGKILL, so that no clean-up of Python runs.
"""

import json
import mmap
import os
import random
import signal
import sys
import time
from collections.abc import Callable
from dataclasses import asdict, dataclass
from pathlib import Path
from typing import Any

from clinicalc.errors import LibraryError
from clinicalc.library.folder import LibraryFolder
from clinicalc.library.placing import is_part
from clinicalc.library.standing import SealedRecord
from tests.library.shelf import comment, found, founding, is_whole, model

CALLS = ("open", "write", "fsync", "close", "link", "rename", "unlink", "mkdir")
LONGEST_WAIT = 0.03
"""Seconds until a random death, at most; a write takes some milliseconds."""
DEATHS_IN_ONE = 10
"""Random deaths in one library, since each time everything in it is read."""


@dataclass(frozen=True, slots=True)
class Death:
    """One death and what was found after it. `state`: "whole", "none" (no library there), or what is wrong."""

    call: str
    moment: str
    state: str
    is_there: bool
    parts_left: int
    again: str
    """What doing the same once more came to: "done", or the sentence of the refusal."""
    was_inside: bool = False
    acknowledged: int = 0
    missing: int = 0


def die_at(count: int, moment: str, tell: Callable[[str], None]) -> None:
    """From now on, the `count`-th of CALLS is the last thing this process does."""
    seen = 0

    def wrap(name: str, system_call: Callable[..., Any]) -> Callable[..., Any]:
        def call(*arguments: Any, **options: Any) -> Any:
            nonlocal seen
            seen += 1
            if seen != count:
                return system_call(*arguments, **options)
            tell(name)
            if moment == "within" and name == "write":
                system_call(arguments[0], arguments[1][: len(arguments[1]) // 2])
            elif moment == "after":
                system_call(*arguments, **options)
            os.kill(os.getpid(), signal.SIGKILL)
            raise SystemExit  # never reached

        return call

    for name in CALLS:
        setattr(os, name, wrap(name, getattr(os, name)))


def run_and_die(work: Callable[[], None], count: int, moment: str) -> str | None:
    """The call at which the child died, None where it came to the end of its work first."""
    reading, writing = os.pipe()
    child = os.fork()
    if child == 0:
        system_write = os.write
        die_at(count, moment, lambda name: void(system_write(writing, name.encode())))
        work()
        os._exit(0)
    os.close(writing)
    _, status = os.waitpid(child, 0)
    name = os.read(reading, 100).decode()
    os.close(reading)
    if os.WIFSIGNALED(status):
        return name
    if os.WEXITSTATUS(status) or name:
        raise SystemExit(f"the child ended by itself with status {status}")
    return None


def void(_: object) -> None:
    """Nothing."""


def state_of(library: LibraryFolder) -> str:
    """ "whole", "none" where there is no library, or the words of what is wrong."""
    try:
        library.library_id()
    except LibraryError:
        return "none"
    return "whole" if is_whole(library) and not library.list_strays() else "something is wrong"


def parts_in(place: Path) -> int:
    """How many things with a passing name lie there or one folder deeper."""
    return sum(is_part(path.name) for depth in ("*", "*/*") for path in place.glob(depth))


def try_again(work: Callable[[], None]) -> str:
    """ "done", or why it was refused."""
    try:
        work()
    except LibraryError as refused:
        return str(refused)
    return "done"


def sweep(
    folder: Path, prepare: Callable[[int, str], tuple[LibraryFolder, Callable[[], None], Callable[[], bool]]]
) -> None:
    """One death for each call and moment, until the work is done before it comes to the call."""
    for moment in ("before", "within", "after"):
        for count in range(1, 500):
            library, work, is_there = prepare(count, moment)
            call = run_and_die(work, count, moment)
            if call is None:
                break
            state, there, parts = state_of(library), is_there(), parts_in(folder)
            tell(Death(call, moment, state, there, parts, try_again(work)))


def prepare_put(
    library: LibraryFolder, count: int, moment: str
) -> tuple[LibraryFolder, Callable[[], None], Callable[[], bool]]:
    """A model and a record that have not been put yet."""
    fingerprint, content = model(f"{moment} {count}" + "x" * 20_000)
    remark = comment(fingerprint, "A remark.")

    def work() -> None:
        library.put_model(fingerprint, content)
        library.put_record(remark)

    return library, work, lambda: isinstance(library.read_record(fingerprint, remark.digest), SealedRecord)


def prepare_make(place: Path, is_empty_folder: bool) -> tuple[LibraryFolder, Callable[[], None], Callable[[], bool]]:
    """A place where a library is to be made: nothing there, or an empty folder."""
    place.parent.mkdir(parents=True)
    if is_empty_folder:
        place.mkdir()
    library = LibraryFolder(place)
    return library, lambda: library.create(founding()), place.exists


def die_at_random(folder: Path, deaths: int, seed: int) -> None:
    """A child puts one thing after another; its parent kills it. What it had been told was done must be there."""
    pool: list[tuple[str, bytes | SealedRecord]] = []
    for number in range(500):
        fingerprint, content = model(f"{number}" + "x" * 5000)
        pool += [(fingerprint, content), (fingerprint, comment(fingerprint, "A remark."))]
    shared = mmap.mmap(-1, 16)  # the child's notes outlive it: whether it is inside a write, how many are done
    chance = random.Random(seed)
    for number in range(deaths):
        if number % DEATHS_IN_ONE == 0:
            library = found(folder / f"library-{number}")
            shared[:] = bytes(16)
        before = parts_in(library.path)
        child = os.fork()
        if child == 0:
            put_all(library, pool, shared)
            os._exit(1)
        time.sleep(chance.uniform(0, LONGEST_WAIT))
        os.kill(child, signal.SIGKILL)
        _, status = os.waitpid(child, 0)
        if not os.WIFSIGNALED(status):
            raise SystemExit("the child came to the end of what there was to put")
        done = int.from_bytes(shared[8:16], "little")
        was_inside, shared[0] = bool(shared[0]), 0
        missing = sum(not is_put(library, *one) for one in pool[:done])
        left = parts_in(library.path) - before
        tell(Death("", "random", state_of(library), True, left, "done", was_inside, done, missing))


def put_all(library: LibraryFolder, pool: list[tuple[str, bytes | SealedRecord]], shared: mmap.mmap) -> None:
    """Put what is not done yet, noting before and after each."""
    for number in range(int.from_bytes(shared[8:16], "little"), len(pool)):
        fingerprint, content = pool[number]
        shared[0] = 1
        if isinstance(content, bytes):
            library.put_model(fingerprint, content)
        else:
            library.put_record(content)
        shared[0] = 0
        shared[8:16] = (number + 1).to_bytes(8, "little")


def is_put(library: LibraryFolder, fingerprint: str, content: bytes | SealedRecord) -> bool:
    """Whether it can be read."""
    if isinstance(content, bytes):
        return library.read_model(fingerprint) == content
    return library.read_record(fingerprint, content.digest) == content


def tell(death: Death) -> None:
    """One line for the test."""
    sys.stdout.write(json.dumps(asdict(death)) + "\n")
    sys.stdout.flush()


def main(what: str, folder: Path, *numbers: str) -> None:
    """Do what the words ask for."""
    if what == "random":
        die_at_random(folder, int(numbers[0]), int(numbers[1]))
    elif what == "put":
        library = found(folder / "library")
        sweep(folder / "library", lambda count, moment: prepare_put(library, count, moment))
    else:
        sweep(folder, lambda count, moment: prepare_make(folder / f"{moment}-{count}" / "library", what == "fill"))


if __name__ == "__main__":
    main(sys.argv[1], Path(sys.argv[2]), *sys.argv[3:])
