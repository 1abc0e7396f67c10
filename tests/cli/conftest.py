"""A library for the commands to work on."""

from pathlib import Path

import pytest

from tests.cli.practices import FINGERPRINT, Desk, found_practice


@pytest.fixture
def desk(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> Desk:
    """A library that was just founded."""
    return found_practice(tmp_path, monkeypatch)


@pytest.fixture
def approved(desk: Desk) -> Desk:
    """The same with one model in use."""
    desk.install()
    assert desk.approve("--fingerprint", FINGERPRINT).status == 0
    return desk
