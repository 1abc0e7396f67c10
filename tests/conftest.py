"""What holds for every test: random examples are never judged by the clock, and each process has folders of its own.

Speed is measured in `benchmarks`. Neither the developer's settings nor another worker's lock files play a part.
"""

import os
from collections.abc import Iterator

import pytest
from hypothesis import settings

settings.register_profile("unhurried", deadline=None)
settings.load_profile("unhurried")


@pytest.fixture(scope="session", autouse=True)
def _own_folders(tmp_path_factory: pytest.TempPathFactory) -> Iterator[None]:
    """Settings, Qt's own among them, and what lives no longer than a session; readable by nobody else, as Qt asks."""
    with pytest.MonkeyPatch.context() as patch:
        for variable in ("CLINICALC_SETTINGS", "XDG_CONFIG_HOME", "XDG_RUNTIME_DIR", "APPDATA"):
            folder = tmp_path_factory.mktemp(variable.lower())
            folder.chmod(0o700)
            patch.setenv(variable, os.fspath(folder))
        patch.delenv("CLINICALC_LIBRARY", raising=False)
        yield
