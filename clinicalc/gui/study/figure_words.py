"""Figures as people read them: significant digits, the true minus, a narrow space before the per cent sign."""

from clinicalc.assessment.numerals import MINUS


def figure(value: float, digits: int = 6) -> str:
    """A figure with so many significant digits, noughts at its end among them."""
    return f"{value:#.{digits}g}".removesuffix(".").replace("-", MINUS)


def share(part: float) -> str:
    """A share of a whole in per cent."""
    return f"{signed(100 * part, 1, plus=False)}\u202f%"


def signed(value: float, decimals: int, *, plus: bool = True) -> str:
    """A figure with so many decimals and the true minus; with a plus where it lies above nought, unless not wanted."""
    text = f"{value:{'+' if plus else ''}.{decimals}f}"
    if not float(text):
        return text.lstrip("+-")
    return text.replace("-", MINUS)
