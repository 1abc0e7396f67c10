"""What a person wrote in the file stays where it is; two windows carry over only what was changed in each."""

from dataclasses import replace
from pathlib import Path

import pytest
from hypothesis import HealthCheck, given
from hypothesis import settings as hypothesis_settings
from hypothesis import strategies as st

from clinicalc.errors import FileNotWritten, UsageError
from clinicalc.settings import (
    FILE_NAME,
    MOST_POINTS,
    Paper,
    PracticePoint,
    PreferredUnit,
    Settings,
    SettingsReading,
    ThemeChoice,
    change_settings,
    read_settings,
    write_settings,
)
from clinicalc.settings.folder import VARIABLE
from clinicalc.settings.toml_spelling import spell
from tests.settings.test_toml_file import all_settings, practices

BY_HAND = """# ours, do not sort
theme = "dark"   # the evening clinic

level=0.90 # agreed in May

letterhead = [
    "Tarnwick Northgate",  # as on the door
    # the old street name:
    "3 Quay Lane",
]  # two lines

[units]
# the laboratory changed in 2024
glucose = "mmol/L" # all machines
creatinine = 'umol/L'

# tablets
[[decision_points]]
model = "tarnwick-cvd-10y"
years = 10
probability = 0.1 # not 0.2
label = "Talk about tablets"
source = "Practice meeting, 2026"
# until the next review

[[decision_points]]
model = "tarnwick-falls"
time = 90
unit = "d"
probability = 0.2
label = "Physiotherapy"
source = "Practice meeting, 2026"
"""


def point(label: str) -> PracticePoint:
    return PracticePoint("tarnwick-cvd-10y", 5.0, "a", 0.05, label, "Practice meeting, 2026")


