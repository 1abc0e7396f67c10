"""The checkout that these tests stand in, and what git tracks of it."""

import subprocess
from functools import cache
from pathlib import Path

import pytest

ROOT = Path(__file__).resolve().parents[2]


@cache
def _listing() -> tuple[str, ...] | None:
    command = ["git", "-c", "safe.directory=*", "-C", str(ROOT), "ls-files", "-z", "--cached"]
    try:
        done = subprocess.run(command, capture_output=True, check=True)
    except (OSError, subprocess.CalledProcessError):
        return None
    return tuple(name for name in done.stdout.decode().split("\0") if name)


def tracked_files() -> tuple[str, ...]:
    """The paths of the files that git tracks and that still exist, relative to the checkout, with "/" between.

    Skips the calling test where there is no git or no git checkout, such as in an unpacked source archive.
    """
    listing = _listing()
    if listing is None:
        pytest.skip("not a git checkout, or no git on this machine")
    return tuple(name for name in listing if (ROOT / name).exists())


def modules() -> tuple[Path, ...]:
    """Every module of the package, sorted; needs no git."""
    return tuple(sorted((ROOT / "clinicalc").rglob("*.py")))


def place(path: Path) -> str:
    """The path relative to the checkout, for a message or a test's name."""
    return path.relative_to(ROOT).as_posix()
