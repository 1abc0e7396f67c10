"""In which encoding a text file is written, told from its bytes."""

import codecs
from pathlib import Path

_BLOCK = 1 << 20
_MARKS = ((codecs.BOM_UTF8, "utf-8-sig"), (codecs.BOM_UTF16_LE, "utf-16"), (codecs.BOM_UTF16_BE, "utf-16"))


def tell_encoding(path: Path) -> str:
    """Python's name of it: by the mark at the beginning, else UTF-8 where every byte agrees with that, else latin-1."""
    decoder = codecs.getincrementaldecoder("utf-8")()
    with path.open("rb") as file:
        head = file.read(_BLOCK)
        for mark, name in _MARKS:
            if head.startswith(mark):
                return name
        block = head
        try:
            while block:
                decoder.decode(block)
                block = file.read(_BLOCK)
            decoder.decode(b"", final=True)
        except UnicodeDecodeError:
            return "latin-1"
    return "utf-8"
