"""The guide's two fits, each in a folder of its own."""

from pathlib import Path

import pytest

from tests.development.lung_case import Case, open_case


@pytest.fixture
def lung(tmp_path: Path) -> Case:
    """The Cox fit, ready to be spoilt."""
    return open_case(tmp_path, "lung")


@pytest.fixture
def months(tmp_path: Path) -> Case:
    """The logistic fit, ready to be spoilt."""
    return open_case(tmp_path, "three_months")
