"""Quoting a stranger's text inside a sentence without letting it change the sentence."""

_LONGEST_QUOTE = 40
_LONGEST_SHOWN = 80


def quote(text: str) -> str:
    """`text` in quotation marks, at most 40 characters of it, every character that is not plainly visible spelt out."""
    return f"“{visible(text, _LONGEST_QUOTE)}”"


def visible(text: str, longest: int = _LONGEST_SHOWN) -> str:
    """`text` trimmed and cut after `longest` characters, every character that is not plainly visible spelt out."""
    shown: list[str] = []
    room = longest
    for character in text.strip():
        one = character if character.isprintable() else " " if character.isspace() else f"[U+{ord(character):04X}]"
        if len(one) > room:
            return f"{''.join(shown)}…"
        shown.append(one)
        room -= len(one)
    return "".join(shown)
