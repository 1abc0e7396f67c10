"""`package` as its users call it."""

import json
from pathlib import Path

import pytest

from tests.cli.calling import LIPIDS, call
from tests.development.describing import spell_toml
from tests.development.lung_case import Case, open_case


@pytest.fixture
def lung(tmp_path: Path) -> Case:
    return open_case(tmp_path, "lung")


def test_a_file_is_made_proved_and_told_about(lung: Case) -> None:
    out = lung.folder / "lung.json"
    ended = call("package", str(lung.folder / "lung.toml"), "--out", str(out))
    assert (ended.status, ended.err) == (0, "")
    assert ended.out.startswith("Death in advanced lung cancer, exercise: written to ")
    assert "Worked examples, each recomputed from the file: 1 printed, 0 from memory, 0 computed." in ended.out
    assert "The standard errors were checked with 1 more person than needed." in ended.out
    inspected = call("inspect", str(out))
    assert inspected.status == 0
    for group in ended.out.partition("Fingerprint")[2].split()[:16]:
        assert group in inspected.out
    answer = call("assess", str(out), "age=71", "sex=female", "ecog=2", "--time", "365 d", "--json").record
    # R 4.2.2, survival 3.5-3: survfit(fit, newdata, conf.type = "log-log") at 365
    assert answer["probability"] == pytest.approx(0.676154134633, abs=1e-9)
    assert answer["band"]["lower"] == pytest.approx(0.542044278078, abs=1e-9)
    assert answer["band"]["upper"] == pytest.approx(0.803624958018, abs=1e-9)


def test_what_is_wrong_ends_with_4_and_leaves_nothing(lung: Case) -> None:
    lung.tree["version"] = "1"
    lung.fit["covariance"] = "absent.csv"
    path = lung.folder / "wrong.toml"
    path.write_text(spell_toml(lung.tree), encoding="utf-8")
    before = sorted(lung.folder.iterdir())
    ended = call("package", str(path), "--out", str(lung.folder / "lung.json"))
    assert (ended.status, ended.out) == (4, "")
    head, *problems = ended.err.splitlines()
    assert head == "clinicalc: wrong.toml: no coefficient file is made from this (2 problems); nothing was written."
    assert problems[0].startswith("fit.all.covariance (absent.csv): there is no such file in the folder ")
    assert problems[1] == 'version: "1" must be three numbers with points between them, such as "1.0.0".'
    assert sorted(lung.folder.iterdir()) == before


def test_a_file_that_is_there_is_replaced_only_when_asked(lung: Case) -> None:
    out = lung.folder / "old.json"
    old = Path(LIPIDS).read_bytes()
    out.write_bytes(old)
    words = ("package", str(lung.folder / "lung.toml"), "--out", str(out))
    ended = call(*words)
    assert (ended.status, ended.out) == (2, "")
    assert "is there already and was left as it is" in ended.err
    assert out.read_bytes() == old
    assert call(*words, "--replace").status == 0
    assert json.loads(out.read_bytes())["model"]["id"] == "lung-survival"


@pytest.mark.parametrize("name", ["lung.toml", "lung_coef.csv"])
def test_what_is_no_coefficient_file_is_never_replaced(name: str, lung: Case) -> None:
    before = (lung.folder / name).read_bytes()
    ended = call("package", str(lung.folder / "lung.toml"), "--out", str(lung.folder / name), "--replace")
    assert ended.status == 2
    assert "is no coefficient file and was left as it is" in ended.err
    assert (lung.folder / name).read_bytes() == before


def test_a_folder_that_is_not_there(lung: Case) -> None:
    ended = call("package", str(lung.folder / "lung.toml"), "--out", str(lung.folder / "absent" / "lung.json"))
    assert ended.status == 5
    assert "the coefficient file could not be written" in ended.err


@pytest.mark.parametrize(
    ("text", "words"),
    [
        (None, "there is no such file"),
        ("id = ", "this is not TOML"),
        ("", 'the field "id" is missing'),
        ("id = 2026-10-02", 'this is a date of TOML; write it as a text: "2026-10-02"'),
        ('id = "x"\nid = "y"', "this is not TOML"),
        ("a = " + "[" * 500 + "]" * 500, "nested"),
        ('title = "a\\u202eb"', "U+202E"),
        ("outcome = 1e400", "outcome"),
        ("fit = 3", "fit: "),
        ("patients = 3", "patients: "),
        ("equations = 3", "equations: "),
        ("equations = [3]", "equations 1: "),
        ('equations = [{id = "all", terms = [3]}]', 'equations "all"'),
        (
            'equations = [{id = "all"}]\nfit = {all = {kind = "cox", coefficients = "x.csv"}}',
            'equations "all": the field "terms"',
        ),
    ],
)
def test_any_text_is_answered_in_words(text: str | None, words: str, tmp_path: Path) -> None:
    path = tmp_path / "described.toml"
    if text is not None:
        path.write_text(text, encoding="utf-8")
    ended = call("package", str(path), "--out", str(tmp_path / "x.json"))
    assert (ended.status, ended.out) == (4, ""), ended.err
    assert words in ended.err
    assert "inside the program" not in ended.err
    assert not (tmp_path / "x.json").exists()


def test_bytes_that_are_no_text(tmp_path: Path) -> None:
    path = tmp_path / "described.toml"
    path.write_bytes(b"\xff\xfe\x00")
    ended = call("package", str(path), "--out", str(tmp_path / "x.json"))
    assert ended.status == 4
    assert "is not UTF-8 text" in ended.err
    assert "write.csv" not in ended.err
