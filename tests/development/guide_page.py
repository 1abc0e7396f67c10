"""The guide's page on packaging as its reader uses it: blocks of code saved under the names they begin with."""

import re
import tomllib
from pathlib import Path
from typing import Any

from clinicalc.operations.guide import read_page_source
from tests.development.describing import spell_toml

PAGE = "packaging"
STORED = Path(__file__).parent / "data" / "packaging"
"""The tables that the page's R blocks wrote with R 4.2.2 and survival 3.5-3, for machines without R."""


def blocks(language: str) -> dict[str, str]:
    """The page's blocks of one language by the name in their first line, as they stand."""
    found = re.findall(rf"^```{language}\n(.*?)^```", read_page_source(PAGE), re.MULTILINE | re.DOTALL)
    return {re.sub(r"^# |,.*", "", block.partition("\n")[0]): block for block in found}


def save_descriptions(folder: Path) -> None:
    """three_months.toml as it stands, and lung.toml with the parts that the page puts in place of others."""
    texts = blocks("toml")
    (folder / "three_months.toml").write_text(texts["three_months.toml"], encoding="utf-8")
    tree: dict[str, Any] = tomllib.loads(texts["three_months.toml"]) | tomllib.loads(texts["lung.toml"])
    (folder / "lung.toml").write_text(spell_toml(tree), encoding="utf-8")
