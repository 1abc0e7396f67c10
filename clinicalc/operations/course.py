"""The course of a piece of long work: how far it is, and whether somebody asked it to stop."""

from collections.abc import Callable
from dataclasses import dataclass, field
from threading import Event

from clinicalc.errors import Stopped


@dataclass(frozen=True, slots=True)
class Progress:
    """What is being done, and how many of how many parts are done; `of` is 0 where nobody can know."""

    words: str
    done: int = 0
    of: int = 0


def _tell_nobody(_: Progress) -> None:
    """Nobody watches."""


@dataclass(frozen=True, slots=True)
class Course:
    """Handed to long work, which tells it how far it is; `tell` is called in the thread of the work."""

    tell: Callable[[Progress], None] = _tell_nobody
    _stop: Event = field(default_factory=Event)

    def say(self, words: str, done: int = 0, of: int = 0) -> None:
        """Tell how far the work is. Raises Stopped where somebody asked for that."""
        self.go_on()
        self.tell(Progress(words, done, of))

    def go_on(self) -> None:
        """Nothing, unless somebody asked the work to stop: then Stopped. To be called where stopping leaves no half."""
        if self._stop.is_set():
            raise Stopped("it was stopped.", do="Nothing was changed by what was not finished.")

    def stop(self) -> None:
        """Ask the work to stop at the next place where it can; from any thread."""
        self._stop.set()
