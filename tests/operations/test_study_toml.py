"""Study files written by the program: what is spelled reads back to the same tree, and a file is put in place whole."""

import tomllib
from pathlib import Path

import pytest
from hypothesis import given
from hypothesis import strategies as st

from clinicalc.errors import FileNotWritten
from clinicalc.operations.study_toml import has_comments, spell_toml, write_study
from tests.gui.study.study_files import STUDY

_TEXT = st.text(st.characters(exclude_categories=["Cs"]), max_size=20)
_SINGLE = st.one_of(
    st.booleans(), st.integers(-(2**53), 2**53), st.floats(allow_nan=False, allow_infinity=False), _TEXT
)
_VALUE = st.recursive(
    _SINGLE, lambda inner: st.lists(inner, max_size=4) | st.dictionaries(_TEXT, inner, max_size=4), max_leaves=12
)


@given(st.dictionaries(_TEXT, _VALUE, max_size=6))
def test_what_is_spelled_reads_back(tree: dict[str, object]) -> None:
    assert tomllib.loads(spell_toml(tree)) == tree


def test_a_study_file_reads_back() -> None:
    tree = tomllib.loads(STUDY)
    assert tomllib.loads(spell_toml(tree)) == tree


@pytest.mark.parametrize(
    ("text", "expected"),
    [
        (STUDY, True),
        ('a = "# not one"\n', False),
        ("a = '# not one'\n", False),
        ('a = """\n# not one\n"""\n', False),
        ("a = '''\n# not one\n'''\n", False),
        ('a = "\\"# not one"\n', False),
        ('a = "b" # one\n', True),
        ("# one\na = 1\n", True),
        ("a = 1\n", False),
    ],
)
def test_comments_are_found(text: str, expected: bool) -> None:
    tomllib.loads(text)
    assert has_comments(text) is expected


def test_a_file_that_is_there_is_replaced_only_where_that_is_said(tmp_path: Path) -> None:
    path = tmp_path / "study.toml"
    write_study(path, "a = 1\n", replace=False)
    with pytest.raises(FileNotWritten, match="is there already"):
        write_study(path, "a = 2\n", replace=False)
    assert tomllib.loads(path.read_text(encoding="utf-8")) == {"a": 1}
    write_study(path, "a = 2\n", replace=True)
    assert tomllib.loads(path.read_text(encoding="utf-8")) == {"a": 2}
    assert [one.name for one in tmp_path.iterdir()] == ["study.toml"]


def test_a_folder_that_is_not_there_is_named(tmp_path: Path) -> None:
    with pytest.raises(FileNotWritten, match="could not be written"):
        write_study(tmp_path / "nowhere" / "study.toml", "a = 1\n", replace=False)
