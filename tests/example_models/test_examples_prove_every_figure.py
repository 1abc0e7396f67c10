"""No figure of a shipped file can be mistyped unseen: with any one of them changed, its worked examples refuse it."""

import copy
import json
from collections.abc import Iterator, Mapping, Sequence
from typing import Any

import pytest

from clinicalc.assessment.proof import load_model_bytes
from clinicalc.coefficients.reader import read_bytes
from clinicalc.coefficients.writer import write_bytes
from clinicalc.errors import CoefficientFileRefused
from clinicalc.resources import list_example_models, read_shipped

Place = tuple[str | int, ...]
Tree = dict[str, Any]

NOT_BEHIND_A_NUMBER = {
    "interval": "a printed interval of a coefficient is shown and enters no number",
    "reference_person": "values of the person beside whom the patient is set; they enter no probability",
    "basis": "which basis function of a spline: a number of order, not a figure (the knots are changed)",
    "competing_events": "words",
    "population": "the people of the cohort: they enter no number of a patient whose values are all there, and what is"
    " rebuilt from them is made again and compared in its own test",
}
MIRRORED = {"above": "from", "from": "above", "below": "up_to", "up_to": "below"}
CUTS = {*MIRRORED, "clip_low", "clip_high"}


def tree_of(name: str) -> Tree:
    tree: Tree = json.loads(read_shipped(f"example_models/{name}"))
    return tree


def figures(node: object, place: Place = ()) -> Iterator[tuple[Place, float]]:
    """Yield every number below a node, with its place, but those that enter no result."""
    if isinstance(node, Mapping):
        for name, value in node.items():
            if name not in NOT_BEHIND_A_NUMBER:
                yield from figures(value, (*place, name))
    elif isinstance(node, Sequence) and not isinstance(node, str):
        for index, value in enumerate(node):
            yield from figures(value, (*place, index))
    elif isinstance(node, int | float) and not isinstance(node, bool):
        yield place, node


def at(tree: Tree, place: Place) -> Any:
    node: Any = tree
    for part in place:
        node = node[part]
    return node


def put(node: Any, place: Place, value: object) -> Any:
    """Return the node with another value at a place; what lies off the way is shared."""
    if not place:
        return value
    changed = copy.copy(node)
    changed[place[0]] = put(node[place[0]], place[1:], value)
    return changed


def loads(tree: Tree) -> bool:
    try:
        load_model_bytes(json.dumps(tree).encode(), "changed.json")
    except CoefficientFileRefused:
        return False
    return True


def is_idle_knot(tree: Tree, place: Place) -> bool:
    """Say whether a spline's basis is made without this knot: it takes the first, its own and the last two."""
    if len(place) < 2 or place[-2] != "knots":
        return False
    spline = at(tree, place[:-2])
    last = len(spline["knots"]) - 1
    return place[-1] not in {0, spline["basis"] - 1, last - 1, last}


def figures_of_the_result(tree: Tree) -> list[tuple[Place, float]]:
    """Return every number of the equations and the recalibrations that enters a result, covariances among them."""
    model = tree["model"]
    found = [one for part in ("equations", "recalibrations") for one in figures(model[part], ("model", part))]
    return [(place, figure) for place, figure in found if not is_idle_knot(tree, place)]


def unseen_when_changed(tree: Tree, places: list[tuple[Place, float]], share: float) -> list[Place]:
    """Return the places whose figure may grow by a share of itself (0: by 0.01) and the file still loads."""
    assert loads(tree)
    return [place for place, figure in places if loads(put(tree, place, figure * (1 + share) if figure else 0.01))]


@pytest.mark.parametrize("name", list_example_models())
def test_a_figure_raised_by_half_a_percent_is_refused(name: str) -> None:
    tree = tree_of(name)
    places = figures_of_the_result(tree)
    coefficients = [place for place, _ in places if place[-1] == "coefficient"]
    assert len(coefficients) == sum(len(equation["terms"]) for equation in tree["model"]["equations"])
    assert unseen_when_changed(tree, places, 0.005) == []


