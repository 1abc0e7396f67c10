"""A writer may die at any moment, by SIGKILL: what the library lists afterwards is whole, and nothing done is lost.

What a power failure does beyond that is the disk's; here it is shown that content is brought to the disk before it
gets its name, and the name before the work is called done.
"""

import json
import os
import subprocess
import sys
from pathlib import Path

import pytest

from tests.library.dying_writers import Death
from tests.library.shelf import comment, found, founding, model
from tests.packaging.checkout import ROOT

DEATHS = 100
NEEDS_FORK = pytest.mark.skipif(not hasattr(os, "fork"), reason="this system has no fork")


def _deaths(*words: str) -> list[Death]:
    """What the other process tells of each death."""
    done = subprocess.run(
        [sys.executable, "-m", "tests.library.dying_writers", *words],
        cwd=ROOT,
        capture_output=True,
        text=True,
        timeout=300,
    )
    assert done.returncode == 0, done.stderr
    return [Death(**json.loads(line)) for line in done.stdout.splitlines()]


@NEEDS_FORK
def test_dying_at_each_step_of_a_put_leaves_the_library_whole(tmp_path: Path) -> None:
    deaths = _deaths("put", str(tmp_path))
    assert {death.state for death in deaths} == {"whole"}
    assert {death.again for death in deaths} == {"done"}
    steps = [(death.call, death.moment) for death in deaths]
    for call in ("open", "write", "fsync", "link", "unlink", "close"):
        assert {"before", "after"} <= {moment for name, moment in steps if name == call}, call
    assert steps.count(("write", "within")) == 2  # the model's and the record's
    assert steps.count(("fsync", "before")) == 4  # each file's and each folder's
    assert [death.is_there for death in deaths if death.call == "link"] == [False, False, False, False, False, True]
    assert deaths[-1].parts_left  # deaths did fall inside writes


@NEEDS_FORK
@pytest.mark.parametrize("way", ["make", "fill"])
def test_dying_at_each_step_of_a_founding_leaves_a_library_or_none(tmp_path: Path, way: str) -> None:
    deaths = _deaths(way, str(tmp_path))
    assert {death.state for death in deaths} == {"whole", "none"}
    assert {"mkdir", "open", "write", "fsync", "link", "unlink"} <= {death.call for death in deaths}
    for death in deaths:
        if death.state == "whole":
            assert "a library in it already" in death.again
        elif way == "make":
            assert not death.is_there
            assert death.again == "done"
        else:
            assert death.again == "done" or "broken off" in death.again


@NEEDS_FORK
def test_a_hundred_deaths_at_random_moments_lose_nothing(tmp_path: Path, capsys: pytest.CaptureFixture[str]) -> None:
    deaths = _deaths("random", str(tmp_path), str(DEATHS), "20261201")
    inside = sum(death.was_inside for death in deaths)
    left = sum(death.parts_left for death in deaths)
    with capsys.disabled():
        sys.stdout.write(f"\n{inside} of {DEATHS} random deaths fell inside a write; {left} left a passing file\n")
    assert len(deaths) == DEATHS
    assert {death.state for death in deaths} == {"whole"}
    assert sum(death.missing for death in deaths) == 0
    assert max(death.acknowledged for death in deaths) > 10
    assert inside >= DEATHS // 2, inside
    assert left >= DEATHS // 5, left


def test_content_is_on_the_disk_before_its_name_and_the_name_before_it_is_done(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    library = found(tmp_path / "library")
    assert library.library_id() == founding().digest
    seen: list[str] = []
    for name in ("write", "fsync", "link", "unlink"):

        def note(*arguments: object, _name: str = name, _call: object = getattr(os, name), **options: object) -> object:
            seen.append(_name)
            assert callable(_call)
            return _call(*arguments, **options)

        monkeypatch.setattr(os, name, note)
    library.put_model(*model("one"))
    library.put_record(comment(model("one")[0], "A remark."))
    assert seen == ["write", "fsync", "link", "unlink", "fsync"] * 2


def test_a_stop_by_the_person_leaves_nothing_behind(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    library = found(tmp_path / "library")

    def interrupt(_: int) -> None:
        raise KeyboardInterrupt

    monkeypatch.setattr(os, "fsync", interrupt)
    with pytest.raises(KeyboardInterrupt):
        library.put_model(*model("one"))
    with pytest.raises(KeyboardInterrupt):
        found(tmp_path / "another")
    assert list((library.path / "models").iterdir()) == []
    assert [path.name for path in tmp_path.iterdir()] == ["library"]
