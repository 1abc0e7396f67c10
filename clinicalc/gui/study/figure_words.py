"""Figures as people read them: significant digits, the true minus, a narrow space before the per cent sign."""

from clinicalc.assessment.numerals import MINUS


def figure(value: float, digits: int = 6) -> str:
    """A figure with so many significant digits, noughts at its end among them."""
    return f"{value:#.{digits}g}".removesuffix(".").replace("-", MINUS)


def share(part: float) -> str:
    """A share of a whole in per cent."""
    return f"{100 * part:.1f}\u202f%"