@pytest.fixture(autouse=True)
def folder(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> Path:
    """A settings folder of the test's own."""
    monkeypatch.setenv(VARIABLE, str(tmp_path))
    return tmp_path


@pytest.fixture
def path(folder: Path) -> Path:
    path = folder / FILE_NAME
    path.write_bytes(BY_HAND.encode("utf-8"))
    return path


def text_of(path: Path) -> str:
    """The file, and that no copy of it was needed."""
    assert [entry.name for entry in path.parent.iterdir()] == [FILE_NAME]
    return path.read_bytes().decode("utf-8")


def test_the_file_by_hand_is_taken_whole(path: Path) -> None:
    reading = read_settings()
    assert reading.problems == ()
    assert reading.settings.letterhead == ("Tarnwick Northgate", "3 Quay Lane")
    assert reading.settings.unit_of("glucose") == "mmol/L"
    assert reading.settings.unit_of("creatinine") == "umol/L"
    assert [one.model for one in reading.settings.decision_points] == ["tarnwick-cvd-10y", "tarnwick-falls"]


@pytest.mark.parametrize(
    ("change", "old", "new"),
    [
        ({"theme": ThemeChoice.LIGHT}, 'theme = "dark"   # the', 'theme = "light"   # the'),
        ({"level": 0.95}, "level=0.90 # agreed", "level = 0.95 # agreed"),
        ({"units": (PreferredUnit("creatinine", "umol/L"),)}, 'glucose = "mmol/L" # all machines', "# all machines"),
        (
            {"units": (PreferredUnit("glucose", "mg/dL"), PreferredUnit("creatinine", "umol/L"))},
            'glucose = "mmol/L" # all',
            'glucose = "mg/dL" # all',
        ),
        (
            {"letterhead": ("Quay Lane", "B")},
            'letterhead = [\n    "Tarnwick Northgate",  # as on the door\n    # the old street name:\n'
            '    "3 Quay Lane",\n]  # two lines\n',
            '# the old street name:\nletterhead = [\n    "Quay Lane",\n    "B",\n]  # two lines\n',
        ),
        ({"practice": "Tarnwick"}, "]  # two lines\n", ']  # two lines\npractice = "Tarnwick"\n'),
    ],
)
def test_only_the_changed_line_is_another(path: Path, change: dict[str, object], old: str, new: str) -> None:
    before = read_settings().settings
    after = change_settings(before, replace(before, **change))  # type: ignore[arg-type]
    assert after == replace(before, **change)  # type: ignore[arg-type]
    assert read_settings() == SettingsReading(after)
    assert text_of(path) == BY_HAND.replace(old, new)


def test_a_point_is_taken_out_with_its_lines_and_another_comes_to_the_end(path: Path) -> None:
    before = read_settings().settings
    change_settings(before, replace(before, decision_points=(before.decision_points[1], point("Five years"))))
    assert read_settings().settings.decision_points == (before.decision_points[1], point("Five years"))
    text = text_of(path)
    assert "not 0.2" not in text
    assert "Talk about tablets" not in text
    assert text.startswith(BY_HAND.partition("[[decision_points]]")[0])
    assert '# until the next review\n\n[[decision_points]]\nmodel = "tarnwick-falls"\n' in text
    assert text.endswith('label = "Five years"\nsource = "Practice meeting, 2026"\n')


def test_the_first_preferred_unit_opens_its_table(folder: Path) -> None:
    (folder / FILE_NAME).write_text("level = 0.9\n", encoding="utf-8")
    change_settings(Settings(level=0.9), Settings(level=0.9, units=(PreferredUnit("glucose", "mmol/L"),)))
    assert text_of(folder / FILE_NAME) == 'level = 0.9\n\n[units]\nglucose = "mmol/L"\n'


def test_line_ends_of_windows_stay(folder: Path) -> None:
    path = folder / FILE_NAME
    path.write_bytes(BY_HAND.replace("\n", "\r\n").encode("utf-8"))
    before = read_settings().settings
    change_settings(before, replace(before, practice="Tarnwick"))
    data = path.read_bytes()
    assert data.count(b"\n") == data.count(b"\r\n")
    assert b"# agreed in May\r\n" in data


@pytest.mark.parametrize(
    "text",
    [
        'units = { glucose = "mmol/L" } # mine\n',
        'units.glucose = "mmol/L" # mine\n',
        'units.glucose = "mmol/L" # mine\n\n[[decision_points]]\nmodel = "a"\nyears = 1\nprobability = 0.1\n'
        'label = "l"\nsource = "s"\n',
    ],
)
def test_what_is_written_in_a_way_not_changed_by_lines_is_kept_beside(folder: Path, text: str) -> None:
    path = folder / FILE_NAME
    path.write_text(text, encoding="utf-8")
    before = read_settings().settings
    assert before.unit_of("glucose") == "mmol/L"
    after = before.with_unit("glucose", "mg/dL").with_unit("creatinine", "umol/L")
    change_settings(before, after)
    assert set(read_settings().settings.units) == set(after.units)
    kept = folder / "settings-1.toml"
    assert "# mine" in path.read_text(encoding="utf-8") or kept.read_text(encoding="utf-8") == text


points = st.builds(
    PracticePoint,
    model=st.sampled_from(["tarnwick-cvd-10y", "tarnwick-falls"]),
    time=st.sampled_from([1.0, 10.0, 7.5]),
    unit=st.sampled_from(["a", "d"]),
    probability=st.sampled_from([0.1, 0.25]),
    label=practices.filter(str.strip),
    source=practices.filter(str.strip),
)
pointed = st.builds(
    lambda settings, some: replace(settings, decision_points=tuple(some)),
    all_settings,
    st.lists(points, max_size=4, unique=True),
)


@hypothesis_settings(max_examples=80, deadline=None, suppress_health_check=[HealthCheck.function_scoped_fixture])
@given(pointed, pointed, st.data())
def test_any_settings_come_from_any_others_and_no_comment_is_lost(
    folder: Path, before: Settings, after: Settings, data: st.DataObject
) -> None:
    """Comments stand at any places between the lines of any settings; single lines are changed, no copy is needed."""
    before = replace(before, decision_points=tuple(p for p in before.decision_points if p not in after.decision_points))
    lines = spell(before).splitlines(keepends=True)
    places = [i for i, line in enumerate(lines) if not line.startswith((" ", "]"))]
    for number, place in enumerate(sorted(data.draw(st.sets(st.sampled_from(places), max_size=4)), reverse=True)):
        lines.insert(place, f"# by hand {number}\n")
    text = "".join(lines)
    gone = before.decision_points
    path = folder / FILE_NAME
    path.write_bytes(text.encode("utf-8"))
    assert read_settings().settings == before
    write_settings(after)
    now = read_settings()
    assert now.problems == ()
    assert replace(now.settings, units=()) == replace(after, units=())
    assert set(now.settings.units) == set(after.units)
    assert [entry.name for entry in folder.iterdir()] == [FILE_NAME]
    if not gone:  # what is written among the lines of a point goes with it
        kept = path.read_text(encoding="utf-8")
        assert all(line in kept for line in lines if line.startswith("# "))


def test_the_last_of_two_windows_undoes_nothing(path: Path) -> None:
    """Both read the file; each changes something else, the second knows nothing of the first."""
    both = read_settings().settings
    first = replace(
        both.with_recent(Path("/models/one.json")).with_unit("urea", "mmol/L"),
        practice="Tarnwick Northgate",
        decision_points=(*both.decision_points, point("first")),
    )
    second = replace(
        both.with_recent(Path("/models/two.json")).with_unit("glucose", ""),
        paper=Paper.LETTER,
        decision_points=(both.decision_points[1], point("second")),
    )
    change_settings(both, first)
    now = change_settings(both, second)
    assert now == read_settings().settings
    assert (now.practice, now.paper) == ("Tarnwick Northgate", Paper.LETTER)
    assert [Path(file).name for file in now.recent_files] == ["two.json", "one.json"]
    assert {(one.quantity, one.unit) for one in now.units} == {("creatinine", "umol/L"), ("urea", "mmol/L")}
    assert [one.label for one in now.decision_points] == ["Physiotherapy", "first", "second"]


def test_a_point_for_which_there_is_no_room_any_more_is_refused() -> None:
    full = Settings(decision_points=tuple(point(str(number)) for number in range(MOST_POINTS)))
    write_settings(full)
    with pytest.raises(UsageError, match="there are 8 decision points in the settings file already"):
        change_settings(Settings(), Settings(decision_points=(point("one more"),)))
    assert read_settings().settings == full


def test_a_file_with_a_bad_line_is_not_touched_before_somebody_agrees(folder: Path) -> None:
    path = folder / FILE_NAME
    path.write_text('level = 2\npractice = "Tarnwick" # ours\n', encoding="utf-8")
    reading = read_settings()
    with pytest.raises(FileNotWritten, match=r"settings\.toml, line 1: level 2 lies outside"):
        change_settings(reading.settings, replace(reading.settings, paper=Paper.LETTER))
    assert text_of(path) == 'level = 2\npractice = "Tarnwick" # ours\n'


@pytest.mark.parametrize(
    ("lines", "line", "sentence"),
    [
        ('glucose = "mmol"', 2, 'cannot be in "mmol"; its units are "mg/dL" or "mmol/L". Did you mean "mmol/L"?'),
        ('glucose = "MG/DL"', 2, 'its units are "mg/dL" or "mmol/L". Did you mean "mg/dL"?'),
        ('urea = "mmol/L"\nglucose = "kPa"', 3, 'glucose cannot be in "kPa"; its units are "mg/dL" or "mmol/L". The'),
        ("glucose = 3", 2, 'glucose is a unit between quotation marks: "mg/dL" or "mmol/L".'),
        ('glucos = "mmol/L"', 2, '"glucos" is not a quantity that is known; did you mean glucose?'),
        ('number = "mmol/L"', 2, 'number cannot be in "mmol/L"; its units are "1". The'),
    ],
)
def test_a_bad_unit_is_named_with_its_line_and_the_others_hold(
    folder: Path, lines: str, line: int, sentence: str
) -> None:
    (folder / FILE_NAME).write_text(f'[units]\n{lines}\ncreatinine = "umol/L"\n', encoding="utf-8")
    reading = read_settings()
    assert len(reading.problems) == 1
    assert reading.problems[0].startswith(f"{FILE_NAME}, line {line}: ")
    assert sentence in reading.problems[0]
    assert reading.problems[0].endswith("The unit of each file is used. Mend the line or delete it.")
    assert reading.settings.unit_of("creatinine") == "umol/L"
    assert reading.settings.unit_of("glucose") == ""


def test_units_that_are_no_table_are_said(folder: Path) -> None:
    (folder / FILE_NAME).write_text("level = 0.9\nunits = 3\n", encoding="utf-8")
    reading = read_settings()
    assert reading.settings == Settings(level=0.9)
    assert reading.problems[0].startswith(f"{FILE_NAME}, line 2: units is a table; it begins with a line [units]")


@pytest.mark.parametrize(
    ("line", "sentence"),
    [
        ('letterhead = "one line"', "letterhead is a list of lines between quotation marks"),
        ("letterhead = ['1', '2', '3', '4', '5']", "letterhead has 5 lines, and at most 4 fit over a print."),
        ("letterhead = ['1', ' ']", "line 2 of letterhead is empty; leave it out."),
        (f"letterhead = ['{'x' * 81}']", "line 1 of letterhead has 81 characters, and at most 80 fit on a print."),
        ('letterhead = ["a\\u202eb"]', "line 1 of letterhead holds U+202E, a character that is not seen"),
    ],
)
def test_a_bad_letterhead_is_left_out_with_its_line(folder: Path, line: str, sentence: str) -> None:
    (folder / FILE_NAME).write_text(f'practice = "Tarnwick"\n{line}\n', encoding="utf-8")
    reading = read_settings()
    assert reading.settings == Settings(practice="Tarnwick")
    assert len(reading.problems) == 1
    assert reading.problems[0].startswith(f"{FILE_NAME}, line 2: {sentence}")
    assert reading.problems[0].endswith("It is left out: none is used. Mend the line or delete it.")


def test_what_is_used_in_place_of_a_bad_line_is_said(folder: Path) -> None:
    (folder / FILE_NAME).write_text('level = 95\npaper = "A5"\n', encoding="utf-8")
    ends = [problem.partition("The default is used: ")[2] for problem in read_settings().problems]
    assert ends == ["0.95. Mend the line or delete it.", '"A4". Mend the line or delete it.']
