"""The guide's page for practice managers, every command of it run in its order in one practice."""

import json
import os
import re
import shlex
import shutil
from collections.abc import Iterator
from datetime import date, timedelta
from pathlib import Path

import pytest

from clinicalc.library.choices import MOST_YEARS
from clinicalc.library.records import Policy
from clinicalc.operations.guide import read_page_source
from clinicalc.resources import find_shipped
from tests.cli.calling import Ended, call, example
from tests.cli.practices import FINGERPRINT, TARNWICK, WOMAN, Desk
from tests.packaging.checkout import ROOT

PAGE = read_page_source("managers")
LIPIDS = "general-cvd-2008-lipids"
PRESS = "press"


def commands() -> list[list[str]]:
    """The words of every command on the page, in its order."""
    blocks = re.findall(r"^```(?:sh|text)\n(.*?)^```", PAGE, re.MULTILINE | re.DOTALL)
    lines = "\n".join(blocks).replace("\\\n", " ").split("\n")
    return [words[1:] for words in map(shlex.split, lines) if words]


def id_of(key: str) -> str:
    """The id of the key in the file of this name."""
    said: str = call("trust", "card", f"{key}.key", "--json").record["id"]
    return said


def digits_after(word: str) -> str:
    """What is read aloud or looked up where the page has the first digits."""
    match word:
        case "--fingerprint":
            return fingerprint()
        case "--id":
            return id_of(PRESS)
        case "revoke-key":
            return id_of("ada")
    return id_of("practice")


def filled(words: list[str]) -> list[str]:
    """The command with the digits and the place that a person has, and with days that are ahead."""
    done, before = list(words), ""
    for place, word in enumerate(words):
        if word.endswith("..."):
            done[place] = digits_after(before)
        elif before == "--review-until":
            done[place] = (date.today() + timedelta(days=700 if "extend" in words else 365)).isoformat()
        elif word == "//server/library":
            done[place] = "library"
        before = word
    return done


def fingerprint() -> str:
    """Of the one model in the library."""
    (file,) = Path("library", "models").iterdir()
    return file.stem


