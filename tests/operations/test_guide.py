"""The guide: every command and finding is explained, its examples run, and README says the same."""

import re
import shlex
import shutil
from pathlib import Path

import click
import pytest

from clinicalc.assessment.findings import FindingCode
from clinicalc.cli.commands import clinicalc
from clinicalc.gui.access_keys import COMMAND_LETTERS
from clinicalc.operations.guide import PAGES, Block, BlockKind, read_blocks, read_guide, read_page, read_page_source
from clinicalc.resources import find_shipped
from tests.cli.calling import call
from tests.packaging.checkout import ROOT

WINDOW = ["clinicalc"]


def commands_on(name: str) -> list[list[str]]:
    """The words of every command line in the shell code of a page, lines that go on joined, remarks left out."""
    found = re.findall(r"^```sh\n(.*?)^```", read_page_source(name), re.MULTILINE | re.DOTALL)
    code = "\n".join(found)
    lines = code.replace("\\\n", " ").split("\n")
    return [words for words in (shlex.split(line, comments=True) for line in lines) if words]


def items_on(name: str) -> dict[str, str]:
    """The items of a page that begin with a word and a colon, as written."""
    found = re.findall(r"^- `([^`]+)`: (.+)$", read_page_source(name), re.MULTILINE)
    assert len(found) == len(dict(found))
    return dict(found)


def test_every_page_is_in_the_guide() -> None:
    assert {entry.name for entry in find_shipped("resources/guide").iterdir()} == {f"{name}.md" for name in PAGES}
    pages = read_guide()
    assert [page.name for page in pages] == list(PAGES)
    assert len({page.title for page in pages}) == len(pages)
    assert all(page.blocks for page in pages)


def leaves(command: click.Command) -> list[click.Command]:
    """The command, or all below it where it is a group."""
    below = command.commands.values() if isinstance(command, click.Group) else ()
    return [leaf for one in below for leaf in leaves(one)] or [command]


def test_every_command_is_explained() -> None:
    items = items_on("commands")
    assert set(items) == set(clinicalc.commands)
    options = {option for command in leaves(clinicalc) for p in command.params for option in p.opts}
    text = " ".join(read_page_source(name) for name in PAGES)
    assert {option for option in options if option.startswith("--") and option not in text} == set()
    assert set(re.findall(r"(?<![\w-])--[a-z][a-z-]*", text)) - options - {"--help"} == set()


def test_every_finding_is_explained_with_what_to_do() -> None:
    items = items_on("findings")
    assert set(items) == {code.value for code in FindingCode}
    assert all(len(words.split()) >= 6 for words in items.values())


def test_every_exit_status_is_explained() -> None:
    text = read_page_source("commands").partition("## Exit status")[2]
    assert re.findall(r"^- ([0-9]):", text, re.MULTILINE) == ["0", "2", "3", "4", "5", "6"]


OWN_TEST = ("fitting", "methods", "validation", "packaging", "signing", "library", "managers")
"""Pages run by tests of their own, with what they need: development/test_fitting_page, test_methods_page and
test_packaging_page, validation/test_validation_page, cli/test_signing_page, cli/test_library_page and
cli/test_page_for_practices."""


@pytest.mark.parametrize("name", [name for name in PAGES if commands_on(name) and name not in OWN_TEST])
def test_the_commands_of_a_page_run_as_they_stand(name: str, tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    shutil.copytree(str(find_shipped("example_models")), tmp_path / "example_models")
    monkeypatch.chdir(tmp_path)
    for words in commands_on(name):
        assert words[0] == "clinicalc"
        if words == WINDOW:  # tests/gui/test_start opens it
            continue
        ended = call(*words[1:])
        assert (ended.status, ended.err) == (0, ""), words
        assert ended.out


def test_the_pages_hold_nearly_every_command() -> None:
    used = {words[1] for name in PAGES for words in commands_on(name) if words != WINDOW}
    assert used == set(clinicalc.commands)


def test_the_letters_of_commands_are_those_of_the_window() -> None:
    letters = set(re.findall(r"^- Alt\+([A-Z]):", read_page_source("keyboard"), re.MULTILINE))
    assert {letter.lower() for letter in letters} <= COMMAND_LETTERS
    assert letters == {"O", "N", "R", "V", "U"}


def test_readme_carries_the_short_version_word_for_word() -> None:
    readme = (ROOT / "README.md").read_text(encoding="utf-8")
    sections = read_page_source("short").split("\n## ")[1:]
    assert [section.partition("\n")[0] for section in sections] == ["Use it", "Cautions"]
    for section in sections:
        assert f"\n\n## {section.strip()}\n" in readme


def test_the_pages_use_nothing_that_would_be_shown_as_marks() -> None:
    for page in read_guide():
        for block in page.blocks:
            if block.kind is not BlockKind.CODE:
                assert not re.search(r"\*\*|__|\]\(|<[a-z/]|`|^[|>#!]", block.text), block


def test_no_word_of_a_page_is_lost() -> None:
    for name in PAGES:
        parts = re.split(r"^```.*\n", read_page_source(name), flags=re.MULTILINE)
        parts[::2] = [re.sub(r"^(#+ |- )", "", prose, flags=re.MULTILINE).replace("`", "") for prose in parts[::2]]
        written = "".join(parts)
        assert read_page(name).text.replace("–  ", "").replace("– ", "").split() == written.split()


def test_blocks_are_read_as_they_stand() -> None:
    source = "# A\n\none\ntwo `c`\n\n## B\n- x\n  y\n- z\n1. n\n\n```sh\na  b\n\n# c\n```\nafter\n"
    assert read_blocks(source) == (
        Block(BlockKind.TITLE, "A"),
        Block(BlockKind.PARAGRAPH, "one two c"),
        Block(BlockKind.HEADING, "B"),
        Block(BlockKind.ITEM, "x y", "–"),
        Block(BlockKind.ITEM, "z", "–"),
        Block(BlockKind.ITEM, "n", "1."),
        Block(BlockKind.CODE, "a  b\n\n# c"),
        Block(BlockKind.PARAGRAPH, "after"),
    )
