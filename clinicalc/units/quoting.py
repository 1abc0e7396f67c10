"""Quoting a stranger's text inside a sentence without letting it change the sentence."""

_LONGEST_QUOTE = 40


def quote(text: str) -> str:
    """`text` in quotation marks, at most 40 characters of it, every character that is not plainly visible spelt out."""
    shown: list[str] = []
    room = _LONGEST_QUOTE
    for character in text:
        visible = character if character.isprintable() else " " if character.isspace() else f"[U+{ord(character):04X}]"
        if len(visible) > room:
            return f"“{''.join(shown)}…”"
        shown.append(visible)
        room -= len(visible)
    return f"“{''.join(shown)}”"
