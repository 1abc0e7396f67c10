"""A bootstrap worked out on two cores: this process, and a second one that is started for it and ends with it.

The second is the same Python with a line that imports this module and nothing of whoever called: no `__main__` is run
again, and nothing is copied of a window or of threads. It is told what to do through its standard input, and leaves at
once when that closes, also where this process was killed. Whatever goes wrong with it, the work is done here. Draws
belong to the number of the replicate, and blocks are the same for both, so that figures are the same to the last bit.
"""

import os
import pickle
import signal
import subprocess
import sys
from collections import deque
from collections.abc import Callable, Iterator
from contextlib import contextmanager, suppress
from dataclasses import dataclass, field
from queue import SimpleQueue
from threading import Lock, Thread
from time import perf_counter
from typing import BinaryIO

from clinicalc.estimation.optimism import Bootstrap, Replicate

WORTH_IT = 2.0
"""Seconds of work left from which a second process, half a second to start, is worth it."""

_LINE = "import sys; sys.path[:] = sys.argv[1:]; from clinicalc.estimation.second_process import serve; serve()"


@contextmanager
def one_thread() -> Iterator[None]:
    """BLAS with one thread: tall thin products gain nothing from a second, and lose much."""
    from threadpoolctl import threadpool_limits  # type: ignore[import-untyped]

    with threadpool_limits(limits=1, user_api="blas"):
        yield


def work_out(
    bootstrap: Bootstrap, advance: Callable[[int], None], *, second: bool | None = None
) -> tuple[Replicate, ...]:
    """Every replicate, in the order of their numbers; `advance` is told how many are done, and may raise to stop.

    `second`: whether a second process helps; left out, where there is a second core and enough to do.
    """
    blocks = bootstrap.lay_blocks()
    shared = _Shared(bootstrap, deque(range(len(blocks))))
    others: list[_Second] = []
    began = perf_counter()
    try:
        with one_thread():
            advance(0)
            while shared.count() < len(blocks):
                place = shared.take(first=True)
                if place is not None:
                    shared.put(place, bootstrap.work(blocks[place]))
                    if not others and _is_worth_it(second, perf_counter() - began, shared.count(), len(blocks)):
                        others.append(_Second(shared))
                for other in others if place is None else ():
                    other.wait()
                advance(shared.done)
    finally:
        for other in others:
            other.end()
    by_number: dict[int, Replicate] = {}
    for place, block in enumerate(blocks):
        by_number |= dict(zip(block.replicates, shared.found[place], strict=True))
    return tuple(by_number[number] for number in sorted(by_number))


def serve() -> None:
    """The second process: blocks by their places from standard input, replicates to standard output."""
    signal.signal(signal.SIGINT, signal.SIG_IGN)  # whoever stops the first process ends this one too
    source, target = sys.stdin.buffer, sys.stdout.buffer
    sys.stdout = sys.stderr
    asked: SimpleQueue[int] = SimpleQueue()
    bootstrap: Bootstrap = pickle.load(source)
    Thread(target=_listen, args=(source, asked), daemon=True).start()
    blocks = bootstrap.lay_blocks()
    with one_thread():
        while True:
            pickle.dump(bootstrap.work(blocks[asked.get()]), target)
            target.flush()


def _listen(source: BinaryIO, asked: "SimpleQueue[int]") -> None:
    """Wishes as they come; the end of them is the end of the process, in the midst of a block too."""
    try:
        while True:
            asked.put(pickle.load(source))
    except (EOFError, OSError, pickle.UnpicklingError):
        os._exit(0)


def _is_worth_it(second: bool | None, seconds: float, done: int, blocks: int) -> bool:
    if second is not None:
        return second
    left = seconds / done * (blocks - done)
    return left > WORTH_IT and _count_cores() > 1


def _count_cores() -> int:
    if hasattr(os, "sched_getaffinity"):
        return len(os.sched_getaffinity(0))
    return os.cpu_count() or 1


@dataclass(slots=True, eq=False)
class _Shared:
    """Places of blocks that nobody has taken, and what was found of the others."""

    bootstrap: Bootstrap
    left: deque[int]
    found: dict[int, tuple[Replicate, ...]] = field(default_factory=dict)
    _lock: Lock = field(default_factory=Lock)

    def take(self, *, first: bool) -> int | None:
        """The first or the last that is left."""
        with self._lock:
            if not self.left:
                return None
            return self.left.popleft() if first else self.left.pop()

    def give_back(self, place: int) -> None:
        """What could not be done is done by another."""
        with self._lock:
            self.left.append(place)

    def put(self, place: int, found: tuple[Replicate, ...]) -> None:
        """A block is done."""
        with self._lock:
            self.found[place] = found

    def count(self) -> int:
        """How many blocks are done."""
        with self._lock:
            return len(self.found)

    @property
    def done(self) -> int:
        """How many replicates are done."""
        with self._lock:
            return sum(len(found) for found in self.found.values())


class _Second:
    """The second process and the thread that gives it one block after the other."""

    def __init__(self, shared: _Shared) -> None:
        self._shared = shared
        self._process = _start()
        self._thread: Thread | None = None
        if self._process is not None:
            self._thread = Thread(target=self._feed, args=(self._process,), daemon=True)
            self._thread.start()

    def wait(self) -> None:
        """Until it has nothing more to do, a tenth of a second at most."""
        if self._thread is not None:
            self._thread.join(0.1)

    def end(self) -> None:
        """No process and no thread is left."""
        if self._process is None or self._thread is None:
            return
        self._process.kill()
        self._thread.join()
        for pipe in (self._process.stdin, self._process.stdout):
            assert pipe is not None
            with suppress(OSError):  # what was still to be written has nobody to read it
                pipe.close()
        self._process.wait()

    def _feed(self, process: "subprocess.Popen[bytes]") -> None:
        assert process.stdin is not None
        assert process.stdout is not None
        place: int | None = None
        try:
            process.stdin.write(pickle.dumps(self._shared.bootstrap))
            place = self._shared.take(first=False)
            while place is not None:
                process.stdin.write(pickle.dumps(place))
                process.stdin.flush()
                self._shared.put(place, pickle.load(process.stdout))
                place = self._shared.take(first=False)
        # what cannot be sent (a function without a name), a process that died: the other one does it
        except (OSError, EOFError, ValueError, pickle.PickleError, AttributeError, TypeError):
            if place is not None:
                self._shared.give_back(place)


def _start() -> "subprocess.Popen[bytes] | None":
    """A process of this Python; None where there is none to be had, as in a program packed into one file."""
    if not sys.executable or getattr(sys, "frozen", False):
        return None
    # isolated: neither the working folder nor the environment says what is imported, but what this process has
    command = [sys.executable, "-I", "-c", _LINE, *(os.path.abspath(path) for path in sys.path if path)]
    one = dict.fromkeys(("OPENBLAS_NUM_THREADS", "OMP_NUM_THREADS", "MKL_NUM_THREADS"), "1")
    try:
        return subprocess.Popen(
            command,
            stdin=subprocess.PIPE,
            stdout=subprocess.PIPE,
            stderr=subprocess.DEVNULL,
            env={**os.environ, **one},
            creationflags=getattr(subprocess, "CREATE_NO_WINDOW", 0),
        )
    except OSError:
        return None
