"""What changed between two versions: nothing is left out, and what is said is what stands in the files."""

import copy
from collections.abc import Iterator
from typing import Any

import msgspec
import pytest

from clinicalc.coefficients.pointers import find_at
from clinicalc.coefficients.schema import ModelContent
from clinicalc.library.aspects import Aspect
from clinicalc.library.difference import Change, ChangeKind, find_difference, is_counted
from clinicalc.library.figures import list_figures
from tests.assessment.cases import FULL, shipped
from tests.library.versions import Tree, tree_of, version_of

TARNWICK = "tarnwick-cvd-10y"


def _changes(change: Any, id: str = TARNWICK) -> tuple[Change, ...]:
    return find_difference(shipped(id).content, version_of(id, change).content.model).changes


def _leaves(tree: Tree, path: tuple[str | int, ...] = ()) -> Iterator[tuple[str | int, ...]]:
    if isinstance(tree, dict):
        for name, value in tree.items():
            yield from _leaves(value, (*path, name))
    elif isinstance(tree, list):
        for place, value in enumerate(tree):
            yield from _leaves(value, (*path, place))
    else:
        yield path


def _first_and_last_of_each_kind(tree: Tree) -> set[tuple[str | int, ...]]:
    kinds: dict[tuple[str, ...], list[tuple[str | int, ...]]] = {}
    for path in _leaves(tree):
        kinds.setdefault(tuple("*" if isinstance(step, int) else step for step in path), []).append(path)
    return {path for paths in kinds.values() for path in (paths[0], paths[-1])}


def _other(value: object) -> object:
    if isinstance(value, bool):
        return not value
    if isinstance(value, int | float):
        return value + 1
    return "2026-01-01" if value is None else f"{value}x"


@pytest.mark.parametrize("id", FULL)
def test_a_file_does_not_differ_from_itself_and_every_statement_has_a_name_of_its_own(id: str) -> None:
    content = shipped(id).content
    figures = list_figures(content)
    assert len({figure.key for figure in figures}) == len(figures)
    found = find_difference(content, content)
    assert found.changes == ()
    assert sum(count for _, count in found.same) == sum(map(is_counted, figures)) > 80


@pytest.mark.parametrize("id", FULL)
def test_whatever_is_changed_in_a_file_is_said(id: str) -> None:
    """The first and the last leaf of each kind is given another value that has its shape; each must give a change."""
    tree = tree_of(id)["model"]
    old = msgspec.convert(tree, ModelContent)
    tried = 0
    for path in _first_and_last_of_each_kind(tree):
        other = copy.copy(tree)
        place: Tree = other
        for step in path[:-1]:
            place[step] = copy.copy(place[step])
            place = place[step]
        place[path[-1]] = _other(place[path[-1]])
        try:
            new = msgspec.convert(other, ModelContent)
        except msgspec.ValidationError:
            continue
        tried += 1
        assert find_difference(old, new).changes, path
    assert tried > 80


def test_a_coefficient_is_said_with_all_its_digits_and_both_places() -> None:
    def change(model: Tree) -> None:
        model["equations"][0]["terms"][8]["coefficient"] = 0.6588457536722695

    (found,) = _changes(change)
    assert found == Change(
        Aspect.COEFFICIENTS,
        "equation all: coefficient smoker",
        "0.7888457536722695",
        "0.6588457536722695",
        "/model/equations/0/terms/8/coefficient",
        "/model/equations/0/terms/8/coefficient",
    )


def test_changes_stand_in_page_order_and_the_paths_lead_to_them() -> None:
    def change(model: Tree) -> None:
        model["use"]["cautions"].append("Not for people on dialysis.")
        model["decision_points"][0]["probability"] = 0.075
        model["equations"][0]["horizons"][0]["intercept"] = -3.1
        model["predictors"][2]["usual"] = [95, 180]
        model["predictors"][3]["label"] = "Tablets for blood pressure"
        model["exclusions"][0]["ask"] = "Any cardiovascular disease before?"
        model["version"] = "1.1.0"

    found = _changes(change)
    assert [(change.aspect, change.kind, change.old, change.new) for change in found] == [
        (Aspect.IDENTITY, ChangeKind.CHANGED, "1.0.0", "1.1.0"),
        (
            Aspect.EXCLUSIONS,
            ChangeKind.CHANGED,
            tree_of(TARNWICK)["model"]["exclusions"][0]["ask"],
            "Any cardiovascular disease before?",
        ),
        (Aspect.RANGES, ChangeKind.ADDED, "", "95 to 180"),
        (Aspect.QUESTIONS, ChangeKind.CHANGED, "Takes tablets for blood pressure", "Tablets for blood pressure"),
        (Aspect.BASELINES, ChangeKind.CHANGED, "-3.2473031537233066", "-3.1"),
        (Aspect.DECISION_POINTS, ChangeKind.CHANGED, "0.1", "0.075"),
        (Aspect.CAUTIONS, ChangeKind.ADDED, "", "Not for people on dialysis."),
    ]
    tree = tree_of(TARNWICK)
    assert find_at(tree, found[4].old_path) == -3.2473031537233066
    assert found[2].what == "Systolic blood pressure: usual range"


