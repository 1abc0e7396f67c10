"""Base64url without padding (RFC 4648, section 5; RFC 7515, section 2), in which each value has one spelling only."""

import base64
import re

_LETTERS = re.compile(r"[A-Za-z0-9_-]*")


def encode(data: bytes) -> str:
    """The data in base64url, without padding."""
    return base64.urlsafe_b64encode(data).rstrip(b"=").decode("ascii")


def decode(text: str) -> bytes | None:
    """The data that `text` spells, None where it is not the one spelling that `encode` gives.

    Padding, other letters, line breaks and left-over bits that are not nought are refused: a second spelling of the
    same bytes would be a second name for the same thing.
    """
    if not _LETTERS.fullmatch(text) or len(text) % 4 == 1:
        return None
    data = base64.urlsafe_b64decode(text + "=" * (-len(text) % 4))
    return data if encode(data) == text else None