@pytest.fixture
def here(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> Path:
    """A folder with the shipped files, a publisher's card, and what two people typed."""
    shutil.copytree(str(find_shipped("example_models")), tmp_path / "example_models")
    monkeypatch.chdir(tmp_path)
    monkeypatch.setenv("CLINICALC_SETTINGS", os.fspath(tmp_path / "settings"))
    monkeypatch.setenv("CLINICALC_PASSPHRASE", "four words nobody guesses")
    monkeypatch.delenv("CLINICALC_LIBRARY", raising=False)
    assert call("trust", "make-key", "--name", "Tarnwick Press", "--out", f"{PRESS}.key").status == 0
    assert call("trust", "card", f"{PRESS}.key", "--out", f"{PRESS}-card.json").status == 0
    lipids = tmp_path / "example_models" / f"{LIPIDS}.json"
    for name in ("typed-by-ada", "typed-by-cleo", "new-version"):
        shutil.copy(lipids, tmp_path / f"{name}.json")
    return tmp_path


def test_the_commands_run_in_their_order(here: Path) -> None:
    ran = []
    approve = next(words for words in commands() if words[:2] == ["library", "approve"])
    for words in commands():
        if words[:2] == ["library", "revoke-key"]:  # it was withdrawn further up
            assert call(*filled(approve)).status == 0
        if words[:2] == ["library", "extend"]:
            values = [word for word in WOMAN if "cholesterol" not in word]
            values += ["total_cholesterol=5.2 mmol/L", "hdl_cholesterol=1.3 mmol/L"]
            assert call("report", "--approved", LIPIDS, *values, "--out", "print.pdf").status == 0
        ended = call(*filled(words))
        assert (ended.status, bool(ended.out)) == (0, True), (words, ended.err)
        ran.append(words[1])
    assert {"init", "appoint", "install", "approve", "extend", "withdraw", "import", "dismiss", "policy"} <= set(ran)
    assert (here / "history.csv").exists()
    assert json.loads((here / "carried.json").read_bytes())["format"] == "clinicalc.bundle/1"


def test_the_page_says_the_limits_there_are() -> None:
    assert MOST_YEARS == 5
    assert "five years ahead at most" in PAGE
    assert Policy().offline_hours == 24
    assert "24 hours, unless" in PAGE


def _refusals(desk: Desk) -> Iterator[tuple[str, Ended]]:
    """Each refusal of which the page quotes words, and how the command ended that provoked it."""
    whole = Path(example(TARNWICK)).read_bytes()

    def look(content: bytes) -> Ended:
        file = desk.folder / "arrived.json"
        file.write_bytes(content)
        return desk.library("install", str(file), "--look")

    yield "the file breaks off", look(whole[:200])
    yield "is not UTF-8 text", look(whole.replace(b"Tarnwick", b"Tarnw\xeack", 1))
    yield "is not JSON", look(b"Dear colleague, the file is attached.")
    yield "is not known here", look(whole.replace(b'"outcome"', b'"outcomes"', 1))
    yield "is missing", look(whole.replace(b'"version": "1.0.0",', b"", 1))
    yield "larger than 4 MB", look(whole + b" " * 4_000_000)
    changed = json.loads(whole)
    changed["model"]["equations"][0]["terms"][0]["coefficient"] *= 1.01
    yield "the worked example misses", look(json.dumps(changed).encode())
    assert desk.install().status == 0
    yield "file is in the library already", desk.install()
    yield "no publisher trusted on this machine signed this file", desk.approve()
    yield "the fingerprint that was typed is not that of this file", desk.approve("--fingerprint", "e82d 04a7")
    yield "The practice’s policy wants a second pair of eyes", desk.approve("--fingerprint", FINGERPRINT, by="cleo")
    assert desk.install(example(LIPIDS)).status == 0
    (lipids,) = (m["fingerprint"] for m in desk.library("list", "--json").record["models"] if m["id"] == LIPIDS)
    yield "were compared by nobody", desk.approve("--fingerprint", lipids, model=LIPIDS)
    assert desk.approve("--fingerprint", FINGERPRINT).status == 0
    file = Path(desk.place) / "models" / f"{FINGERPRINT}.json"
    file.chmod(0o600)
    file.write_bytes(file.read_bytes().replace(b"1.0.0", b"1.0.1"))
    yield "was changed after it was installed", desk.library("verify")


def test_the_refusals_are_said_in_the_words_of_the_page(desk: Desk) -> None:
    section = PAGE.partition("## When a file is refused")[2].partition("## ")[0]
    quotes = [part.strip() for quote in re.findall("“([^”]+)”", section) for part in quote.split("…")]
    told = {words for words, ended in _refusals(desk) if words in " ".join((ended.out + ended.err).split())}
    left = [quote for quote in quotes if not any(words in quote for words in told)]
    assert left == ["the field", "the field", "Out of use"]
    assert all(any(words in quote for quote in quotes) for words in told)


def test_the_window_has_what_the_page_names() -> None:
    """Buttons, entries of menus and steps, as the window's own sources spell them."""
    folder = ROOT / "clinicalc" / "gui"
    spelt = " ".join(path.read_text("utf-8") for path in folder.rglob("*.py")).replace("&", "")
    prose = " ".join(re.sub("^```.*?^```", "", PAGE, flags=re.MULTILINE | re.DOTALL).split())
    named = set(re.findall("“([^”…]+…)”", prose)) - {"The library lacks the withdrawal …"}
    assert len(named) > 12
    named |= {
        "Found a library for this practice",
        "Join the practice’s library",
        "Bring in an exported library",
        "Look back",
    }
    named |= {"Check all files", "Fingerprint you were given"}
    assert {name for name in named if name not in spelt or name not in prose} == set()


def test_headings_are_of_the_depths_that_are_shown() -> None:
    assert not re.search("^###", PAGE, re.MULTILINE)
