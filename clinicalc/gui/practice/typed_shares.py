"""Shares as a person types them among the settings: "95", "95 %", "0.95"."""

from decimal import Decimal, InvalidOperation

from clinicalc.errors import UsageError
from clinicalc.units.quoting import quote

_NARROW = "\N{NARROW NO-BREAK SPACE}"


def read_share(text: str, name: str) -> float:
    """The share that is typed, in percent where it has the sign or is above 1. Raises UsageError where it is none."""
    plain = text.strip()
    has_sign = plain.endswith("%")
    digits = plain.removesuffix("%").strip().replace(",", ".").replace("\N{MINUS SIGN}", "-")
    try:
        number = Decimal(digits)
    except InvalidOperation:
        number = Decimal("NaN")
    if not number.is_finite() or not digits.isascii():
        raise UsageError(f"{name} {quote(text)} is not a number.", do=f"Write it such as 95{_NARROW}% or 0.95.")
    return float(number / 100 if has_sign or number > 1 else number)  # divided as typed: 99.9 is 0.999 to the last bit


def share_words(share: float) -> str:
    """The share in percent, with as many digits as it has."""
    return f"{(Decimal(repr(share)) * 100).normalize():f}{_NARROW}%"
