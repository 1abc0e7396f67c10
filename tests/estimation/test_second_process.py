"""The second process: the same figures, started from anywhere, and gone whatever happens to the first."""

import os
import signal
import subprocess
import sys
import time
from collections.abc import Callable, Iterator
from contextlib import contextmanager
from dataclasses import dataclass
from pathlib import Path
from threading import Thread

import numpy as np
import pytest

from clinicalc.errors import Stopped
from clinicalc.estimation.optimism import Block, Bootstrap, Compared, Lost, Measures, Replicate
from clinicalc.estimation.second_process import work_out
from tests.estimation.test_bootstrap_references import repeated_birthwt, repeated_lung

ROOT = Path(__file__).parents[2]

proc_only = pytest.mark.skipif(not Path("/proc/self/stat").exists(), reason="children are looked up in /proc")


def _tell_nobody(done: int) -> None:
    """Nobody watches."""


def children(parent: int) -> list[int]:
    """The processes that a process started and that are still there."""
    found = []
    for place in Path("/proc").iterdir():
        if place.name.isdigit():
            try:
                # the name of a program may hold spaces; what follows its bracket does not
                fields = (place / "stat").read_text(encoding="utf-8").rpartition(")")[2].split()
            except OSError:
                continue
            if int(fields[1]) == parent and fields[0] != "Z":
                found.append(int(place.name))
    return found


def wait_until(true: Callable[[], object]) -> None:
    until = time.monotonic() + 20
    while not true():
        assert time.monotonic() < until
        time.sleep(0.02)


@pytest.mark.parametrize("repeated", [repeated_birthwt(), repeated_lung()])
def test_one_process_and_two_give_the_same_bits(repeated: object) -> None:
    bootstrap = Bootstrap((repeated,), 2000 if repeated.people == 189 else 200, 5)  # type: ignore[attr-defined, arg-type]
    told: list[int] = []
    alone = work_out(bootstrap, _tell_nobody, second=False)
    assert work_out(bootstrap, told.append, second=True) == alone
    assert told == sorted(told)
    assert (told[0], told[-1]) == (0, bootstrap.replicates)


def test_more_replicates_begin_with_those_of_fewer() -> None:
    fewer = work_out(Bootstrap((repeated_lung(),), 20, 5), _tell_nobody)
    assert work_out(Bootstrap((repeated_lung(),), 30, 5), _tell_nobody)[:20] == fewer
    assert work_out(Bootstrap((repeated_lung(),), 20, 6), _tell_nobody) != fewer


@dataclass(frozen=True, slots=True)
class Slow:
    """A fit that takes its time, and says in its C which process made it, where `who` is set."""

    who: bool = True
    seconds: float = 0.05
    people: int = 3
    cluster: None = None
    at_once: int = 1

    def judge_apparent(self) -> Measures:
        return Measures(None, None, None, None)

    def judge(self, counts: np.ndarray) -> tuple[Replicate, ...]:
        time.sleep(self.seconds)
        own = Measures(float(os.getpid() if self.who else counts.sum()), None, None, None)
        return tuple(Compared(own, own) for _ in counts)


class Nameless(Slow):
    """What cannot be sent to another process."""

    def __reduce__(self) -> tuple[object, ...]:
        raise TypeError("this stays where it is")


class Deadly(Slow):
    """What ends any process but the first."""

    def judge(self, counts: np.ndarray) -> tuple[Replicate, ...]:
        if os.environ.get("TEST_FIRST_PROCESS") != str(os.getpid()):
            os._exit(3)
        return Slow.judge(self, counts)


def _processes(found: tuple[Replicate, ...]) -> set[float]:
    return {one.sample.c for one in found if isinstance(one, Compared) and one.sample.c is not None}


@proc_only
def test_both_take_part_and_one_is_left() -> None:
    found = work_out(Bootstrap((Slow(),), 60, 1), _tell_nobody, second=True)
    assert len(_processes(found)) == 2
    assert children(os.getpid()) == []


def test_little_work_stays_in_this_process() -> None:
    assert _processes(work_out(Bootstrap((Slow(),), 20, 1), _tell_nobody)) == {float(os.getpid())}


