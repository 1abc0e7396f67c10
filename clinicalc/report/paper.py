"""The sheets that a print is laid out for."""

from enum import StrEnum


class Paper(StrEnum):
    """A size of paper; the values are the names that people know."""

    A4 = "A4"
    LETTER = "Letter"

    @property
    def width(self) -> float:
        """Points; A4 is 210 mm (ISO 216), Letter 8.5 inches (ANSI/ASME Y14.1)."""
        return 595.28 if self is Paper.A4 else 612.0

    @property
    def height(self) -> float:
        """Points; A4 is 297 mm (ISO 216), Letter 11 inches (ANSI/ASME Y14.1)."""
        return 841.89 if self is Paper.A4 else 792.0
