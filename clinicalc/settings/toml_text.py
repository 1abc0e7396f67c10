"""Texts in a TOML file, and in sentences about one."""

from collections.abc import Iterator

_LONGEST_SHOWN = 40


def quote_toml(text: str) -> str:
    """A TOML basic string (TOML 1.0.0): quotation mark, backslash and control characters are escaped."""
    return '"' + "".join(_escaped(text)) + '"'


def shown_text(text: str) -> str:
    """The text between quotation marks, so much of it as a sentence can bear."""
    seen = "".join(character if character.isprintable() else "?" for character in text)
    return f'"{seen}"' if len(seen) <= _LONGEST_SHOWN else f'"{seen[:_LONGEST_SHOWN]}…"'


def _escaped(text: str) -> Iterator[str]:
    for character in text:
        if character in '"\\':
            yield f"\\{character}"
        elif character < " " or character == "\x7f":
            yield f"\\u{ord(character):04X}"
        else:
            yield character
