"""Which model of a library a person means: by its id, or by its fingerprint."""

import re
from collections.abc import Iterable
from difflib import get_close_matches

from clinicalc.coefficients.fingerprint import group_fingerprint
from clinicalc.errors import LibraryError
from clinicalc.library.standing import ModelState, Standing
from clinicalc.units.quoting import quote

LEAST_DIGITS = 12
"""Of a fingerprint, the digits that are shown everywhere."""


def find_state(states: Iterable[ModelState], words: str, prefer: Iterable[Standing] = ()) -> ModelState:
    """The model that is meant; of several versions with one id, the only one whose standing is among `prefer`.

    Raises LibraryError where none, or more than one, is meant.
    """
    known = tuple(states)
    told = "".join(words.split()).lower()
    if re.fullmatch(f"[0-9a-f]{{{LEAST_DIGITS},64}}", told):
        found = [state for state in known if state.fingerprint.startswith(told)]
    else:
        found = [state for state in known if state.id == words.strip()]
    preferred = [state for state in found if state.standing in tuple(prefer)]
    chosen = preferred if len(found) > 1 and len(preferred) == 1 else found
    if len(chosen) == 1:
        return chosen[0]
    if chosen:
        versions = "; ".join(
            f"{state.version} ({group_fingerprint(state.fingerprint, 3)}, {state.standing.value.replace('_', ' ')})"
            for state in sorted(chosen, key=_version)
        )
        raise LibraryError(
            f"{quote(words)} names {len(chosen)} models of this library: {versions}.",
            do=f"Give the fingerprint of the one you mean, at least its first {LEAST_DIGITS} digits.",
        )
    close = get_close_matches(words.strip(), sorted({state.id for state in known}), n=1)
    raise LibraryError(
        f"{quote(words)} is no model of this library.",
        why=f"Did you mean {close[0]}?" if close else "",
        do="clinicalc library list shows them all.",
    )


def _version(state: ModelState) -> tuple[int, ...]:
    return tuple(int(part) for part in state.version.split(".") if part)
