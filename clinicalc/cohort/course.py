"""What long work of this room is told by: it says how far it is, and learns that it should stop."""

from typing import Protocol


class Course(Protocol):
    """Whoever began the work; both methods raise Stopped where stopping was asked for."""

    def say(self, words: str, done: int = 0, of: int = 0) -> None: ...
    def go_on(self) -> None: ...


class Unwatched:
    """Nobody watches, nobody stops the work."""

    def say(self, words: str, done: int = 0, of: int = 0) -> None:
        """Tell nobody."""

    def go_on(self) -> None:
        """Go on."""


UNWATCHED = Unwatched()
