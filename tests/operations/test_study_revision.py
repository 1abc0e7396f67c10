"""Study files changed part by part: what stays keeps its letters, what comes out says what it should."""

import tomllib
from copy import deepcopy
from typing import Any

import pytest
from hypothesis import given
from hypothesis import strategies as st

from clinicalc.operations.study_revision import find_lost_comments, revise_toml
from clinicalc.operations.study_toml import spell_toml

TEXT = """# by the author
id = "made"  # never changed
title = "A title"
terms = [
    # within a list
    [1, 2],
]

# over the table
[use]
setting = "tests"  # beside

[cohort]
file = "people.csv"

[cohort.columns.sex]
levels = {female = "F"}

[estimate.all]
# in the fit
kind = "cox"

[[patients]]
id = "one"
"""


def changed(**parts: object) -> dict[str, Any]:
    """The tree of the text with other parts; None takes one away."""
    tree = tomllib.loads(TEXT) | parts
    return {name: value for name, value in tree.items() if value is not None}


def test_nothing_changed_is_the_same_text() -> None:
    assert revise_toml(TEXT, tomllib.loads(TEXT)) == TEXT


def test_a_single_value_changes_alone() -> None:
    assert revise_toml(TEXT, changed(title="Another")) == TEXT.replace('"A title"', '"Another"')
    assert find_lost_comments(TEXT, changed(title="Another")) == ()


def test_new_tables_come_last_and_new_values_before_the_first_table() -> None:
    tree = changed(imputation={"sets": 5}, outcome="said")
    text = revise_toml(TEXT, tree)
    assert tomllib.loads(text) == tree
    assert text.endswith('\nid = "one"\n\n[imputation]\nsets = 5\n')
    assert text.index('outcome = "said"') < text.index("# over the table")
    assert "# in the fit" in text


def test_a_changed_table_loses_its_own_comments_only() -> None:
    tree = changed(estimate={"all": {"kind": "logistic"}}, patients=None)
    text = revise_toml(TEXT, tree)
    assert tomllib.loads(text) == tree
    assert "# in the fit" not in text
    for kept in ("# by the author", "# never changed", "# within a list", "# over the table", "# beside"):
        assert kept in text
    assert find_lost_comments(TEXT, tree) == ("estimate",)


def test_a_table_that_is_taken_away_takes_all_its_lines() -> None:
    text = revise_toml(TEXT, changed(cohort=None, use=None))
    assert tomllib.loads(text) == changed(cohort=None, use=None)
    assert "over the table" not in text


@pytest.mark.parametrize(
    "text", ["", "a = 1", "[a]\nb = 1", "a.b = 1\na.c = 2\n", "a = [\n", "[a]\n[b]\n[a.c]\nd = 1\n"]
)
def test_whatever_the_text_the_tree_comes_out(text: str) -> None:
    """Also where the text has keys with dots, is cut off, or has a table in two places."""
    tree = {"a": {"b": 2, "c": {"d": 3}}, "b": {}, "e": 4}
    assert tomllib.loads(revise_toml(text, tree)) == tree


_NAMES = st.sampled_from(["a", "b", "c", "#d", "e f"])
_SINGLE = st.one_of(st.booleans(), st.integers(-9, 9), st.text("ab[]#=\n\"'", max_size=6))
_VALUE = st.recursive(_SINGLE, lambda inner: st.lists(inner, max_size=3) | st.dictionaries(_NAMES, inner, max_size=3))
_TREE = st.dictionaries(_NAMES, _VALUE, max_size=5)


@given(_TREE, _TREE)
def test_any_tree_comes_out_of_any_other(before: dict[str, Any], after: dict[str, Any]) -> None:
    old, kept = spell_toml(before), deepcopy(before) | after
    assert tomllib.loads(revise_toml(old, kept)) == kept
    assert tomllib.loads(revise_toml(old, after)) == after
    assert revise_toml(old, before) == old
