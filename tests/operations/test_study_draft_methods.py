"""The tables of imputation and bootstrap in a draft: there or not, and what else they hold."""

import pytest

from clinicalc.operations.study_draft_methods import (
    Methods,
    methods_of,
    usual_bootstrap,
    usual_imputation,
    with_methods,
)
from clinicalc.operations.study_draft_model import equation_of, fit_of, with_competing, with_fit

TREE: dict[str, object] = {"id": "made", "equations": [{"id": "one"}, {"id": "two"}]}


def test_a_tree_without_them_has_none() -> None:
    assert methods_of(TREE) == Methods(None, None)
    assert with_methods(TREE, Methods()) == TREE


def test_they_are_put_in_and_taken_away() -> None:
    both = with_methods(TREE, Methods(usual_imputation(), usual_bootstrap()))
    assert both["imputation"] == {"sets": 20, "rounds": 10, "seed": 1}
    assert both["bootstrap"] == {"replicates": 500, "seed": 1}
    assert "imputation" not in TREE, "the tree before stays as it was"
    assert methods_of(both) == Methods(usual_imputation(), usual_bootstrap())
    assert with_methods(both, Methods()) == TREE


def test_what_a_table_leaves_out_is_usual_and_what_else_it_says_stays() -> None:
    tree: dict[str, object] = {**TREE, "bootstrap": {"replicates": 30}, "imputation": {}}
    assert methods_of(tree) == Methods(usual_imputation(), {"replicates": 30, "seed": 1})
    more = with_methods({**TREE, "bootstrap": {"else": 1}}, Methods(bootstrap={"replicates": 40, "seed": 2}))
    assert more["bootstrap"] == {"else": 1, "replicates": 40, "seed": 2}


@pytest.mark.parametrize(
    ("kinds", "handled"),
    [(("cox", "fine-gray"), ["censored", "subdistribution"]), (("fine-gray", "cox"), ["subdistribution", "censored"])],
)
def test_each_equation_handles_competing_events_as_its_own_fit_does(kinds: tuple[str, str], handled: list[str]) -> None:
    tree = TREE
    for place, kind in enumerate(kinds):
        tree = with_fit(tree, {"kind": kind}, [{"years": 5}], place)
    assert [fit_of(tree, place)["kind"] for place in (0, 1)] == list(kinds)
    tree = with_competing(tree, "death")
    stated = [equation_of(tree, place)["competing_events"] for place in (0, 1)]
    assert stated == [{"handled": one, "which": "death"} for one in handled]
    turned = with_fit(tree, {"kind": kinds[1]}, [{"years": 5}], 0)
    assert equation_of(turned, 0)["competing_events"] == {"handled": handled[1], "which": "death"}
    assert equation_of(with_competing(tree, ""), 0)["competing_events"] == {"handled": "not_applicable"}


def test_a_tree_without_equations_is_answered_with_nothing() -> None:
    assert equation_of({"equations": "none"}) == {}
    assert fit_of({}) == {}
