"""Whether the records call a model what its own file calls it: nobody asks for one model and is given another."""

import msgspec

from clinicalc.library.records import Installed
from clinicalc.library.standing import Fault, FaultKind, ModelState


class _Names(msgspec.Struct, frozen=True):
    """What a coefficient file says of its name; the rest is not looked at here."""

    id: str
    version: str
    title: str


class _Named(msgspec.Struct, frozen=True):
    model: _Names


def find_other_name(state: ModelState, content: bytes) -> Fault | None:
    """A stop where id, version or title in the installation record are not those of the file; None where they agree.

    `content`: the bytes that have the model's fingerprint. A file that does not even name itself is another one's
    fault to find. A model without an installation that counts has no name to compare.
    """
    if not state.id:
        return None
    try:
        own = msgspec.json.decode(content, type=_Named).model
    except (msgspec.MsgspecError, RecursionError):
        return None
    said = (state.id, state.version, state.title)
    if said == (own.id, own.version, own.title):
        return None
    record = _installation(state)
    sentence = (
        f"The record of its installation ({record[:12]}…) calls this model “{state.title}”, {state.id} {state.version}"
        f"; the file itself is “{own.title}”, {own.id} {own.version}. One could be taken for the other, so it gives no "
        "number. Ask who installed it, and install the right file under its own name."
    )
    return Fault(FaultKind.MISNAMED_RECORD, state.fingerprint, sentence, record)


def _installation(state: ModelState) -> str:
    """The digest of the record that gave the state its name."""
    for sealed in state.records:
        said = sealed.record.statement
        if isinstance(said, Installed) and (said.id, said.version, said.title) == (
            state.id, state.version, state.title,
        ):  # fmt: skip
            return sealed.digest
    return ""
