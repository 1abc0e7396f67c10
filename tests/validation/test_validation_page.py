"""The guide's page on validation: its commands run in order as they stand, and what it prints is the program's."""

import re
import shlex
import shutil
import tomllib
from pathlib import Path

import pytest

from clinicalc.operations.guide import read_page_source
from clinicalc.resources import find_shipped
from clinicalc.validation.faults import ALPHA
from clinicalc.validation.updating import FEW_EVENTS
from example_models.make_tarnwick_northgate import RATIO
from tests.cli.calling import call
from tests.development.test_fitting_page import holds, words_of

PAGE = read_page_source("validation")
PLAN = "tarnwick-northgate-validation.toml"
REFUSED = "clinicalc: "
"""What the output on stderr begins with."""


def blocks() -> list[tuple[str, str]]:
    """Every block of code with its language, in the order of the page."""
    return re.findall(r"^ *```([a-z]+)\n(.*?)^ *```", PAGE, re.MULTILINE | re.DOTALL)


def commands(code: str) -> list[list[str]]:
    """The words of each command of a block, lines that go on joined."""
    return [shlex.split(line) for line in code.replace("\\\n", " ").splitlines()]


@pytest.fixture
def desk(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> Path:
    """A folder in which the page's commands run as they stand."""
    shutil.copytree(find_shipped("example_models"), tmp_path / "example_models")
    monkeypatch.chdir(tmp_path)
    return tmp_path


def test_the_commands_run_as_they_stand_and_print_what_the_page_prints(desk: Path) -> None:
    output, ran, compared = "", [], 0
    for language, code in blocks():
        if language == "sh":
            for words in commands(code):
                assert words[0] == "clinicalc"
                ended = call(*words[1:])
                assert (ended.status, ended.err) == (0, ""), words
                output = ended.out
                ran.append(words[1])
        elif language == "text" and not code.startswith(REFUSED):
            assert holds(output, code), code
            compared += 1
    assert ran == ["validate", "validate", "validate", "update", "inspect", "score"]
    assert compared == 9
    assert (desk / "northgate.pdf").read_bytes().startswith(b"%PDF")
    assert (desk / "northgate" / "measures.csv").is_file()
    assert len((desk / "scored.csv").read_text(encoding="utf-8").splitlines()) == 2001


def test_the_fragments_are_those_of_the_shipped_plan() -> None:
    shipped = tomllib.loads(find_shipped(f"example_models/{PLAN}").read_text(encoding="utf-8"))
    fragments = [tomllib.loads(code) for language, code in blocks() if language == "toml"]
    assert len(fragments) == 2
    for fragment in fragments:
        for name, part in fragment.items():
            if isinstance(part, dict):
                assert {key: shipped[name][key] for key in part} == part, name
            else:
                assert shipped[name] == part, name


def test_the_refit_is_refused_as_the_page_says(desk: Path) -> None:
    (shown,) = (code for language, code in blocks() if language == "text" and code.startswith(REFUSED))
    ended = call("update", f"example_models/{PLAN}", "--method", "refit")
    assert (ended.status, ended.out) == (4, "")
    assert words_of(ended.err) == words_of(shown)


def test_what_the_page_says_in_words_is_so(desk: Path) -> None:
    page = " ".join(words_of(PAGE))
    assert f"their hazard is {RATIO:g} times as high" in page
    assert "of a hundred faultless cohorts about one is accused" in page
    assert ALPHA == 0.01
    # "Below about a hundred"
    assert FEW_EVENTS == 100
    (at,) = call("validate", f"example_models/{PLAN}", "--json").record["validation"]["horizons"]
    assert f"{at['observed_to_expected']['value']:.2f} means that of a hundred events" in page
    # 0.67: sixty-seven
    assert round(100 * at["observed_to_expected"]["value"]) == 67
    assert "sixty-seven" in page
    # the price of one flagged wrongly at 10 %: 0.1 / 0.9, one to nine
    assert "nine needless treatments for one that is needed" in page
