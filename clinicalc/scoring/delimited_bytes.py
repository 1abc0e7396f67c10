"""The bytes of a text table, whole lines at a time, with the digest of all that was taken."""

import codecs
import hashlib
from pathlib import Path
from typing import BinaryIO

_LONGEST_LINE = 1 << 24
_READ = 1 << 20


class LineBytes:
    """Lines of a file as bytes of `encoding`, which is UTF-8 where the file is UTF-16.

    What one call of `block` takes depends on nothing but where it begins: a reading that begins there again, in another
    run, gives the same blocks.
    """

    def __init__(self, path: Path, encoding: str) -> None:
        self._file: BinaryIO = path.open("rb")
        self._decoder = codecs.getincrementaldecoder("utf-16")() if encoding == "utf-16" else None
        self.encoding = "latin-1" if encoding == "latin-1" else "utf-8"
        self._ahead = b""
        self._is_over = False
        self._digest = hashlib.sha256()
        self.taken = 0
        """Bytes that were handed out."""

    @property
    def digest(self) -> str:
        """SHA-256 of the bytes that were handed out, in hexadecimal digits."""
        return self._digest.hexdigest()

    def skip_mark(self) -> None:
        """Take a byte order mark of UTF-8, if one stands here."""
        self._fill(len(codecs.BOM_UTF8))
        if self._ahead.startswith(codecs.BOM_UTF8):
            self._take(len(codecs.BOM_UTF8))

    def line(self) -> bytes:
        """The next line with its end; b"" after the last. One without an end is cut at 16 MB."""
        size = _READ
        while True:
            self._fill(size)
            end = self._find_end()
            if end or self._is_over or size >= _LONGEST_LINE:
                return self._take(end or min(len(self._ahead), size))
            size *= 4

    def block(self, size: int) -> bytes:
        """The next whole lines within `size` bytes, or one longer line; b"" after the last."""
        self._fill(size)
        window = self._ahead[:size]
        if self._is_over and len(self._ahead) <= size:
            return self._take(len(window))
        end = window.rfind(b"\n") + 1 or window.rfind(b"\r") + 1
        return self._take(end) if end else self.line()

    def skip(self, size: int) -> None:
        """Take so many bytes, or as many as there are."""
        while size > 0:
            self._fill(min(size, _READ))
            piece = self._take(min(size, len(self._ahead)))
            if not piece:
                return
            size -= len(piece)

    def close(self) -> None:
        """Let the file go."""
        self._file.close()

    def _find_end(self) -> int:
        """Where the line ends that stands ahead: behind a line feed, a return, or both; 0 where no end is seen yet."""
        feed = self._ahead.find(b"\n")
        back = self._ahead.find(b"\r", 0, feed if feed >= 0 else len(self._ahead))
        if back < 0:
            return feed + 1
        if back + 1 == len(self._ahead) and not self._is_over:
            return 0
        return back + 1 + (self._ahead[back + 1 : back + 2] == b"\n")

    def _take(self, size: int) -> bytes:
        taken, self._ahead = self._ahead[:size], self._ahead[size:]
        self._digest.update(taken)
        self.taken += len(taken)
        return taken

    def _fill(self, size: int) -> None:
        """Have `size` bytes ahead, or all that are left."""
        pieces, there = [self._ahead], len(self._ahead)
        while there < size and not self._is_over:
            piece = self._file.read(size - there)
            self._is_over = not piece
            if self._decoder is not None:
                piece = self._decoder.decode(piece, final=self._is_over).encode()
            pieces.append(piece)
            there += len(piece)
        if len(pieces) > 1:
            self._ahead = b"".join(pieces)