def test_what_cannot_be_sent_is_done_here() -> None:
    found = work_out(Bootstrap((Nameless(),), 30, 1), _tell_nobody, second=True)
    assert _processes(found) == {float(os.getpid())}
    assert len(found) == 30


def test_what_the_second_process_dies_of_is_done_here(monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setenv("TEST_FIRST_PROCESS", str(os.getpid()))
    found = work_out(Bootstrap((Deadly(),), 40, 1), _tell_nobody, second=True)
    assert _processes(found) == {float(os.getpid())}
    assert len(found) == 40


def test_without_a_python_to_start_it_is_done_here(monkeypatch: pytest.MonkeyPatch, tmp_path: Path) -> None:
    for executable in (str(tmp_path / "none"), ""):
        monkeypatch.setattr(sys, "executable", executable)
        found = work_out(Bootstrap((Slow(),), 20, 1), _tell_nobody, second=True)
        assert _processes(found) == {float(os.getpid())}


@proc_only
def test_stopped_it_leaves_nobody() -> None:
    def stop(done: int) -> None:
        if done > 30:
            assert children(os.getpid())
            raise Stopped("it was stopped.")

    with pytest.raises(Stopped):
        work_out(Bootstrap((Slow(),), 10_000, 1), stop, second=True)
    assert children(os.getpid()) == []


@proc_only
def test_it_works_from_another_thread() -> None:
    """As the window runs it: signals are the main thread's, and nothing here asks for one."""
    found: list[tuple[Replicate, ...]] = []
    thread = Thread(target=lambda: found.append(work_out(Bootstrap((Slow(),), 60, 1), _tell_nobody, second=True)))
    thread.start()
    thread.join()
    assert len(_processes(found[0])) == 2


SCRIPT = """
import sys
sys.path[:] = {path!r}
print("begun", flush=True)
from clinicalc.estimation.optimism import Bootstrap
from clinicalc.estimation.second_process import work_out
from tests.estimation.test_second_process import Slow
# no guard of __main__: a process that ran this anew would start processes without end
found = work_out(Bootstrap((Slow(),), {replicates}, 1), lambda done: print("done", flush=True), second=True)
print("processes", len({{one.sample.c for one in found}}), flush=True)
"""


@contextmanager
def running(folder: Path, replicates: int) -> Iterator["subprocess.Popen[str]"]:
    """A script without a guard, in a folder that holds a module of a name that ours import too."""
    (folder / "pickle.py").write_text("raise SystemExit('taken from the working folder')\n", encoding="utf-8")
    path = [str(ROOT), *(place for place in sys.path if place)]
    script = folder / "a script.py"
    script.write_text(SCRIPT.format(path=path, replicates=replicates), encoding="utf-8")
    with subprocess.Popen([sys.executable, str(script)], cwd=folder, stdout=subprocess.PIPE, text=True) as process:
        try:
            yield process
        finally:
            process.kill()


def test_nothing_of_whoever_called_is_run_again(tmp_path: Path) -> None:
    with running(tmp_path, 60) as process:
        said, _ = process.communicate(timeout=60)
    assert said.splitlines().count("begun") == 1
    assert said.splitlines()[-1] == "processes 2"


@proc_only
@pytest.mark.parametrize("how", [signal.SIGKILL, signal.SIGTERM, signal.SIGINT])
def test_killed_it_leaves_nobody(tmp_path: Path, how: signal.Signals) -> None:
    with running(tmp_path, 100_000) as process:
        wait_until(lambda: children(process.pid))
        (second,) = children(process.pid)
        time.sleep(0.5)  # it is at work by then
        process.send_signal(how)
        process.wait(timeout=20)
    wait_until(lambda: not Path(f"/proc/{second}").exists())


def test_replicates_are_spread_over_the_sets() -> None:
    sets = Bootstrap((Slow(), Slow(), Slow()), 10, 1)
    assert {number: block.set for block in sets.lay_blocks() for number in block.replicates} == {
        number: number % 3 for number in range(10)
    }
    assert Bootstrap((repeated_birthwt(),), 120, 1).lay_blocks() == (
        Block(0, tuple(range(50))),
        Block(0, tuple(range(50, 100))),
        Block(0, tuple(range(100, 120))),
    )
    assert Lost("x", ()) not in work_out(sets, _tell_nobody)
