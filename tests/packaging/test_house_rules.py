"""The habits that a machine can hold us to: sizes, names, docstrings, where text is printed, what files may say."""

import ast
import inspect
import re
import shutil
import subprocess
import sys
import tomllib
from collections.abc import Iterator
from pathlib import Path

import pytest

from clinicalc import __version__, errors
from tests.packaging.checkout import ROOT, modules, place, tracked_files
from tests.packaging.source import definitions, parse

LONGEST_MODULE = 400
LONGEST_BODY = 40
VAGUE_WORDS = {"util", "utils", "helper", "helpers", "manager", "managers", "common"}
MAY_PRINT = ("clinicalc/cli/", "clinicalc/__main__.py")

# put together here, so that this file does not say them
MACHINE_PATHS = re.compile(r"(?<![\w.$}])/(?:" + "|".join(("tmp", "work")) + r")(?:/|\b(?![\w-]))|\.\./" + "shared")


def _words(name: str) -> set[str]:
    """The words in a name, lower case: "read_table" and "ReadTable" both have "read" and "table"."""
    return {word.lower() for word in re.findall(r"[A-Z]?[a-z]+|[A-Z]+(?![a-z])", name)}


def _all_python() -> list[Path]:
    folders = ("clinicalc", "example_models", "tests")
    return sorted(path for folder in folders for path in (ROOT / folder).rglob("*.py"))


def test_there_is_something_to_check() -> None:
    assert {place(path) for path in modules()} >= {"clinicalc/__init__.py", "clinicalc/errors.py"}
    assert any(definition.name == "ClinicalcError" for path in modules() for definition in definitions(path))


def test_no_module_is_longer_than_its_limit() -> None:
    lengths = {place(path): path.read_text(encoding="utf-8").count("\n") for path in _all_python()}
    assert {name: lines for name, lines in lengths.items() if lines > LONGEST_MODULE} == {}


def test_no_function_body_is_longer_than_its_limit() -> None:
    long = [
        f"{definition} has {definition.body_lines} lines"
        for path in modules()
        for definition in definitions(path)
        if not isinstance(definition.node, ast.ClassDef) and definition.body_lines > LONGEST_BODY
    ]
    assert long == []


def test_no_file_folder_class_or_function_has_a_name_that_says_nothing() -> None:
    paths = [place(path) for path in _all_python() if _words(place(path)) & VAGUE_WORDS]
    named = [str(found) for path in modules() for found in definitions(path) if _words(found.name) & VAGUE_WORDS]
    assert paths + named == []


def test_every_room_says_what_it_is_for() -> None:
    rooms = {path.parent for path in modules()}
    silent = [
        place(room)
        for room in sorted(rooms)
        if not (room / "__init__.py").is_file() or not ast.get_docstring(parse(room / "__init__.py"))
    ]
    assert silent == []


def test_every_module_says_what_it_is_for() -> None:
    assert [place(path) for path in modules() if not ast.get_docstring(parse(path))] == []


def test_every_public_function_and_class_has_a_docstring() -> None:
    bare = [
        str(found)
        for path in modules()
        for found in definitions(path)
        if found.is_public
        and not ast.get_docstring(found.node)
        and not _is_declaration(found.node)
        and not _is_answer_to_qt(found.name)
    ]
    assert bare == []


def _is_declaration(node: ast.AST) -> bool:
    """An overload or a protocol's member: its body is "..." alone, and what it stands for has the docstring."""
    return not isinstance(node, ast.ClassDef) and [ast.unparse(line) for line in getattr(node, "body", [])] == ["..."]


def _is_answer_to_qt(name: str) -> bool:
    """A method that Qt calls by a name of Qt's own, such as paintEvent: Qt's documentation says what it is for."""
    last = name.rpartition(".")[2]
    return "." in name and bool(re.fullmatch(r"[a-z]+(?:[A-Z][a-z]+)+", last))


