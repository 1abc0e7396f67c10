"""The top level of the repository holds what its layout names, and nothing else."""

from tests.packaging.checkout import tracked_files

FILES = {"README.md", "DEVELOPERS.md", "pyproject.toml"}
FOLDERS = {"clinicalc", "resources", "tests", "example_models"}


def test_nothing_else_stands_at_the_top_level() -> None:
    strangers = set()
    for name in tracked_files():
        top, mark, _ = name.partition("/")
        if not top.startswith(".") and top not in (FOLDERS if mark else FILES):
            strangers.add(top)
    assert not strangers, f"move these into one of {sorted(FOLDERS)}: {sorted(strangers)}"


def test_everything_that_belongs_there_is_there() -> None:
    tracked = tracked_files()
    tops = {name.partition("/")[0] for name in tracked}
    assert tops >= FILES | FOLDERS


def test_nothing_that_a_tool_makes_is_tracked() -> None:
    made = [name for name in tracked_files() if "__pycache__" in name or name.endswith((".pyc", ".pyo", ".whl"))]
    assert made == []
