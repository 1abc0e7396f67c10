"""The practice's decision points in the settings file: taken strictly, one bad one alone, kept by a write."""

from dataclasses import replace
from pathlib import Path

import pytest

from clinicalc.errors import UsageError
from clinicalc.resources import read_shipped
from clinicalc.settings import FILE_NAME, MOST_POINTS, PracticePoint, Settings, read_settings, write_settings
from clinicalc.settings.folder import VARIABLE

POINT = PracticePoint("tarnwick-cvd-10y", 10, "a", 0.1, "Offer a talk", "Practice meeting, March 2026")
GOOD = """
[[decision_points]]
model = "tarnwick-cvd-10y"
years = 10
probability = 0.1
label = "Offer a talk"
source = "Practice meeting, March 2026"
"""


@pytest.fixture(autouse=True)
def folder(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> Path:
    """A settings folder of the test's own."""
    folder = tmp_path / "clinicalc"
    folder.mkdir()
    monkeypatch.setenv(VARIABLE, str(folder))
    return folder


def changed(key: str, line: str) -> str:
    """The good table with one of its lines replaced."""
    return "\n".join(line if text.startswith(f"{key} =") else text for text in GOOD.splitlines()) + "\n"


def test_points_are_read(folder: Path) -> None:
    days = changed("years", 'time = 90\nunit = "d"')
    (folder / FILE_NAME).write_text(f'theme = "dark"\n{GOOD}{days}', encoding="utf-8")
    reading = read_settings()
    assert reading.problems == ()
    assert reading.settings.decision_points == (POINT, replace(POINT, time=90.0, unit="d"))


def test_points_are_written_and_read_back(folder: Path) -> None:
    points = (POINT, replace(POINT, time=2.5, unit="mo", probability=1 / 3, label='say "so"', source="\\ ü"))
    settings = Settings(practice="Tarnwick Northgate", recent_files=("/models/one.json",), decision_points=points)
    write_settings(settings)
    assert read_settings() == type(read_settings())(settings)
    write_settings(replace(read_settings().settings, level=0.9))
    assert read_settings().settings.decision_points == points
    assert [path.name for path in folder.iterdir()] == [FILE_NAME]


@pytest.mark.parametrize(
    ("key", "line", "sentence"),
    [
        ("probability", "probability = 1.2", "1.2 is a probability above 1; did you mean 0.012 or 0.12?"),
        ("probability", "probability = 10", "10 is a probability above 1; did you mean 0.1?"),
        ("probability", "probability = 7.5", "7.5 is a probability above 1; did you mean 0.075 or 0.75?"),
        ("probability", "probability = 1000", "1000 is a probability above 1."),
        ("probability", "probability = inf", "inf is a probability above 1."),
        ("probability", "probability = 1", "its probability of 1 is not between 0 and 1."),
        ("probability", "probability = -0.1", "its probability of -0.1 is not between 0 and 1."),
        ("probability", "probability = nan", "its probability of nan is not between 0 and 1."),
        ("probability", 'probability = "10 %"', "its probability is a number without quotation marks: a probability"),
        ("probability", "probability = true", "its probability is a number without quotation marks: a probability"),
        ("probability", "", "its probability is missing: a probability between 0 and 1, such as 0.1."),
        ("source", "", "its source is missing: who says so, such as a guideline with its year."),
        ("source", 'source = " "', "its source is empty."),
        ("source", "source = 2026", "its source is a text between quotation marks: who says so"),
        ("source", 'source = "a\\nb"', "its source holds U+000A, a character that is not seen or breaks the line."),
        ("label", 'label = "' + "x" * 81 + '"', "its label has 81 characters, and at most 80 are taken."),
        ("model", "", 'its model is missing: the id of the model that it belongs to, such as "tarnwick-cvd-10y".'),
        ("years", "", 'it needs a horizon: years = 10, or a time and its unit, such as time = 90 and unit = "d".'),
        ("years", 'years = 10\nunit = "a"', "it needs a horizon: "),
        ("years", "time = 90", "it needs a horizon: "),
        ("years", "years = 0", "its horizon of 0 is not a time span."),
        ("years", "years = 0x" + "f" * 400, "its years is too large."),
        ("years", 'time = 3\nunit = "year"', "its unit is none of a, mo, wk, d."),
        ("label", 'label = "x"\ncolour = 1', '"colour" is no part of it; its parts are model, years, time, unit, prob'),
    ],
)
def test_a_bad_point_is_named_and_the_others_hold(folder: Path, key: str, line: str, sentence: str) -> None:
    (folder / FILE_NAME).write_text(f"level = 0.9\n{GOOD}{changed(key, line)}{GOOD}", encoding="utf-8")
    reading = read_settings()
    assert len(reading.problems) == 1
    assert reading.problems[0].startswith(f"{FILE_NAME}, line 10: decision point 2: {sentence}")
    assert reading.problems[0].endswith("It is left out. Mend it or delete it.")
    assert reading.settings == Settings(level=0.9, decision_points=(POINT, POINT))


@pytest.mark.parametrize("line", ["decision_points = 3", "decision_points = [1]", '[decision_points]\nmodel = "x"'])
def test_what_is_no_list_of_tables_is_said(folder: Path, line: str) -> None:
    (folder / FILE_NAME).write_text(line, encoding="utf-8")
    reading = read_settings()
    assert reading.settings == Settings()
    assert len(reading.problems) == 1
    assert reading.problems[0].startswith(f"{FILE_NAME}, line 1: decision point 1: it")


def test_more_than_are_kept_are_left_out(folder: Path) -> None:
    (folder / FILE_NAME).write_text(GOOD * 10, encoding="utf-8")
    reading = read_settings()
    assert reading.settings.decision_points == (POINT,) * MOST_POINTS
    assert [problem.partition(": it is")[0] for problem in reading.problems] == [
        f"{FILE_NAME}, line 58: decision point 9",
        f"{FILE_NAME}, line 65: decision point 10",
    ]
    with pytest.raises(UsageError, match="decision_points holds 9 tables, and at most 8 are kept"):
        Settings(decision_points=(POINT,) * 9)


def test_a_file_with_a_bad_point_is_kept_beside_the_new_one(folder: Path) -> None:
    text = GOOD + changed("source", "")
    (folder / FILE_NAME).write_text(text, encoding="utf-8")
    write_settings(read_settings().settings)
    assert (folder / "settings-1.toml").read_text(encoding="utf-8") == text
    assert read_settings().settings.decision_points == (POINT,)


def test_the_example_of_the_guide_is_taken(folder: Path) -> None:
    page = read_shipped("resources/guide/how-far-to-trust.md").decode("utf-8")
    (folder / FILE_NAME).write_text(page.partition("```toml\n")[2].partition("```")[0], encoding="utf-8")
    reading = read_settings()
    assert reading.problems == ()
    assert [point.model for point in reading.settings.decision_points] == ["tarnwick-cvd-10y"]
