"""The garbage collector rests while a thread beside the window works: a widget collected there would crash Qt.

Several may ask for that at once; it works again when the last of them is done.
"""

import gc
from weakref import WeakSet

_resting: list[int] = [0]
_waiting: WeakSet[object] = WeakSet()


def rest() -> None:
    """No garbage is collected by itself until `resume` was called as often."""
    _resting[0] += 1
    gc.disable()


def resume() -> None:
    """The end of one `rest`; must be called in the window's own thread."""
    _resting[0] -= 1
    _settle()


def rest_for(whom: object) -> None:
    """No garbage is collected by itself on behalf of `whom`, whose thread may outlast its answer; now it is by hand."""
    is_new = whom not in _waiting
    _waiting.add(whom)
    gc.disable()
    if is_new and not _resting[0]:
        gc.collect()


def resume_for(whom: object) -> None:
    """Nothing of `whom` is waited for any more."""
    _waiting.discard(whom)
    _settle()


def _settle() -> None:
    if _resting[0]:
        return
    if _waiting:
        gc.collect()  # by hand; a window that was closed while it waited is garbage too, found by nobody else
    if not _waiting:
        gc.enable()
