"""The garbage collector rests as long as somebody asked for it, and no longer."""

import gc
from collections.abc import Iterator
from weakref import WeakSet

import pytest

from clinicalc.gui import resting_collector as resting

pytestmark = pytest.mark.gui


class Asking:
    """Somebody who waits for a share; a ring of its own, so that only a collection can end it."""

    def __init__(self) -> None:
        self.ring = self


@pytest.fixture(autouse=True)
def _nobody_waits_before(monkeypatch: pytest.MonkeyPatch) -> Iterator[None]:
    """Windows of other tests may still be waiting."""
    monkeypatch.setattr(resting, "_waiting", WeakSet())
    was_enabled = gc.isenabled()
    gc.enable()
    yield
    assert gc.isenabled()
    if not was_enabled:
        gc.disable()


def test_it_works_again_when_the_last_one_is_done() -> None:
    resting.rest()
    resting.rest()
    resting.resume()
    assert not gc.isenabled()
    resting.resume()
    assert gc.isenabled()


def test_it_rests_until_what_is_waited_for_has_answered() -> None:
    asking = Asking()
    resting.rest_for(asking)
    resting.rest()
    resting.resume()
    assert not gc.isenabled()
    resting.rest_for(asking)
    resting.resume_for(asking)
    assert gc.isenabled()


def test_who_is_gone_waits_for_nothing() -> None:
    resting.rest_for(Asking())
    assert not gc.isenabled()
    resting.rest()
    resting.resume()
    assert gc.isenabled()


def test_one_answer_does_not_end_the_waiting_of_another() -> None:
    one, other = Asking(), Asking()
    resting.rest_for(one)
    resting.rest_for(other)
    resting.resume_for(one)
    assert not gc.isenabled()
    resting.resume_for(other)
