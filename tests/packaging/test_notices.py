"""The notices name everything that they must: fonts, codes, and the packages that an installation brings."""

import json
import re
import tomllib
from pathlib import PurePath
from typing import Any

import pytest

from clinicalc.resources import find_shipped, list_example_models, read_shipped
from tests.packaging.checkout import ROOT


@pytest.fixture(scope="module")
def notices() -> str:
    """The text of the notices that ship."""
    return read_shipped("resources/THIRD_PARTY.md").decode("utf-8")


def test_every_runtime_package_is_named_with_a_licence(notices: str) -> None:
    project = tomllib.loads((ROOT / "pyproject.toml").read_text(encoding="utf-8"))["project"]
    needed = {re.split(r"[^\w-]", entry)[0].replace("-", "_") for entry in project["dependencies"]}
    rows = [line for line in notices.splitlines() if line.startswith("| ")]
    unnamed = {name for name in needed if not any(row.startswith((f"| {name} ", f"| {name},")) for row in rows)}
    assert needed
    assert unnamed == set()


def test_every_font_is_named_and_its_licence_ships(notices: str) -> None:
    fonts = {entry.name for entry in find_shipped("resources/fonts").iterdir()}
    assert "SourceSans3-OFL.md" in fonts
    assert "SIL Open Font License, Version 1.1" in read_shipped("resources/fonts/SourceSans3-OFL.md").decode("utf-8")
    assert {name for name in fonts if PurePath(name).suffix == ".ttf" and f"{name}`" not in notices} == set()
    families = {name.partition("-")[0].removesuffix(".ttf") for name in fonts}
    terms = {name.partition("-")[0] for name in fonts if PurePath(name).suffix in {".md", ".txt"}}
    assert terms == families


def _loinc_codes(node: Any) -> set[str]:
    """Every code under a key "loinc", however deep it lies."""
    if isinstance(node, list):
        return set().union(*(_loinc_codes(child) for child in node))
    if isinstance(node, dict):
        return set(node.get("loinc") or ()).union(*(_loinc_codes(child) for child in node.values()))
    return set()


def test_every_loinc_code_travels_with_its_name_and_the_notice(notices: str) -> None:
    codes = set().union(
        *(_loinc_codes(json.loads(read_shipped(f"example_models/{name}"))) for name in list_example_models())
    )
    assert "2093-3" in codes
    assert {code for code in codes if f"| {code} | " not in notices} == set()
    assert "This material contains content from LOINC (http://loinc.org)." in notices
