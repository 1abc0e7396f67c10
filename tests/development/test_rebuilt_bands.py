"""A published model described with its printed intervals: the band is rebuilt, as [reconstruct] asks."""

import copy
from pathlib import Path
from typing import Any

import numpy as np
import pytest

from clinicalc.coefficients.schema import ReconstructedBand
from clinicalc.development.reconstruction import reconstruct_bands
from clinicalc.development.reconstruction_plan import ReconstructionPlan
from tests.development.describing import bare_number, plain_model, write_rows
from tests.development.lung_case import Case


@pytest.fixture
def published(tmp_path: Path) -> Case:
    """An invented model with two terms, their printed intervals and a described population."""
    interval = {"scale": "ratio", "level": 0.95}
    terms: list[dict[str, Any]] = [
        {"id": "x", "coefficient": 0.5, "interval": interval | {"lower": 1.4, "upper": 1.95}, "product": [{"of": "x"}]},
        {
            "id": "z",
            "coefficient": -0.2,
            "interval": interval | {"lower": 0.7, "upper": 0.96},
            "product": [{"of": "z"}],
        },
    ]
    equation = {
        "id": "all",
        "link": "cloglog",
        "competing_events": {"handled": "not_applicable"},
        "terms": terms,
        "horizons": [{"years": 10, "baseline_survival": 0.9, "mean_linear_predictor": 0.1, "events": 120}],
    }
    tree = plain_model("Invented.", [bare_number("x"), bare_number("z")], [equation])
    numbers = [{"id": "x", "mean": 0.2, "sd": 1}, {"id": "z", "mean": 0, "sd": 1.1}]
    tree["population"] = {"source": "Invented.", "numbers": numbers, "correlations": [[1, 0.3], [0.3, 1]], "yes_no": []}
    tree["reconstruct"] = {"seed": 7, "people": 20_000}
    tree["patients"] = [{"values": {"x": 1, "z": 0.5}}]
    return Case(tmp_path, tree)


def test_it_is_the_band_that_the_room_rebuilds(published: Case) -> None:
    made = published.package().model.content
    band = made.equations[0].uncertainty
    assert isinstance(band, ReconstructedBand)
    plan = ReconstructionPlan(seed=7, people=20_000)
    assert band == reconstruct_bands(made, plan).equations[0].uncertainty
    assert isinstance(made.worked_examples[0].lower, float)


def test_words_and_rows_are_handed_on(published: Case) -> None:
    rng = np.random.default_rng(3)
    write_rows(published.folder / "people.csv", ["x", "z"], rng.normal(size=(500, 2)).tolist())
    published.tree["reconstruct"] |= {
        "rows": "people.csv",
        "rows_source": "500 invented rows.",
        "remarks": ["A remark that is kept."],
        "equations": {"all": {"standard_errors": {"z": 0.11}}},
        "patients": [{"words": "somebody", "values": {"x": 0, "z": 0}}],
    }
    del published.tree["population"]
    del published.tree["reconstruct"]["patients"]  # other correlations are tried only with a described population
    band = published.package().model.content.equations[0].uncertainty
    assert isinstance(band, ReconstructedBand)
    assert band.covariance[1][1] == pytest.approx(0.11**2, rel=1e-9)
    said = " ".join(band.assumptions) if isinstance(band.assumptions, tuple) else ""
    assert "A remark that is kept." in said
    assert "500 invented rows." in said


def test_all_that_is_lacking_is_said_at_its_place(published: Case) -> None:
    del published.equation["terms"][0]["interval"]
    published.tree["decision_points"] = [{"probability": 1.2, "label": "Think", "source": "Invented."}]
    found = published.problems()
    assert any(said.startswith("decision_points 1, probability") for said in found)
    del published.tree["decision_points"]
    assert published.only_problem().startswith('equations "all", terms "x": "x" has neither a printed interval nor')


def test_a_band_that_is_there_already_or_comes_from_a_fit(published: Case) -> None:
    spoilt = copy.deepcopy(published.tree)
    spoilt["equations"][0]["uncertainty"] = {"basis": "none", "because": "None is printed."}
    assert "the band is rebuilt" in Case(published.folder, spoilt).only_problem()
    spoilt = published.tree | {"fit": {"all": {"kind": "cox", "coefficients": "coef.csv"}}}
    said = Case(published.folder, spoilt).only_problem()
    assert said.startswith('reconstruct: the bands of all equations are rebuilt, and "all" has a fit')


def test_a_table_of_another_shape(published: Case) -> None:
    published.tree["reconstruct"] = {"sed": 7}
    found = published.problems()
    assert all(said.startswith("reconstruct") for said in found)
    assert any('Did you mean "seed"?' in said for said in found)


def test_rows_that_cannot_be_read(published: Case) -> None:
    published.tree["reconstruct"] |= {"rows": "people.csv"}
    assert '"rows_source" is missing' in published.only_problem()
    published.tree["reconstruct"] |= {"rows_source": "Invented."}
    assert published.only_problem().startswith("reconstruct.rows: there is no such file")
