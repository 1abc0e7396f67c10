"""Commands that go well, and what they print."""

import json
from pathlib import Path
from typing import Any

from tests.cli.calling import call


def do(*words: str) -> str:
    """What a command that goes well prints."""
    ended = call(*words)
    assert (ended.status, ended.err) == (0, "")
    return ended.out


def on_one_line(text: str) -> str:
    return " ".join(text.split())


def validated(folder: Path, *words: str) -> Any:
    """The one horizon of the plan, as the record says it."""
    (at,) = json.loads(do("validate", str(folder / "plan.toml"), *words, "--json"))["validation"]["horizons"]
    return at
