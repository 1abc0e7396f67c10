"""Where the library lies: the option first, then the variable, then the setting."""

from pathlib import Path

import pytest

from clinicalc.errors import UsageError
from clinicalc.settings import LIBRARY_VARIABLE, Settings, library_place


def test_the_option_comes_first_then_the_variable_then_the_setting() -> None:
    environment = {LIBRARY_VARIABLE: "/variable"}
    assert library_place("/setting", "/option", environment) == Path("/option")
    assert library_place("/setting", None, environment) == Path("/variable")
    assert library_place("/setting", None, {LIBRARY_VARIABLE: ""}) == Path("/setting")
    assert library_place("", None, {}) is None


def test_option_and_variable_start_from_the_current_folder(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.chdir(tmp_path)
    assert library_place("", Path("library"), {}) == tmp_path / "library"
    assert library_place("", None, {LIBRARY_VARIABLE: "library"}) == tmp_path / "library"


@pytest.mark.parametrize(
    ("option", "variable", "sentence"),
    [
        ("", "/variable", "--library names no folder"),
        ("a\0b", "", "--library holds U\\+0000"),
        (None, "a\nb", "CLINICALC_LIBRARY holds U\\+000A"),
    ],
)
def test_what_is_no_path_is_refused_and_never_passed_over(option: str | None, variable: str, sentence: str) -> None:
    with pytest.raises(UsageError, match=sentence):
        library_place("/setting", option, {LIBRARY_VARIABLE: variable})


def test_a_relative_place_is_no_setting() -> None:
    with pytest.raises(UsageError, match="library models/approved is not the full path"):
        Settings(library="models/approved")


@pytest.mark.parametrize("key", ["0" * 63, "0" * 65, "g" * 64, "0" * 63 + "\n"])
def test_a_pinned_key_is_an_id_or_nothing(key: str) -> None:
    with pytest.raises(UsageError, match="practice_key has 64 digits"):
        Settings(practice_key=key)
