"""What a reader of numbers is told of the methods of a fit: notes of the file, which stand beside every result."""

from dataclasses import replace
from pathlib import Path

import pytest

from clinicalc.assessment.findings import Grade
from clinicalc.development.study_cautions import find_cautions
from clinicalc.development.study_package import package_fitted
from tests.cli.calling import call
from tests.development.method_studies import binary_study, fitted_of, random_people, timed_study
from tests.development.studying import write_people, write_study

FILLED = {"imputation": {"sets": 3, "rounds": 3, "seed": 1}}


def notes_beside_a_result(folder: Path, study: dict[str, object]) -> list[str]:
    """The notes of the model as the command's record of a result has them."""
    write_people(folder / "people.csv", random_people())
    out = folder / "model.json"
    made = call("fit", str(write_study(folder, study)), "-o", str(out))
    assert made.status == 0, made.err
    record = call("assess", str(out), "x=50", "z=1", "--json").record
    return [
        finding["message"]
        for finding in record["findings"]
        if finding["grade"] == Grade.NOTE.value and finding["message"].startswith("About this model: ")
    ]


def test_what_was_filled_in_stands_beside_every_result(tmp_path: Path) -> None:
    notes = notes_beside_a_result(tmp_path, timed_study("cox", **FILLED))
    assert (
        "About this model: In the people it was fitted to, missing values of x (10.0\u202f%) were filled in by multiple"
        " imputation; the band holds what that leaves open."
    ) in notes


def test_chains_that_had_not_mixed_are_said(tmp_path: Path) -> None:
    fitted = fitted_of(tmp_path, timed_study("cox", **FILLED))
    (figures,) = fitted.figures
    assert figures.imputed is not None
    open_ = replace(fitted, figures=(replace(figures, imputed=replace(figures.imputed, settled=False)),))
    (said,) = find_cautions(open_)
    assert said.endswith("The sets of filled-in values had not settled.")


def test_competing_events_that_are_counted_stand_beside_every_result(tmp_path: Path) -> None:
    notes = notes_beside_a_result(tmp_path, timed_study("fine-gray"))
    (said,) = [note for note in notes if "Competing events (another death) are counted" in note]
    assert "the share of people who will have the event" in said
    assert said.endswith("is not its effect on the event itself.")


@pytest.mark.parametrize(("penalty", "words"), [("ridge", "shrunk on purpose (ridge"), ("firth", "Firth’s penalty")])
def test_a_penalty_stands_beside_every_result(penalty: str, words: str, tmp_path: Path) -> None:
    notes = notes_beside_a_result(tmp_path, binary_study(penalty=penalty))
    assert any(words in note and "band" in note for note in notes)


def test_a_plain_fit_adds_nothing(tmp_path: Path) -> None:
    assert list(find_cautions(fitted_of(tmp_path, timed_study("cox")))) == []


def test_what_the_study_says_itself_stays_and_nothing_is_said_twice(tmp_path: Path) -> None:
    fitted = fitted_of(tmp_path, timed_study("fine-gray", **FILLED))
    own = fitted.model.content.use.cautions
    added = tuple(find_cautions(fitted))
    assert len(added) == 2
    cautions = package_fitted(fitted).content.model.use.cautions
    assert cautions == (*own, *added)
