"""What the program says about itself."""

import json
import re

from clinicalc import __version__
from clinicalc.operations.about import lay_plainly, read_about
from clinicalc.resources import read_shipped


def test_name_version_and_what_is_not_claimed() -> None:
    about = read_about()
    assert (about.name, about.version) == ("clinicalc", __version__)
    assert "claims no approval" in about.no_approval


def test_the_hazards_are_counted_from_the_log() -> None:
    log = json.loads(read_shipped("resources/hazards.json"))
    assert f"{len(log['hazards'])} hazards" in read_about().hazards
    assert f"{len(log['overlaps'])} pairs" in read_about().hazards


def _space_for_marks(found: re.Match[str]) -> str:
    return "" if found[0] == "`" else " "


def test_no_word_of_the_notices_is_lost() -> None:
    source = read_shipped("resources/THIRD_PARTY.md").decode("utf-8")
    source = re.sub(r"^\|--.*$", "", source, flags=re.MULTILINE)
    assert (
        read_about().notices.split()
        == re.sub(r"^[#>]+|`|^\||\|$| \| ", _space_for_marks, source, flags=re.MULTILINE).split()
    )


def test_quotations_headings_and_tables_become_plain_lines() -> None:
    text = "# A\n\none\ntwo\n\n> three\n> four\n>\n> five\n\n| a | b |\n|---|---|\n| `c` | d |\n\n- x\n  y\n- z\n"
    assert lay_plainly(text) == "A\n\none two\n\nthree four\n\nfive\n\na   b\nc   d\n\n- x y\n- z\n"
