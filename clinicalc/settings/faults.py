"""What a text among the settings may not hold, since it is printed or shown in one line."""

import unicodedata

_UNSEEN = ("Cc", "Cf", "Cs", "Zl", "Zp")
"""Unicode categories of what is not seen or breaks a line: control, format (bidirectional ones too), separators."""


def fault_of_unseen(text: str) -> str:
    """The end of a sentence that names the first character that is not seen or breaks the line, or ""."""
    for character in text:
        if unicodedata.category(character) in _UNSEEN:
            return f"U+{ord(character):04X}, a character that is not seen or breaks the line."
    return ""
