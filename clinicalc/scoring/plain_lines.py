"""Whether a block of lines is so plain that it can be cut at every separator, and how many rows it then has."""

from dataclasses import dataclass

_QUOTE = b'"'


@dataclass(frozen=True, slots=True)
class PlainLines:
    """Lines that each have as many fields as the table has columns, ended by line feeds, without quotation marks."""

    data: bytes
    rows: int


def plain_lines(data: bytes, separator: bytes, width: int) -> PlainLines | None:
    """The lines with the quotation marks around whole cells taken off, None where that does not make them plain.

    Marks are looked at with the separators and line ends alone: where two stand beside each other they enclose neither,
    and where none is left once those at the edges of cells are gone, they enclosed whole cells.
    """
    if width < 2 or b"\0" in data:
        return None
    if b"\r" in data:
        if data.count(b"\r") != data.count(b"\r\n"):
            return None
        data = data.replace(b"\r\n", b"\n")
    if not data.endswith(b"\n"):
        data += b"\n"
    signs = data.translate(None, _others(separator))
    if _QUOTE in signs:
        signs = signs.replace(_QUOTE + _QUOTE, b"")
        data = _bare(data, separator)
        if _QUOTE in signs or _QUOTE in data:
            return None
    rows, rest = divmod(len(signs), width)
    line = separator * (width - 1) + b"\n"
    return PlainLines(data, rows) if rest == 0 and signs == line * rows else None


def _bare(data: bytes, separator: bytes) -> bytes:
    """The lines without a quotation mark at each edge of a cell."""
    data = data.removeprefix(_QUOTE)
    for edge in (separator, b"\n"):
        data = data.replace(edge + _QUOTE, edge).replace(_QUOTE + edge, edge)
    return data


def _others(separator: bytes) -> bytes:
    """Every byte but the separator, the quotation mark and the end of a line."""
    return bytes(byte for byte in range(256) if byte not in (separator[0], _QUOTE[0], 10))
