"""The guide for clinicians: plain pages that ship with the program, read as blocks of plain text."""

import re
from collections.abc import Iterator
from dataclasses import dataclass
from enum import Enum
from itertools import groupby

from clinicalc.resources import read_shipped

PAGES = (
    "first-use",
    "typing",
    "reading",
    "how-far-to-trust",
    "findings",
    "printing",
    "files",
    "cautions",
    "managers",
    "settings",
    "keyboard",
    "commands",
    "fitting",
    "methods",
    "validation",
    "packaging",
    "signing",
    "library",
    "short",
)
"""The pages in reading order, each a file of `resources/guide`."""

_FENCE = "```"
_HEADING = re.compile(r"(#{1,2}) (.+)")
_ITEM = re.compile(r"(-|[0-9]+\.) (.+)")


class BlockKind(Enum):
    """What a block of a page is."""

    TITLE = "title"
    HEADING = "heading"
    PARAGRAPH = "paragraph"
    ITEM = "item"
    CODE = "code"


@dataclass(frozen=True, slots=True)
class Block:
    """One block, its text plain; `mark` is what stands before an item ("–" or "1."), "" for any other block."""

    kind: BlockKind
    text: str
    mark: str = ""


@dataclass(frozen=True, slots=True)
class Page:
    """One page: the name of its file, its title, and its blocks after the title."""

    name: str
    title: str
    blocks: tuple[Block, ...]

    @property
    def text(self) -> str:
        """The whole page as plain text, blocks parted by empty lines."""
        return "\n\n".join((self.title, *(f"{block.mark} {block.text}".lstrip() for block in self.blocks)))


def read_guide() -> tuple[Page, ...]:
    """Every page in reading order. Raises ShippedFileMissing when one is not there."""
    return tuple(read_page(name) for name in PAGES)


def read_page(name: str) -> Page:
    """One page of the guide. Raises ShippedFileMissing when it is not there."""
    blocks = read_blocks(read_page_source(name))
    return Page(name, blocks[0].text, blocks[1:])


def read_page_source(name: str) -> str:
    """One page as it is written."""
    return read_shipped(f"resources/guide/{name}.md").decode("utf-8")


def read_blocks(source: str) -> tuple[Block, ...]:
    """The blocks of a text: headings of two depths, paragraphs, lists of one depth, fenced code. Nothing else is read.

    A line that goes on is joined with a space, in code it stays; the backquotes round words are left out.
    """
    return tuple(_blocks(source.splitlines()))


def _blocks(lines: list[str]) -> Iterator[Block]:
    inside = False
    numbered = []
    for line in lines:
        fence = line.startswith(_FENCE)
        inside ^= fence
        numbered.append((inside or fence, line))
    for is_code, group in groupby(numbered, key=lambda pair: pair[0]):
        part = [line for _, line in group]
        yield from _code(part) if is_code else _prose(part)


def _code(lines: list[str]) -> Iterator[Block]:
    kept: list[str] = []
    for line in lines:
        if not line.startswith(_FENCE):
            kept.append(line)
        elif kept:
            yield Block(BlockKind.CODE, "\n".join(kept))
            kept = []


def _prose(lines: list[str]) -> Iterator[Block]:
    open_block: Block | None = None
    for line in [*lines, ""]:
        begun = _begin(line)
        if line.strip() and begun is None and open_block is not None:
            open_block = Block(open_block.kind, f"{open_block.text} {_plain(line)}", open_block.mark)
            continue
        if open_block is not None:
            yield open_block
        open_block = begun or (Block(BlockKind.PARAGRAPH, _plain(line)) if line.strip() else None)
        if open_block is not None and open_block.kind in (BlockKind.TITLE, BlockKind.HEADING):
            yield open_block
            open_block = None


def _begin(line: str) -> Block | None:
    """The heading or the list item that a line begins, None where it begins neither."""
    if heading := _HEADING.fullmatch(line):
        kind = BlockKind.TITLE if len(heading[1]) == 1 else BlockKind.HEADING
        return Block(kind, _plain(heading[2]))
    if item := _ITEM.fullmatch(line):
        return Block(BlockKind.ITEM, _plain(item[2]), "–" if item[1] == "-" else item[1])
    return None


def _plain(line: str) -> str:
    return line.replace("`", "").strip()
