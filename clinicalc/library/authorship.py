"""Whether an approver made or brought a coefficient file: such an approval wants the practice's leave."""

from collections.abc import Iterable

from clinicalc.errors import SignatureRefused
from clinicalc.library.jws import MODEL_TYPE, read_key_id
from clinicalc.library.records import Installed


def is_author(key: str, installations: Iterable[Installed], installers: Iterable[str]) -> bool:
    """Whether the key is named by a signature on the file, or brought it while nobody signed it.

    `installations` are what was said when the file came into the library, `installers` the ids of the keys that said
    it. The signatures are not verified here, where neither the file nor anybody's trust is at hand: who is only named
    as a signer is taken for one, and a signature that names nobody is none. That a made-up signature does not open the
    way is for `approving.approve` to see, which weighs them against the file's bytes before anybody signs.
    """
    signers: list[str] = []
    for signature in (signature for installed in installations for signature in installed.signatures):
        try:
            signers.append(read_key_id(signature, MODEL_TYPE))
        except SignatureRefused:
            continue
    return key in signers or (not signers and key in installers)