def test_terms_are_set_side_by_side_by_name_and_a_change_of_order_is_one_row() -> None:
    def change(model: Tree) -> None:
        equation = model["equations"][0]
        terms, band = equation["terms"], equation["uncertainty"]
        terms[3], terms[4] = terms[4], terms[3]
        for row in band["covariance"]:
            row[3], row[4] = row[4], row[3]
        band["covariance"][3], band["covariance"][4] = band["covariance"][4], band["covariance"][3]
        centre = band["at_centre"][0]["centre"]
        centre[3], centre[4] = centre[4], centre[3]

    (found,) = _changes(change)
    assert found.what == "equation all: terms: order"
    assert "male, systolic_bp" in found.old
    assert "systolic_bp, male" in found.new


def test_a_covariance_is_one_row_that_counts_its_figures() -> None:
    def change(model: Tree) -> None:
        band = model["equations"][0]["uncertainty"]
        band["covariance"] = [[2 * figure for figure in row] for row in band["covariance"]]

    (found,) = _changes(change)
    assert (found.aspect, found.old) == (Aspect.COVARIANCE, "12 × 12 figures")
    assert found.new == "12 × 12 figures, 144 of them changed"


def test_a_question_taken_away_stands_where_it_stood() -> None:
    def change(model: Tree) -> None:
        del model["predictors"][7]
        equation = model["equations"][0]
        del equation["terms"][9]
        del equation["reference_person"]["diabetes"]
        equation["uncertainty"] = {"basis": "none", "because": "The covariance was not kept."}
        for example in model["worked_examples"]:
            del example["values"]["diabetes"]
            example.pop("lower", None)
            example.pop("upper", None)
        model["population"] = None

    found = _changes(change)
    gone = [change for change in found if change.kind is ChangeKind.REMOVED]
    (question,) = [change for change in gone if change.what == "Has diabetes"]
    assert question.old.startswith("kind: yes no; question: Has diabetes; group: History; explanation: ")
    assert (question.old_path, question.new_path) == ("/model/predictors/7", "")
    examples = [
        change for change in found if change.aspect is Aspect.EXAMPLES and change.what != "worked examples: order"
    ]
    assert len(examples) == 2 * len(tree_of(TARNWICK)["model"]["worked_examples"])
    assert [change.old for change in gone if change.what == "equation all: coefficient diabetes"] == [
        "1.11231764803386"
    ]
    order = list(Aspect)
    places = [order.index(change.aspect) for change in found if change.aspect in (Aspect.COEFFICIENTS, Aspect.USE)]
    assert places == sorted(places)


def test_the_sentence_names_what_is_the_same() -> None:
    def change(model: Tree) -> None:
        model["equations"][0]["terms"][0]["coefficient"] = 1.0

    found = find_difference(shipped(TARNWICK).content, version_of(TARNWICK, change).content.model)
    said = found.say_same()
    assert said.startswith("Same: id and version (2), title and outcome (2), exclusions")
    assert "baselines (1)" in said
    # twelve coefficients, one of which changed
    assert said.endswith(" Same besides: 11 of the coefficients.")


def test_two_quite_different_models_are_compared_without_a_statement_lost() -> None:
    """Every statement that one of the two makes alone stands in a row, or in the row of the part that it belongs to."""
    old, new = shipped("cvd-2021-regional").content, shipped(TARNWICK).content
    found = find_difference(old, new)
    for figures, others, side in (
        (list_figures(old), list_figures(new), "old_path"),
        (list_figures(new), list_figures(old), "new_path"),
    ):
        keys = {figure.key for figure in others}
        said = {getattr(change, side) for change in found.changes}
        for figure in figures:
            if figure.key in keys or figure.key[-1] == "order":
                continue
            above = ["/".join(figure.path.split("/")[:end]) for end in range(3, figure.path.count("/") + 2)]
            texts = [path for path in said if path.startswith(f"{figure.path}/")]
            assert said.intersection(above) or texts, figure
