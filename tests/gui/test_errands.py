"""Long work beside the window: what comes back, what is told, how it is stopped, and what happens when nobody waits."""

import gc
import threading
from collections.abc import Iterator

import pytest
import shiboken6
from PySide6.QtCore import QThread
from pytestqt.qtbot import QtBot

from clinicalc.errors import ClinicalcError, LibraryError, Stopped
from clinicalc.gui import resting_collector
from clinicalc.gui.errands import Errands
from clinicalc.operations.course import Course, Progress


@pytest.fixture
def errands(qtbot: QtBot) -> Iterator[Errands]:
    made = Errands()
    yield made
    made.leave()
    qtbot.waitUntil(lambda: not made.is_busy)


class Heard:
    """What the window was told, and in which thread."""

    def __init__(self) -> None:
        self.results: list[object] = []
        self.errors: list[ClinicalcError] = []
        self.threads: list[threading.Thread] = []

    def done(self, result: object) -> None:
        self.results.append(result)
        self.threads.append(threading.current_thread())

    def failed(self, error: ClinicalcError) -> None:
        self.errors.append(error)
        self.threads.append(threading.current_thread())


def test_the_result_comes_back_in_the_windows_own_thread(qtbot: QtBot, errands: Errands) -> None:
    heard, worked_in = Heard(), []

    def work(course: Course) -> int:
        worked_in.append(threading.current_thread())
        return 6 * 7

    with qtbot.waitSignal(errands.ended):
        assert errands.run("Reckon", work, heard.done, heard.failed)
    assert heard.results == [42]
    assert heard.errors == []
    assert heard.threads == [threading.main_thread()]
    assert worked_in != [threading.main_thread()]


def test_progress_is_told_in_order(qtbot: QtBot, errands: Errands) -> None:
    heard, told = Heard(), list[Progress]()
    errands.moved.connect(told.append)

    def work(course: Course) -> None:
        for part in range(3):
            course.say("Reading", part, 3)

    with qtbot.waitSignal(errands.ended):
        errands.run("Read", work, heard.done, heard.failed)
    assert told == [Progress("Reading", part, 3) for part in range(3)]


def test_an_error_of_the_program_is_handed_over(qtbot: QtBot, errands: Errands) -> None:
    heard = Heard()

    def work(course: Course) -> None:
        raise LibraryError("the folder is gone.")

    with qtbot.waitSignal(errands.ended):
        errands.run("Read", work, heard.done, heard.failed)
    assert [str(error) for error in heard.errors] == ["the folder is gone."]
    assert heard.results == []


def test_work_that_is_asked_to_stop_ends_with_stopped(qtbot: QtBot, errands: Errands) -> None:
    heard, began = Heard(), threading.Event()

    def work(course: Course) -> None:
        began.set()
        while True:
            QThread.msleep(1)
            course.go_on()

    with qtbot.waitSignal(errands.ended):
        errands.run("Wait", work, heard.done, heard.failed)
        assert began.wait(5)
        errands.stop()
    assert [type(error) for error in heard.errors] == [Stopped]


def test_a_second_errand_is_refused_while_one_runs(qtbot: QtBot, errands: Errands) -> None:
    heard, gate = Heard(), threading.Event()
    with qtbot.waitSignal(errands.ended):
        assert errands.run("First", lambda _: gate.wait(5), heard.done, heard.failed)
        assert errands.is_busy
        assert not errands.run("Second", lambda _: 2, heard.done, heard.failed)
        gate.set()
    assert heard.results == [True]
    assert not errands.is_busy


def test_nobody_is_called_once_the_window_has_left(qtbot: QtBot, errands: Errands) -> None:
    heard, gate = Heard(), threading.Event()
    with qtbot.waitSignal(errands.ended):
        errands.run("Late", lambda _: gate.wait(5), heard.done, heard.failed)
        errands.leave()
        gate.set()
    assert heard.results == []
    assert heard.errors == []


def test_no_garbage_is_collected_while_it_runs(qtbot: QtBot, errands: Errands) -> None:
    heard, seen = Heard(), list[bool]()
    was = gc.isenabled()
    try:
        gc.enable()
        with qtbot.waitSignal(errands.ended):
            errands.run("Look", lambda _: seen.append(gc.isenabled()), heard.done, heard.failed)
        assert seen == [False]
        assert gc.isenabled()
    finally:
        (gc.enable if was else gc.disable)()


class Watched:
    """Notes in which thread it was let go for good; a widget must be let go in the window's own."""

    def __init__(self, noted: list[threading.Thread]) -> None:
        self._noted = noted

    def __del__(self) -> None:
        self._noted.append(threading.current_thread())


@pytest.mark.parametrize("has_left", [False, True], ids=["waited for", "left"])
def test_what_the_work_was_given_dies_in_the_windows_own_thread(qtbot: QtBot, errands: Errands, has_left: bool) -> None:
    """A form that went while it worked is held by nothing else than its work."""
    heard, noted = Heard(), list[threading.Thread]()

    def send_off() -> None:
        given = Watched(noted)
        errands.run("Look", lambda _: given is None, heard.done, heard.failed)

    for _ in range(20):
        with qtbot.waitSignal(errands.ended):
            send_off()
            if has_left:
                errands.leave()
    assert noted == [threading.main_thread()] * 20


def test_what_a_closing_window_waits_for_dies_in_its_thread_too(qtbot: QtBot, errands: Errands) -> None:
    noted, gate = list[threading.Thread](), threading.Event()

    def send_off() -> None:
        given, heard = Watched(noted), Heard()
        errands.run("Look", lambda _: gate.wait(5) and given, heard.done, heard.failed)

    send_off()
    errands.leave()
    gate.set()
    errands.wait(5)
    assert not errands.is_busy
    qtbot.wait(10)
    assert noted == [threading.main_thread()]


def test_a_fault_of_the_program_itself_reaches_the_hook(qtbot: QtBot, errands: Errands) -> None:
    heard = Heard()

    def work(course: Course) -> None:
        raise ZeroDivisionError("typed by somebody")

    with qtbot.capture_exceptions() as caught, qtbot.waitSignal(errands.ended):
        errands.run("Fail", work, heard.done, heard.failed)
    assert [kind for kind, _, _ in caught] == [ZeroDivisionError]
    assert heard.results == []
    (told,) = heard.errors
    assert "a fault of its own (ZeroDivisionError)" in str(told)
    assert "typed by somebody" not in str(told)


def test_a_window_that_is_gone_is_not_called(qtbot: QtBot) -> None:
    """What carries the answer is deleted while the work goes on; the thread ends in peace."""
    errands, heard, gate = Errands(), Heard(), threading.Event()

    def work(course: Course) -> int:
        gate.wait(5)
        course.tell(Progress("Reading"))
        return 1

    errands.run("Late", work, heard.done, heard.failed)
    (thread,) = [one for one in threading.enumerate() if one.name == "Late"]
    errands.leave()
    shiboken6.delete(errands)
    gate.set()
    thread.join(5)
    qtbot.wait(20)
    assert not thread.is_alive()
    assert (heard.results, heard.errors) == ([], [])
    resting_collector.resume()  # nobody was left to do it


def test_a_window_that_closes_lets_the_work_come_to_its_end(errands: Errands) -> None:
    heard, done = Heard(), list[int]()

    def write(course: Course) -> None:
        QThread.msleep(50)
        done.append(1)

    errands.run("Write", write, heard.done, heard.failed)
    errands.leave()
    errands.wait(5)
    assert done == [1]
    assert not errands.is_busy
    assert heard.results == []
