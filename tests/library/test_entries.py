"""Two entries of one paper: a slip in any figure is found, and nothing else is called one."""

import pytest

from clinicalc.library.aspects import Aspect
from clinicalc.library.difference import ChangeKind
from clinicalc.library.entries import compare_entries
from tests.assessment.cases import FULL, shipped
from tests.library.versions import Tree, tree_of, version_of

PAPER = "general-cvd-2008-lipids"


@pytest.mark.parametrize("id", FULL)
def test_an_entry_agrees_with_itself(id: str) -> None:
    found = compare_entries(shipped(id).content, shipped(id).content)
    assert found.agrees
    assert found.agreeing_figures > 40
    assert found.agreeing_figures + found.agreeing_texts == sum(count for _, count in found.agreeing)


def test_spaces_in_texts_do_not_count_and_words_do() -> None:
    def change(model: Tree) -> None:
        model["use"]["population"] = f"  {model['use']['population'].replace(' ', '   ')}\u00a0"
        model["title"] = f"{model['title']} form"

    found = compare_entries(shipped(PAPER).content, version_of(PAPER, change).content.model)
    assert found.figures == ()
    assert [(change.aspect, change.new) for change in found.texts] == [
        (Aspect.TITLE, f"{shipped(PAPER).content.title} form")
    ]


def test_the_last_digit_of_a_coefficient_counts() -> None:
    def change(model: Tree) -> None:
        model["equations"][1]["terms"][2]["coefficient"] += 1e-5

    found = compare_entries(shipped(PAPER).content, version_of(PAPER, change).content.model)
    (figure,) = found.figures
    assert figure.new_path == "/model/equations/1/terms/2/coefficient"
    assert float(figure.new) - float(figure.old) == pytest.approx(1e-5)
    assert found.texts == ()


def test_means_intervals_ranges_and_examples_are_compared_figure_by_figure() -> None:
    def change(model: Tree) -> None:
        equation = model["equations"][0]
        equation["horizons"][0]["baseline_survival"] += 0.001
        term = next(term for term in equation["terms"] if "interval" in term)
        term["interval"]["upper"] += 0.01
        model["predictors"][0]["derivation"] = [30, 75]
        model["worked_examples"][0]["tolerance"] = 0.001
        population = equation.get("population") or model["population"]
        population["numbers"][0]["mean"] += 1
        population["correlations"][0][1] += 0.01
        population["correlations"][1][0] += 0.01

    found = compare_entries(shipped(PAPER).content, version_of(PAPER, change).content.model)
    assert [change.aspect for change in found.figures].count(Aspect.POPULATION) == 3
    assert {change.aspect for change in found.figures} == {
        Aspect.BASELINES,
        Aspect.INTERVALS,
        Aspect.RANGES,
        Aspect.EXAMPLES,
        Aspect.POPULATION,
    }
    (limit,) = [change for change in found.figures if change.aspect is Aspect.RANGES]
    assert (limit.old, limit.new) == ("74", "75")
    assert limit.what.endswith("range of derivation: upper end")
    (cell, mirrored) = [change for change in found.figures if "correlations" in change.what]
    assert cell.what.rpartition(": ")[2].split(" and ") == mirrored.what.rpartition(": ")[2].split(" and ")[::-1]


def test_terms_that_the_two_persons_named_differently_are_the_same_terms() -> None:
    def change(model: Tree) -> None:
        for equation in model["equations"]:
            for place, term in enumerate(equation["terms"]):
                term["id"] = f"b{place}"
        model["equations"][0]["terms"][1]["coefficient"] += 0.5

    found = compare_entries(shipped(PAPER).content, version_of(PAPER, change).content.model)
    (figure,) = [change for change in found.figures if change.aspect is Aspect.COEFFICIENTS]
    assert figure.kind is ChangeKind.CHANGED
    assert float(figure.new) - float(figure.old) == pytest.approx(0.5)


def test_a_term_that_one_entry_lacks_is_said() -> None:
    def change(model: Tree) -> None:
        for equation in model["equations"]:
            equation["terms"].pop()
            equation["uncertainty"] = {"basis": "none", "because": "not entered"}
        model["unconfirmed"] = []
        for example in model["worked_examples"]:
            example.pop("lower", None)
            example.pop("upper", None)

    last = [equation["terms"][-1] for equation in tree_of(PAPER)["model"]["equations"]]
    found = compare_entries(shipped(PAPER).content, version_of(PAPER, change).content.model)
    gone = [change for change in found.figures if change.what.endswith(f"coefficient {last[0]['id']}")]
    assert [(change.kind, float(change.old)) for change in gone] == [
        (ChangeKind.REMOVED, term["coefficient"]) for term in last
    ]
