"""Unconfirmed figures in words: the digits are those of the file, found there by a walk of the test's own."""

import json
import re
from collections.abc import Iterator

import pytest

from clinicalc.coefficients.reader import read_bytes
from clinicalc.library.records import Compared
from clinicalc.operations.open_figures import MOST_ROWS, OpenFigure, list_open_figures
from clinicalc.resources import find_shipped
from tests.operations.practice_kit import shipped

SHIPPED = sorted(
    path.name.removesuffix(".json") for path in find_shipped("example_models").iterdir() if path.name.endswith(".json")
)


def figures_of(id: str) -> tuple[OpenFigure, ...]:
    """The open figures of a shipped file."""
    return list_open_figures(read_bytes(shipped(id).read_bytes(), id).content.model)


def at(id: str, pointer: str) -> object:
    """What stands in the file at a pointer, read as plain JSON."""
    place = json.loads(shipped(id).read_bytes())["model"]
    for step in pointer.split("/")[1:]:
        place = place[int(step)] if isinstance(place, list) else place[step]
    return place


def numbers_in(value: object) -> Iterator[float]:
    """Every number below a place of the file; true and false are none."""
    if isinstance(value, dict | list):
        for below in value.values() if isinstance(value, dict) else value:
            yield from numbers_in(below)
    elif isinstance(value, int | float) and not isinstance(value, bool):
        yield float(value)


def numbers_said(figure: OpenFigure) -> set[float]:
    """Every number in what is said of it, and in the words and figures of its parts."""
    said = " ".join((figure.what, *(word for part in figure.parts for word in part))).replace("−", "-")
    return {float(found) for found in re.findall(r"-?\d+(?:\.\d+)?(?:e[-+]?\d+)?", said)}


@pytest.mark.parametrize("id", SHIPPED)
def test_every_entry_of_every_shipped_file_in_order(id: str) -> None:
    entries = json.loads(shipped(id).read_bytes())["model"]["unconfirmed"]
    figures = figures_of(id)
    assert [(f.at, f.why, f.check_against) for f in figures] == [
        (entry["at"], entry["why"], entry["check_against"]) for entry in entries
    ]
    assert all(figure.what and figure.figure and figure.parts for figure in figures)
    assert not any(figure.what.startswith("/") for figure in figures)


@pytest.mark.parametrize("id", SHIPPED)
def test_a_single_figure_has_the_digits_of_the_file(id: str) -> None:
    for figure in figures_of(id):
        stated = at(id, figure.at)
        if isinstance(stated, int | float):
            assert float(figure.figure.replace("−", "-")) == stated


@pytest.mark.parametrize("id", SHIPPED)
def test_no_number_below_an_entry_is_left_out_of_its_parts(id: str) -> None:
    """Spline knots and powers stand in the words of a term ("what it is multiplied with"), all others by themselves."""
    for figure in figures_of(id):
        stated = at(id, figure.at)
        signs = {abs(number) for number in numbers_said(figure)}  # "minus 60" is a step by −60 or 60
        lacking = {abs(number) for number in numbers_in(stated)} - signs
        assert not lacking, (figure.at, lacking)


def test_words_of_a_few() -> None:
    found = {figure.at: figure for figure in figures_of("ascvd-2013-pooled-cohort")}
    # 0.9665 and −29.18: baseline survival and mean of the linear predictor of the first equation in the shipped file
    first = found["/equations/0/horizons/0"]
    assert first.what == "equation white_women: 10 years"
    assert first.figure == "baseline survival 0.9665; mean of the linear predictor −29.18"
    assert first.parts == (("baseline survival", "0.9665"), ("mean of the linear predictor", "−29.18"))
    assert found["/equations/0/terms/7/coefficient"].figure == "1.957"
    assert found["/equations"].what == "equations"
    assert found["/equations"].figure == f"{len(found['/equations'].parts)} statements"
    lists = {figure.at: figure.what for figure in figures_of("cvd-2021-regional")}
    assert lists["/equations/0/terms"] == "equation women: terms"


def test_the_rows_of_a_matrix_stand_one_by_one() -> None:
    (band,) = (f for f in figures_of("general-cvd-2008-lipids") if f.at == "/equations/0/uncertainty")
    rows = [words for words, _ in band.parts if words.startswith("covariance, ")]
    matrix = at("general-cvd-2008-lipids", "/equations/0/uncertainty/covariance")
    assert isinstance(matrix, list)
    assert len(rows) == len(matrix) <= MOST_ROWS


def test_who_compared_it_stands_with_the_figure_itself() -> None:
    content = read_bytes(shipped("cvd-2021-regional").read_bytes(), "regional").content.model
    compared = (Compared("/equations/0/terms", "Cleo Fell"),)
    by = {figure.at: figure.compared_by for figure in list_open_figures(content, compared)}
    assert by["/equations/0/terms"] == "Cleo Fell"
    assert set(by.values()) == {"Cleo Fell", ""}
