"""JSON Pointers (RFC 6901) to places in a coefficient file, and the words for what stands there."""

import difflib
import functools
import re
from collections.abc import Iterable

_REFUSED = (
    "0-1f 7f-9f 2028-2029"  # controls and separators of lines and paragraphs
    # format characters (category Cf), bidirectional controls, zero-width signs and soft hyphens among them
    " ad 600-605 61c 6dd 70f 890-891 8e2 180e 200b-200f 202a-202e 2060-206f feff fff9-fffb 110bd 110cd 13430-1343f"
    " 1bca0-1bca3 1d173-1d17a e0001 e0020-e007f"
    # what else a program may leave out in showing a text (Default_Ignorable_Code_Point), variation selectors among them
    " 34f 115f-1160 17b4-17b5 180b-180d 180f 3164 fe00-fe0f ffa0 fff0-fff8 e0000-e0fff"
    " 2800 fffc"  # the blank Braille pattern, and the stand-in for an object
    # lone surrogates, private use, and code points that are no characters
    " d800-dfff e000-f8ff f0000-10ffff fdd0-fdef "
    + " ".join(f"{plane + 0xFFFE:x}-{plane + 0xFFFF:x}" for plane in range(0, 0xF0000, 0x10000))
)
# written out, not looked up: what a file may hold must not depend on the Unicode tables of one machine's Python

REFUSED_CHARACTERS = re.compile(
    f"[{''.join('-'.join(chr(int(end, 16)) for end in part.split('-')) for part in _REFUSED.split())}]"
)
"""Characters that are not seen, are seen differently by different programs, or turn a text around: they disguise it."""


def point(base: str, *parts: str | int) -> str:
    """The pointer to a place below `base`: point("/model", "equations", 0) is "/model/equations/0"."""
    return base + "".join([_step(part) if len(part) <= _SHORT else _spell_step(part) for part in map(str, parts)])


def _spell_step(part: str) -> str:
    return "/" + _shorten(visible(part)).replace("~", "~0").replace("/", "~1")


_SHORT = 64
_step = functools.lru_cache(maxsize=4096)(_spell_step)  # a file says the same few names over and over


def find_at(root: object, pointer: str) -> object:
    """What a JSON Pointer leads to below `root` (dicts, lists and tuples). Raises LookupError where that is nothing."""
    if not pointer:
        return root
    if not pointer.startswith("/"):
        raise LookupError(pointer)
    place = root
    for part in pointer[1:].split("/"):
        key = part.replace("~1", "/").replace("~0", "~")
        if isinstance(place, dict):
            place = place[key]
        elif isinstance(place, list | tuple) and re.fullmatch("0|[1-9][0-9]{0,8}", key):
            place = place[int(key)]
        else:
            raise LookupError(pointer)
    return place


def visible(text: str) -> str:
    """The text with each refused character written as its code point, so that it can be shown safely."""
    return REFUSED_CHARACTERS.sub(lambda match: f"<U+{ord(match[0]):04X}>", text)


def quoted(value: object) -> str:
    """A value from a file as it can stand in a sentence: texts in quotes, everything cut after 60 characters."""
    if value is None:
        return "null"
    if isinstance(value, bool):
        return "true" if value else "false"
    if isinstance(value, int | float):
        return f"{value:.15g}".replace("-", "−")
    return f'"{_shorten(visible(str(value)), 60)}"'


def _shorten(text: str, most: int = 130) -> str:
    return text if len(text) <= most else text[: most - 1] + "…"


def listed(words: Iterable[str], last: str = "and") -> str:
    """Words as a list in a sentence: "a, b and c"."""
    items = list(words)
    return items[0] if len(items) == 1 else f"{', '.join(items[:-1])} {last} {items[-1]}" if items else "none"


def suggest(word: str, known: Iterable[str]) -> str:
    """A sentence that offers the closest known word, the whole choice where it is small, or nothing."""
    words = sorted(set(known))
    close = difflib.get_close_matches(word, words, n=1, cutoff=0.6) if len(word) <= 200 else []
    if close:
        return f" Did you mean {quoted(close[0])}?"
    if 0 < len(words) <= 8:
        return f" Known here: {listed((quoted(item) for item in words), 'or')}."
    return ""