def test_only_the_command_line_prints() -> None:
    printing = [
        f"{place(path)}:{node.lineno}"
        for path in modules()
        if not place(path).startswith(MAY_PRINT)
        for node in ast.walk(parse(path))
        if isinstance(node, ast.Call) and isinstance(node.func, ast.Name) and node.func.id == "print"
    ]
    assert printing == []


def test_no_exception_is_caught_without_a_name() -> None:
    bare = [
        f"{place(path)}:{node.lineno}"
        for path in _all_python()
        for node in ast.walk(parse(path))
        if isinstance(node, ast.ExceptHandler) and node.type is None
    ]
    assert bare == []


def _tree_in_words(text: str) -> dict[str, str]:
    """Each name of the drawn tree with the name that it hangs from."""
    parents: dict[str, str] = {}
    above: list[tuple[int, str]] = []
    for line in text.splitlines():
        found = re.match(r"(?P<before>[\s│]*(?:[├└]── )?)(?P<name>[A-Z]\w+)(?:\s{2,}|$)", line)
        if not found or not (above or line.startswith(" ")):
            continue
        depth = len(found["before"])
        above = [step for step in above if step[0] < depth]
        if above:
            parents[found["name"]] = above[-1][1]
        above.append((depth, found["name"]))
    return parents


def _error_classes() -> Iterator[type[errors.ClinicalcError]]:
    for _, kind in inspect.getmembers(errors, inspect.isclass):
        if issubclass(kind, errors.ClinicalcError) and kind is not errors.ClinicalcError:
            yield kind


def test_the_tree_drawn_above_the_errors_is_the_tree_of_the_errors() -> None:
    drawn = _tree_in_words(errors.__doc__ or "")
    assert drawn == {kind.__name__: kind.__bases__[0].__name__ for kind in _error_classes()}


def test_no_other_module_makes_errors_that_leave_it() -> None:
    ours = {kind.__name__ for kind in _error_classes()} | {"ClinicalcError"}
    elsewhere = [
        str(found)
        for path in modules()
        if path != ROOT / "clinicalc" / "errors.py"
        for found in definitions(path)
        if isinstance(found.node, ast.ClassDef)
        and not found.node.name.startswith("_")
        and any(base in ours or base.endswith(("Error", "Exception")) for base in _bases(found.node))
    ]
    assert elsewhere == []


def _bases(node: ast.ClassDef) -> set[str]:
    return {ast.unparse(base).rpartition(".")[2] for base in node.bases}


def _texts() -> Iterator[tuple[str, str]]:
    for name in tracked_files():
        data = (ROOT / name).read_bytes()
        if b"\0" not in data:
            yield name, data.decode("utf-8")


def test_no_tracked_text_names_a_place_on_somebodys_machine() -> None:
    told = [
        f"{name}:{text.count(chr(10), 0, found.start()) + 1} {found.group()}"
        for name, text in _texts()
        for found in MACHINE_PATHS.finditer(text)
    ]
    assert told == []


@pytest.mark.parametrize("folder", ["tmp", "work"])
def test_a_place_on_somebodys_machine_would_be_seen(folder: str) -> None:
    for text in (f'open("/{folder}/x")', f"see /{folder}/main", f"/{folder}"):
        assert MACHINE_PATHS.search(text), text
    for text in (f"$home/{folder}/x", f"example.org/{folder}/x", f"a {folder}/life balance", f"/{folder}ing"):
        assert not MACHINE_PATHS.search(text), text


def test_the_version_is_said_once() -> None:
    project = tomllib.loads((ROOT / "pyproject.toml").read_text(encoding="utf-8"))["project"]
    assert project["version"] == __version__


def test_the_import_contracts_are_kept() -> None:
    program = shutil.which("lint-imports", path=str(Path(sys.executable).parent)) or shutil.which("lint-imports")
    if program is None:
        pytest.skip("lint-imports is not installed here")
    done = subprocess.run([program, "--no-cache"], cwd=ROOT, capture_output=True, text=True, timeout=120)
    assert done.returncode == 0, done.stdout + done.stderr
