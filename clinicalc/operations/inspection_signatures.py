"""Who signed a coefficient file, and what each signature is worth on this machine."""

from clinicalc.coefficients.reader import ReadFile
from clinicalc.errors import ClinicalcError
from clinicalc.library.file_signatures import FileSignature, Worth, weigh_signatures
from clinicalc.library.keys import group_key_id
from clinicalc.library.trust_store import TrustStore, read_trust

_WORDS = {
    Worth.TRUSTED: "{name}, whose key is trusted on this machine",
    Worth.REVOKED: "does not count: the key of {name} was revoked on this machine",
    Worth.UNKNOWN: "not checked: its key is not trusted on this machine, and anybody can make such a signature",
    Worth.REFUSED: "does not count: {why}",
}


def signature_lines(read: ReadFile) -> list[str]:
    """Each signature of the file in two lines or three: what it is worth here, and the id of its key."""
    if not read.content.signatures:
        return ["none: nobody has signed this file"]
    lines = list[str]()
    try:
        trust = read_trust()
    except ClinicalcError as fault:
        trust = TrustStore()
        lines.append(f"No publisher is trusted now. {fault}")
    for signature in weigh_signatures(read, trust):
        lines += _lines_of(signature)
    return lines


def _lines_of(signature: FileSignature) -> list[str]:
    said = _WORDS[signature.worth].format(name=signature.name, why=signature.why)
    if not signature.key:
        return [said]
    grouped = group_key_id(signature.key)
    return [said, f"    key {grouped[:39]}", f"        {grouped[40:]}"]