@pytest.mark.parametrize("name", ["diabetes-2007-clinical.json", "total-cvd-2024-base.json"])
def test_a_cut_lowered_by_half_a_percent_is_refused(name: str) -> None:
    # a cut moved down is seen by another patient than one moved up; of other figures either direction says the same
    tree = tree_of(name)
    cuts = [(place, figure) for place, figure in figures_of_the_result(tree) if place[-1] in CUTS]
    assert cuts
    assert unseen_when_changed(tree, cuts, -0.005) == []


def test_no_other_file_has_a_cut() -> None:
    having = {
        name for name in list_example_models() if any(p[-1] in CUTS for p, _ in figures_of_the_result(tree_of(name)))
    }
    assert having == {"diabetes-2007-clinical.json", "total-cvd-2024-base.json"}


@pytest.mark.parametrize("name", list_example_models())
def test_a_cut_that_takes_or_leaves_its_own_value_wrongly_is_refused(name: str) -> None:
    tree = tree_of(name)
    steps = [place for place, _ in figures_of_the_result(tree) if place[-1] in MIRRORED]
    unseen = []
    for place in steps:
        ((cut, value),) = at(tree, place[:-1]).items()
        if loads(put(tree, place[:-1], {MIRRORED[cut]: value})):
            unseen.append(place)
    assert unseen == []
    assert bool(steps) is (name == "diabetes-2007-clinical.json")


def products(tree: Tree) -> Iterator[Place]:
    """Yield the place of every product of every term."""
    for e, equation in enumerate(tree["model"]["equations"]):
        for t, term in enumerate(equation["terms"]):
            place: Place = ("model", "equations", e, "terms", t)
            if "product" in term:
                yield (*place, "product")
            else:
                yield from ((*place, "sum", s) for s in range(len(term["sum"])))


@pytest.mark.parametrize("name", list_example_models())
def test_a_product_without_one_of_its_factors_is_refused(name: str) -> None:
    # an "or" whose parts overlap would count one patient twice; an interaction would lose its partner
    tree = tree_of(name)
    unseen = []
    for place in products(tree):
        whole = at(tree, place)
        for index in range(len(whole) if len(whole) > 1 else 0):
            if loads(put(tree, place, [*whole[:index], *whole[index + 1 :]])):
                unseen.append((*place, index))
    assert unseen == []


@pytest.mark.parametrize("name", list_example_models())
def test_a_yes_that_counts_as_no_is_refused(name: str) -> None:
    tree = tree_of(name)
    answers = {one["id"] for one in tree["model"]["predictors"] if one["kind"] == "yes_no"}
    factors = [
        (*place, index) for place in products(tree) for index, one in enumerate(at(tree, place)) if one["of"] in answers
    ]
    assert {at(tree, place)["of"] for place in factors} == answers
    unseen = []
    for place in factors:
        factor = at(tree, place)
        counts_no = factor.get("steps") == [{"is": ["no"]}]
        assert counts_no or "steps" not in factor
        if loads(put(tree, place, {"of": factor["of"], "steps": [{"is": ["yes" if counts_no else "no"]}]})):
            unseen.append(place)
    assert unseen == []


def test_cuts_that_belong_to_the_other_sex_are_refused() -> None:
    # Wilson et al., Arch Intern Med 2007;167:1068: HDL cholesterol below 40 mg/dL in men, below 50 in women
    tree = tree_of("diabetes-2007-clinical.json")
    terms = tree["model"]["equations"][0]["terms"]
    (term,) = [index for index, one in enumerate(terms) if one["id"] == "low_hdl_cholesterol"]
    place: Place = ("model", "equations", 0, "terms", term, "sum")
    men, women = at(tree, place)
    assert (men[1]["steps"], women[1]["steps"]) == ([{"below": 40}], [{"below": 50}])
    assert not loads(put(tree, place, [[men[0], women[1]], [women[0], men[1]]]))


@pytest.mark.parametrize("name", list_example_models())
def test_the_writer_gives_back_the_very_bytes_of_a_shipped_file(name: str) -> None:
    data = read_shipped(f"example_models/{name}")
    assert write_bytes(read_bytes(data, name).content) == data
