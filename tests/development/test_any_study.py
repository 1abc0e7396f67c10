"""Whatever stands at a place of a study file, reading it ends in a study or in sentences, never otherwise."""

import copy
from collections.abc import Iterator
from pathlib import Path
from typing import Any

import pytest

from clinicalc.development.study import take_study
from clinicalc.errors import DescriptionRefused
from tests.development.describing import Tree, bare_number, linear_terms, spell_toml
from tests.development.studying import plain_study, timed

SEX = {
    "id": "sex",
    "label": "Sex",
    "kind": "choice",
    "group": "Person",
    "choices": [{"id": "female", "label": "Female"}, {"id": "male", "label": "Male"}],
}
ODD: tuple[Any, ...] = (None, 5, -1, "x", "", True, [], {}, [1, 2], ["a"], {"a": 1}, [{}], "age", [[1]], 10**30)
Place = tuple[str | int, ...]


def whole_study() -> Tree:
    """A study with every kind of part."""
    ratio = {"numerator": "dose", "denominator": "weight"}
    terms: list[Tree] = [
        {"spline_of": "age", "knots": 4, "steps": [{"divide": 10}], "id": "age10"},
        {"categories_of": "sex", "reference": "male"},
        *linear_terms(["dose_each"]),
        linear_terms(["weight"])[0] | {"coefficient": 0.1, "fixed": True},
    ]
    study = plain_study(
        ["age", SEX, "dose", bare_number("weight") | {"possible": [1, 300]}],
        timed(competing=[2, 3], entry="entry"),
        {"kind": "cox", "ties": "efron", "covariance": "cluster", "cluster": "practice", "round_times": 9},
        terms=terms,
    )
    study["equations"][0]["competing_events"] = {"handled": "censored", "which": "other deaths"}
    derived = {"id": "dose_each", "label": "Dose a kilogram", "quantity": "number", "unit": "1", "equation": "ratio"}
    study["derived"] = [derived | {"inputs": ratio}]
    study["cohort"]["person"] = "number"
    study["cohort"]["columns"] = {"age": {"column": "years", "unit": "1", "missing": [-9, "?"]}}
    study["cohort"]["columns"]["sex"] = {"levels": {"female": "F", "male": ["M", "m"]}}
    study["patients"] = [{"values": {"age": 60, "sex": "male", "dose": 1, "weight": 70}}]
    return study


def places(part: object, at: Place = ()) -> Iterator[Place]:
    if at:
        yield at
    inside = part.items() if isinstance(part, dict) else enumerate(part) if isinstance(part, list) else ()
    for key, value in inside:
        yield from places(value, (*at, key))


def changed(study: Tree, at: Place, value: object) -> Tree:
    """A copy with another value at a place, or without it (None)."""
    found: Any = copy.deepcopy(study)
    inner = found
    for key in at[:-1]:
        inner = inner[key]
    if value is None:
        del inner[at[-1]]
    else:
        inner[at[-1]] = value
    return dict(found)


def problems(study: Tree) -> tuple[str, ...]:
    """What is said of a study; nothing where it is taken, one empty text where it is refused for no reason."""
    try:
        take_study(spell_toml(study), "study.toml", Path())
    except DescriptionRefused as refused:
        return tuple(problem.message for problem in refused.problems) or ("",)
    return ()


def test_the_study_itself_is_taken() -> None:
    study = take_study(spell_toml(whole_study()), "study.toml", Path())
    assert [plan.equations for plan in study.fits] == [("all",)]
    assert study.dictionary.outcome.competing == ("2", "3")
    assert study.dictionary.cluster == "practice"
    assert study.dictionary.columns[1].levels == (("female", "F"), ("male", "M"), ("male", "m"))


@pytest.mark.parametrize("value", ODD, ids=repr)
def test_any_value_at_any_place(value: object) -> None:
    study = whole_study()
    said = {at: problems(changed(study, at, value)) for at in places(study)}
    assert any(said.values())
    assert [at for at, sentences in said.items() if sentences == ("",)] == []
