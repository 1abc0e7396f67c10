"""The fingerprint of a coefficient file: SHA-256 over the canonical bytes (RFC 8785) of its `format` and `model`."""

import hashlib
from collections.abc import Mapping

import msgspec
import rfc8785

from clinicalc.coefficients.schema import CoefficientFile


def canonical_bytes(content: CoefficientFile) -> bytes:
    """The RFC 8785 bytes of {"format", "model"}; signatures and the layout of the file are left out."""
    return canonical_bytes_of(msgspec.to_builtins(content))


def canonical_bytes_of(parsed: Mapping[str, object]) -> bytes:
    """The same from a parsed file (dicts, lists, texts and finite numbers up to 2^53 − 1)."""
    return rfc8785.dumps({"format": parsed["format"], "model": parsed["model"]})  # type: ignore[dict-item]


def fingerprint_of(canonical: bytes) -> str:
    """64 lower-case hexadecimal digits."""
    return hashlib.sha256(canonical).hexdigest()


def group_fingerprint(fp: str, groups: int = 16) -> str:
    """The first `groups` groups of four digits, parted by plain spaces, for reading aloud: "1a2b 3c4d 5e6f"."""
    return " ".join(fp[start : start + 4] for start in range(0, 4 * groups, 4) if fp[start : start + 4])
