"""`--shares`, `--matching-age` and `--change` on the command line: in the summary, the record and the print."""

from pathlib import Path

import pytest

from clinicalc.report.matching_age_words import MATCHING_AGE_MEANING
from clinicalc.report.phrases_comparison import NO_PROMISE
from tests.assessment.cases import DEMO
from tests.cli.calling import LIPIDS, WOMAN_61, call, example
from tests.report.printing import pages_of

TARNWICK = example("tarnwick-cvd-10y")
VALUES = tuple(f"{id}={text}" for id, text in DEMO.items())
ASKED = ("--shares", "--matching-age", "--change", "smoker=no")


def test_nothing_of_it_comes_unasked() -> None:
    ended = call("assess", TARNWICK, *VALUES)
    assert ended.status == 0
    assert "Re-measurement spread 9.8–15.3\u202f%" in ended.out
    assert "above the decision point 10.0\u202f%" in ended.out
    for words in ("Shares", "Matching age", "Changed"):
        assert words not in ended.out


def test_what_is_asked_for_is_said() -> None:
    said = " ".join(call("assess", TARNWICK, *VALUES, *ASKED).out.split())
    for words in ("Smokes now Yes +0.66", "at 77.2 years", MATCHING_AGE_MEANING, NO_PROMISE, "Difference −5.5 points"):
        assert words in said


def test_the_record_has_shares_in_any_case_and_the_matching_age_only_if_asked() -> None:
    plain = call("assess", TARNWICK, *VALUES, "--json").record
    assert plain["shares"]["steps"][0]["id"] == "smoker"
    assert plain["matching_age"] is plain["comparison"] is None
    assert call("assess", TARNWICK, *VALUES, "--json", *ASKED).record["matching_age"]["place"] == "within"


@pytest.mark.parametrize(
    ("asked", "pages"),
    [((), 2), (("--shares",), 3), (("--matching-age",), 2), (("--change", "smoker=no"), 3), (ASKED, 3)],
)
def test_the_print_has_what_was_asked_for_and_agrees_with_its_file(
    asked: tuple[str, ...], pages: int, tmp_path: Path
) -> None:
    out = tmp_path / "print.pdf"
    assert call("report", TARNWICK, *VALUES, *asked, "--out", str(out)).status == 0
    read = pages_of(out.read_bytes())
    text = " ".join(read)
    assert len(read) == pages
    assert (NO_PROMISE in text) is ("--change" in asked)
    assert (MATCHING_AGE_MEANING in text) is ("--matching-age" in asked)
    assert ("Each step is a share" in text) is ("--shares" in asked)
    checked = call("report", "--check", str(out), "--model", TARNWICK)
    assert checked.status == 0, checked.out
    assert checked.out.startswith("Agrees")


def test_assumptions_of_a_rebuilt_band_are_one_line_in_the_terminal_and_a_page_of_the_print(tmp_path: Path) -> None:
    out = tmp_path / "print.pdf"
    ended = call("report", LIPIDS, *WOMAN_61, "--out", str(out))
    assert "clinicalc inspect lists what was assumed." in " ".join(ended.out.split())
    assert "people who do not exist" not in ended.out
    assert "people who do not exist" in pages_of(out.read_bytes())[1]
