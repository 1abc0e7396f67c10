"""The file: what is written reads back, bad hand edits are answered with a line, and nothing is lost."""

import os
import stat
import sys
import tomllib
from dataclasses import replace
from pathlib import Path

import pytest
from hypothesis import HealthCheck, given
from hypothesis import settings as hypothesis_settings
from hypothesis import strategies as st

from clinicalc.errors import FileNotWritten
from clinicalc.settings import (
    FILE_NAME,
    Paper,
    PreferredUnit,
    Settings,
    SettingsReading,
    ThemeChoice,
    change_settings,
    choosable_quantities,
    read_settings,
    write_settings,
)
from clinicalc.settings.folder import VARIABLE

CHOSEN = Settings(
    theme=ThemeChoice.DARK,
    recent_files=('C:\\models\\"one".json', "/models/zweite Größe.json"),
    practice="Tarnwick Northgate",
    paper=Paper.LETTER,
    level=0.9,
    library="/shares/Größe/library",
    practice_key="0123456789abcdef" * 4,
    letterhead=("Tarnwick Northgate", "3 Quay Lane, Tarnwick"),
    units=(PreferredUnit("glucose", "mmol/L"),),
)


@pytest.fixture(autouse=True)
def folder(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> Path:
    """A settings folder of the test's own; it does not exist yet."""
    folder = tmp_path / "kept" / "clinicalc"
    monkeypatch.setenv(VARIABLE, str(folder))
    return folder


def put(folder: Path, text: str | bytes) -> Path:
    """A settings file with this in it."""
    folder.mkdir(parents=True, exist_ok=True)
    path = folder / FILE_NAME
    path.write_bytes(text if isinstance(text, bytes) else text.encode("utf-8"))
    return path


def test_no_file_means_the_defaults(folder: Path) -> None:
    assert read_settings() == SettingsReading(Settings())
    assert not folder.exists()  # reading leaves nothing behind


def test_what_is_written_is_read_back(folder: Path) -> None:
    write_settings(CHOSEN)
    assert read_settings() == SettingsReading(CHOSEN)
    assert [path.name for path in folder.iterdir()] == [FILE_NAME]


paths = st.text(st.characters(exclude_categories=["Cs"], exclude_characters="\0"), min_size=1)
practices = st.text(st.characters(exclude_categories=["Cc", "Cf", "Cs", "Zl", "Zp"]), max_size=80)
units = st.sampled_from([PreferredUnit(entry.id, code) for entry in choosable_quantities() for code in entry.units])
all_settings = st.builds(
    Settings,
    theme=st.sampled_from(ThemeChoice),
    recent_files=st.lists(paths, max_size=8).map(tuple),
    practice=practices,
    paper=st.sampled_from(Paper),
    level=st.floats(0.5, 0.999),
    library=practices.map(lambda name: name and f"/{name}"),
    practice_key=st.sampled_from(["", "0123456789abcdef" * 4]),
    letterhead=st.lists(practices.filter(str.strip), max_size=4).map(tuple),
    units=st.lists(units, max_size=4, unique_by=lambda one: one.quantity).map(tuple),
)


@hypothesis_settings(max_examples=60, deadline=None, suppress_health_check=[HealthCheck.function_scoped_fixture])
@given(all_settings)
def test_all_settings_are_read_back(settings: Settings) -> None:
    write_settings(settings)
    reading = read_settings()
    assert set(reading.settings.units) == set(settings.units)  # their order says nothing
    assert replace(reading, settings=replace(reading.settings, units=settings.units)) == SettingsReading(settings)


def test_a_window_never_undoes_that_a_machine_joined_a_library() -> None:
    """The window read its settings before somebody joined, or joined another library, in a terminal."""
    before = Settings(theme=ThemeChoice.DARK, library="/old", practice_key="f" * 64)
    write_settings(before)
    write_settings(replace(before, library=CHOSEN.library, practice_key=CHOSEN.practice_key))
    change_settings(before, replace(before, paper=Paper.LETTER))
    settings = read_settings().settings
    assert (settings.theme, settings.paper) == (ThemeChoice.DARK, Paper.LETTER)
    assert (settings.library, settings.practice_key) == (CHOSEN.library, CHOSEN.practice_key)


def test_a_window_writes_nothing_over_a_file_that_was_broken_meanwhile(folder: Path) -> None:
    path = put(folder, 'library = \n# by hand\npractice = "Tarnwick Northgate"\n')
    before = path.read_bytes()
    with pytest.raises(FileNotWritten, match="nothing is written over it unasked") as refused:
        change_settings(Settings(), CHOSEN)
    assert f"{FILE_NAME}, line 1: this is not TOML" in str(refused.value)
    assert [(entry.name, entry.read_bytes()) for entry in folder.iterdir()] == [(FILE_NAME, before)]
    write_settings(CHOSEN)  # asked for
    assert read_settings() == SettingsReading(CHOSEN)
    assert (folder / "settings-1.toml").read_bytes() == before


def test_the_file_is_toml_that_a_person_can_read(folder: Path) -> None:
    write_settings(Settings(recent_files=("/models/one.json",)))
    text = (folder / FILE_NAME).read_text(encoding="utf-8")
    assert text.splitlines()[1:] == [
        'theme = "system"',
        'practice = ""',
        "letterhead = []",
        'paper = "A4"',
        "level = 0.95",
        'library = ""',
        'practice_key = ""',
        "recent_files = [",
        '    "/models/one.json",',
        "]",
    ]
    assert text.startswith("# ")
    assert tomllib.loads(text)["level"] == 0.95


@pytest.mark.parametrize(
    ("line", "sentence"),
    [
        ('theme = "blue"', 'theme "blue" is none of "system", "light", "dark".'),
        ("theme = 0x" + "f" * 5000, 'theme is none of "system", "light", "dark".'),
        ('theme = "' + "é" * 50 + '"', f'theme "{"é" * 40}…" is none of "system", "light", "dark".'),
        ('paper = "a4"', 'paper "a4" is none of "A4", "Letter".'),
        ("level = 95", "level 95 lies outside 0.5 to 0.999. 95\u202f% is written 0.95."),
        ('level = "0.9"', "level is a number without quotation marks, such as 0.95."),
        ("level = true", "level is a number without quotation marks, such as 0.95."),
        ("level = nan", "level nan lies outside 0.5 to 0.999."),
        ("level = 0x" + "f" * 500, "level is a number from 0.5 to 0.999."),
        ("practice = 3", "practice is a name between quotation marks."),
        ('practice = "a\\nb"', "practice holds U+000A, a character that is not seen or breaks the line."),
        ('recent_files = "one.json"', "recent_files is a list of paths between quotation marks, such as"),
        ("recent_files = [1]", "recent_files is a list of paths between quotation marks, such as"),
        ('recent_files = ["' + '", "'.join("123456789") + '"]', "recent_files holds 9 paths, and at most 8 are kept."),
        (
            'colour = "blue"',
            '"colour" is not a setting; there are theme, recent_files, practice, paper, level, library, practice_key, '
            "letterhead, units, decision_points.",
        ),
        ("library = 3", "library is the full path of a folder between quotation marks."),
        ('library = "models"', "library models is not the full path of a folder; a full path begins at the drive"),
        ("practice_key = 3", "practice_key is a key's id between quotation marks: 64 digits"),
        ('practice_key = "abc"', "practice_key has 64 digits from 0 to 9 and a to f, and this has 3 characters"),
        ('practice_key = "' + "ABCD " * 16 + '"', "practice_key is written without spaces and in small letters."),
        ("[practice]\nname = 1", "practice is a name between quotation marks."),
    ],
)
def test_a_bad_line_is_named_and_the_others_hold(folder: Path, line: str, sentence: str) -> None:
    """The bad line is the third; the two before it are taken unless it is about the same setting."""
    others = [t for t in ('theme = "dark"', "level = 0.9", "paper = 'Letter'") if t.split()[0] != line.split()[0]][:2]
    put(folder, "\n".join([*others, line, ""]))
    reading = read_settings()
    assert len(reading.problems) == 1
    assert reading.problems[0].startswith(f"{FILE_NAME}, line 3: {sentence}")
    kept = {text.split()[0]: text.split()[2].strip("\"'") for text in others}
    assert str(reading.settings.theme) == kept.get("theme", "system")
    assert str(reading.settings.level) == kept.get("level", "0.95")
    assert str(reading.settings.paper) == kept.get("paper", "A4")


def test_every_bad_line_has_its_sentence(folder: Path) -> None:
    put(folder, 'level = 2\n\n# mine\npaper = "A5"\npractice = "Tarnwick Northgate"\n')
    reading = read_settings()
    assert [problem.partition(":")[0] for problem in reading.problems] == [
        f"{FILE_NAME}, line 1",
        f"{FILE_NAME}, line 4",
    ]
    assert reading.settings == Settings(practice="Tarnwick Northgate")


@pytest.mark.parametrize(
    ("content", "line"),
    [
        (b'theme = "dark"\nlevel = \n', 2),
        (b'theme = "dark"\nlevel 0.9\n', 2),
        (b"level = 0.9\nlevel = 0.9\n", 2),
        (b'theme = "dark"\r\n\r\npractice = "Tarn\r\n', 3),
        (b'theme = "dark"\npractice = "unfinished', 2),
        (b'theme = "dark"\npractice = "\xff"\n', 2),
    ],
)
def test_a_file_that_is_no_toml_gives_the_defaults_and_the_line(folder: Path, content: bytes, line: int) -> None:
    path = put(folder, content)
    reading = read_settings()
    assert reading.settings == Settings()
    assert len(reading.problems) == 1
    assert reading.problems[0].startswith(f"{FILE_NAME}, line {line}: this is not ")
    assert path.read_bytes() == content


@pytest.mark.parametrize("content", [b"level = " + b"9" * 5000, b"a = " + b"[" * 5000, b"# " + b"x" * (1 << 20)])
def test_a_file_made_to_hurt_gives_the_defaults(folder: Path, content: bytes) -> None:
    put(folder, content)
    reading = read_settings()
    assert (reading.settings, len(reading.problems)) == (Settings(), 1)


def test_a_byte_order_mark_and_windows_line_ends_are_taken(folder: Path) -> None:
    put(folder, b'\xef\xbb\xbftheme = "dark"\r\nlevel = 0.9\r\n')
    assert read_settings() == SettingsReading(Settings(theme=ThemeChoice.DARK, level=0.9))


def test_a_folder_in_its_place_is_said(folder: Path) -> None:
    (folder / FILE_NAME).mkdir(parents=True)
    assert "this is not a file" in read_settings().problems[0]
    with pytest.raises(FileNotWritten, match="the settings could not be written"):
        write_settings(CHOSEN)
    assert [path.name for path in folder.iterdir()] == [FILE_NAME]


@pytest.mark.skipif(sys.platform == "win32", reason="Windows has no named pipes among its files")
def test_a_pipe_in_its_place_is_not_waited_for(folder: Path) -> None:
    folder.mkdir(parents=True)
    os.mkfifo(folder / FILE_NAME)
    assert "this is not a file" in read_settings().problems[0]


def test_a_file_that_was_not_taken_whole_is_kept_beside_the_new_one(folder: Path) -> None:
    for number, text in enumerate(['colour = "blue"\n', "level = \n"], 1):
        put(folder, text)
        write_settings(CHOSEN)
        assert (folder / f"settings-{number}.toml").read_text(encoding="utf-8") == text
        assert read_settings() == SettingsReading(CHOSEN)
    write_settings(Settings())
    assert sorted(path.name for path in folder.iterdir()) == ["settings-1.toml", "settings-2.toml", FILE_NAME]


def test_a_failed_write_leaves_the_old_file_and_nothing_else(folder: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    write_settings(CHOSEN)
    before = (folder / FILE_NAME).read_bytes()

    def refuse(*_: object) -> None:
        raise OSError(28, "No space left on device")

    monkeypatch.setattr(os, "fsync", refuse)
    with pytest.raises(FileNotWritten, match="No space left on device"):
        write_settings(Settings())
    assert [(path.name, path.read_bytes()) for path in folder.iterdir()] == [(FILE_NAME, before)]


def test_the_file_is_on_the_disk_before_it_takes_the_place_of_the_old(monkeypatch: pytest.MonkeyPatch) -> None:
    order: list[str] = []
    fsync, rename = os.fsync, os.replace

    def note_fsync(handle: int) -> None:
        order.append("fsync")
        fsync(handle)

    def note_replace(source: str, target: Path) -> None:
        order.append("replace")
        rename(source, target)

    monkeypatch.setattr(os, "fsync", note_fsync)
    monkeypatch.setattr(os, "replace", note_replace)
    write_settings(CHOSEN)
    assert order == ["fsync", "replace"]


@pytest.mark.skipif(sys.platform == "win32", reason="links need a privilege on Windows")
def test_a_link_stays_a_link(folder: Path, tmp_path: Path) -> None:
    target = tmp_path / "elsewhere.toml"
    target.write_text('theme = "dark"\n', encoding="utf-8")
    folder.mkdir(parents=True)
    (folder / FILE_NAME).symlink_to(target)
    write_settings(CHOSEN)
    assert (folder / FILE_NAME).is_symlink()
    assert 'practice = "Tarnwick Northgate"' in target.read_text(encoding="utf-8")


@pytest.mark.skipif(sys.platform == "win32", reason="Windows has no such permission bits")
def test_nobody_else_can_read_the_file(folder: Path) -> None:
    write_settings(CHOSEN)
    assert stat.S_IMODE((folder / FILE_NAME).stat().st_mode) == 0o600


def test_the_settings_have_no_place_for_a_patient() -> None:
    assert set(Settings.__slots__) == {
        "theme",
        "recent_files",
        "practice",
        "paper",
        "level",
        "decision_points",
        "library",
        "practice_key",
        "letterhead",
        "units",
    }
