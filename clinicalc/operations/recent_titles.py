"""What the files opened lately call themselves, for a menu; nothing here is checked, so nothing here is used."""

import json
from collections.abc import Iterable
from dataclasses import dataclass
from pathlib import Path

_MOST_BYTES = 4 << 20


@dataclass(frozen=True, slots=True)
class RecentFile:
    """A coefficient file that was opened before, with the title by which a person knows it."""

    path: Path
    title: str


def name_recent_files(paths: Iterable[str]) -> tuple[RecentFile, ...]:
    """Each path with the title and version that the file states, or with its file name where it states none.

    Never raises: a file that is gone or damaged is explained when somebody opens it. Two files that would read
    alike get their file names as well.
    """
    named = [RecentFile(Path(path), _stated_title(Path(path)) or Path(path).name) for path in paths]
    titles = [file.title for file in named]
    return tuple(
        RecentFile(file.path, f"{file.title} ({file.path.name})") if titles.count(file.title) > 1 else file
        for file in named
    )


def _stated_title(path: Path) -> str:
    try:
        if not path.is_file():  # a pipe would be waited for
            return ""
        with path.open("rb") as file:
            content = json.loads(file.read(_MOST_BYTES))
        model = content["model"]
        title, version = model["title"], model["version"]
    except (OSError, ValueError, LookupError, TypeError, RecursionError):
        return ""
    return f"{title}, {version}" if isinstance(title, str) and isinstance(version, str) and title.strip() else ""
