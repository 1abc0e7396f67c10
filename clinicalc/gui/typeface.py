"""The one typeface of the window, from the shipped files."""

from functools import cache

from PySide6.QtGui import QFont, QFontDatabase

from clinicalc.errors import ShippedFileMissing
from clinicalc.resources import read_shipped

FAMILY = "Source Sans 3"
_FILES = ("resources/fonts/SourceSans3-Regular.ttf", "resources/fonts/SourceSans3-Semibold.ttf")

CAPTION, UNIT, BASE, VALUE, HEADLINE, TITLE, PERCENT_SIGN, NUMBER = 13, 14, 15, 16, 17, 20, 32, 76


def load_typeface() -> None:
    """Make the shipped fonts known to Qt. Raises ShippedFileMissing when one is missing or damaged."""
    for name in _FILES:
        if QFontDatabase.addApplicationFontFromData(read_shipped(name)) < 0:
            raise ShippedFileMissing(
                f"the font {name} of this installation is damaged.",
                do="Install clinicalc again from its wheel or checkout.",
            )


def face(pixels: int = BASE, *, semibold: bool = False) -> QFont:
    """The font at a size in whole pixels: figures of one width, no hinting, no kerning, so that columns stand still."""
    return QFont(_made(pixels, semibold=semibold))


@cache
def _made(pixels: int, *, semibold: bool) -> QFont:
    font = QFont(FAMILY)
    font.setPixelSize(pixels)
    font.setWeight(QFont.Weight.DemiBold if semibold else QFont.Weight.Normal)
    font.setHintingPreference(QFont.HintingPreference.PreferNoHinting)
    font.setKerning(False)
    font.setFeature(QFont.Tag.fromString("tnum"), 1)
    return font
