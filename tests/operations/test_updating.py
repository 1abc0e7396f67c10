"""From an installed model and people of a place to its next version: file, bedside, library."""

from pathlib import Path
from typing import Any

import msgspec
import numpy as np
import pytest

from clinicalc.assessment.assess import assess
from clinicalc.assessment.entry import entry_from_texts
from clinicalc.assessment.fields import NumberField
from clinicalc.assessment.limits import giving_limits
from clinicalc.assessment.model import Model
from clinicalc.assessment.proof import load_model
from clinicalc.assessment.rows import predict_rows
from clinicalc.coefficients.schema import Ancestry, CovarianceBand, ModelContent, NoBand, ReconstructedBand
from clinicalc.cohort.checked import BinaryOutcome, SurvivalOutcome
from clinicalc.errors import DescriptionRefused, Stopped
from clinicalc.library.aspects import Aspect
from clinicalc.library.difference import find_difference
from clinicalc.library.file_signatures import Worth
from clinicalc.library.standing import Standing
from clinicalc.operations.course import Course
from clinicalc.operations.inspection import inspect_file, write_sections
from clinicalc.operations.study import write_study
from clinicalc.operations.updating import NewVersion, package_update
from clinicalc.validation.updated import UpdateMethod, UpdateWish
from clinicalc.validation.updating import update_model
from tests.assessment.cases import shipped
from tests.library.keys_at_hand import key_of
from tests.operations.practice_kit import Room
from tests.validation.updated_people import (
    FIVE_YEARS,
    Array,
    figures_of,
    gbsg_people,
    pima_model,
    pima_people,
    proved,
    rotterdam_model,
)

HERE = NewVersion("1.1.0", "Everybody of the second study", begins="1984", ends="1989")


def updated_pima(model: Model, method: str) -> Any:
    """The package of the model updated to MASS::Pima.te."""
    people, outcome = pima_people()
    return package_update(model, update_model(model, people, outcome, UpdateWish(UpdateMethod(method))), HERE)


def at_the_bedside(model: Model, values: dict[str, str]) -> tuple[float, float, float]:
    """Probability and limits of one person."""
    estimate = assess(model, entry_from_texts(values), span=model.spans[0]).estimate
    assert estimate is not None
    assert estimate.band is not None
    return estimate.probability, estimate.band.lower, estimate.band.upper


def person_with(lp: float) -> dict[str, str]:
    """Somebody with that linear predictor before the update, by way of the bmi alone."""
    equation = pima_model().equations[0]
    values = {"npreg": 2.0, "glu": 120.0, "bmi": 0.0, "ped": 0.5, "age": 30.0}
    b = dict(zip(values, equation.lines[0].coefficients, strict=True))
    rest = equation.lines[0].lp0 + sum(b[name] * value for name, value in values.items())
    values["bmi"] = (lp - rest) / b["bmi"]
    return {name: f"{value:.17f}" for name, value in values.items()}


def precise(content: ModelContent) -> ModelContent:
    """The same coefficients, known a hundred million times as well: as good as fixed."""
    equation = content.equations[0]
    band = equation.uncertainty
    assert isinstance(band, CovarianceBand)
    small = tuple(tuple(entry * 1e-8 for entry in row) for row in band.covariance)
    centres = tuple(msgspec.structs.replace(at, variance=at.variance * 1e-8) for at in band.at_centre)
    equation = msgspec.structs.replace(equation, uncertainty=CovarianceBand(small, centres))
    example = content.worked_examples[0]
    assert isinstance(example.lower, float)
    middle, lower = (np.log(p / (1 - p)) for p in (example.probability, example.lower))
    ends = [float(1 / (1 + np.exp(-(middle + sign * 1e-4 * (middle - lower))))) for sign in (-1, 1)]
    example = msgspec.structs.replace(example, lower=ends[0], upper=ends[1])
    return msgspec.structs.replace(content, equations=(equation,), worked_examples=(example,))


def test_with_coefficients_as_good_as_fixed_the_band_is_that_of_r(tmp_path: Path) -> None:
    parent = proved(precise(pima_model().content))
    write_study(updated_pima(parent, "intercept_slope"), tmp_path / "fixed.json")
    write_study(updated_pima(pima_model(), "intercept_slope"), tmp_path / "whole.json")
    fixed, whole = load_model(tmp_path / "fixed.json"), load_model(tmp_path / "whole.json")
    for case in figures_of("pima_updates")["band"]["cases"]:
        person = person_with(case["lp"])
        ours = at_the_bedside(fixed, person)
        assert ours == pytest.approx([case["risk"], case["lower"], case["upper"]], abs=1e-7)
        # the parent's own imprecision makes it wider
        risk, lower, upper = at_the_bedside(whole, person)
        assert risk == pytest.approx(case["risk"], abs=1e-9)
        assert lower < ours[1] < ours[2] < upper


def test_the_band_of_a_hazard_model_at_the_bedside(tmp_path: Path) -> None:
    people, outcome = gbsg_people()
    parent = rotterdam_model()
    wish = UpdateWish(UpdateMethod.INTERCEPT_SLOPE, spans=(FIVE_YEARS,))
    update = update_model(parent, people, outcome, wish)
    write_study(package_update(parent, update, HERE), tmp_path / "new.json")
    new, line = load_model(tmp_path / "new.json"), update.equations[0].lines[0]
    values = {"age10": "5.5", "size20_50": "1", "size50": "0", "grade3": "1", "nodes_cap": "3", "log_pgr": "4"}
    old_result = assess(parent, entry_from_texts(values), span=FIVE_YEARS).estimate
    assert old_result is not None
    assert old_result.band is not None
    band = old_result.band
    eta, *ends = np.log(-np.log1p(-np.array([old_result.probability, band.lower, band.upper])))
    z = 1.959963984540054
    v00, v01, v11 = line.covariance
    variance = line.slope**2 * ((ends[1] - ends[0]) / 2 / z) ** 2 + v00 + 2 * eta * v01 + eta**2 * v11
    middle = line.intercept + line.slope * eta
    expected = [-np.expm1(-np.exp(middle + k * np.sqrt(variance))) for k in (0, -z, z)]
    assert at_the_bedside(new, values) == pytest.approx(expected, abs=1e-9)
    assert new.spans == (FIVE_YEARS,)


def test_a_refit_is_the_fit_itself() -> None:
    package = updated_pima(pima_model(), "refit")
    expected = figures_of("pima_updates")["cases"]["external"]["refit"]
    line = package.model.equations[0].lines[0]
    assert [line.lp0, *line.coefficients] == pytest.approx(expected["coef"], rel=1e-7)
    person = {"npreg": "2", "glu": "120", "bmi": "30", "ped": "0.5", "age": "30"}
    x = np.array([1.0, 2.0, 120.0, 30.0, 0.5, 30.0])
    half = 1.959963984540054 * np.sqrt(x @ np.array(expected["vcov"]) @ x)
    ends = [1 / (1 + np.exp(-(x @ np.array(expected["coef"]) + k * half))) for k in (0, -1, 1)]
    assert at_the_bedside(package.model, person) == pytest.approx(ends, abs=1e-7)
    derivation = package.model.content.source.derivation
    assert (derivation.people, derivation.events, derivation.from_, derivation.to) == (332, 109, "1984", "1989")


def test_a_parent_without_covariance_has_no_band_and_says_so() -> None:
    package = updated_pima(pima_model(0.3, 2.2), "closed_test")
    band = package.model.content.equations[0].uncertainty
    assert isinstance(band, NoBand)
    assert "Only how precisely the update was estimated is known" in band.because
    assert band.because.endswith("It was moved by hand.")
    assert "basis" not in str(package.remarks)


def test_a_model_that_is_kept_makes_no_version() -> None:
    with pytest.raises(DescriptionRefused, match="no reason to change the model"):
        updated_pima(pima_model(), "closed_test")


@pytest.mark.parametrize(
    ("version", "says"),
    [
        (
            "1.0.0",
            "1.0.0 is the version of the model that is updated. A new version has a higher number, such as 1.1.0",
        ),
        ("0.9.9", "0.9.9 is lower than 1.0.0"),
        ("1.1", "version"),
    ],
)
def test_versions_go_up(version: str, says: str) -> None:
    people, outcome = pima_people()
    update = update_model(pima_model(), people, outcome, UpdateWish(UpdateMethod.INTERCEPT))
    with pytest.raises(DescriptionRefused) as caught:
        package_update(pima_model(), update, called(HERE, version=version))
    assert says in str(caught.value)
    assert len(caught.value.problems) == 1
    other = package_update(pima_model(), update, called(HERE, version="1.0.0", id="tarnwick-pima"))
    assert other.model.content.id == "tarnwick-pima"


def called(new: NewVersion, **changes: str) -> NewVersion:
    """The same with other words."""
    fields = {name: getattr(new, name) for name in ("version", "cohort", "id", "title", "population", "begins", "ends")}
    return NewVersion(**(fields | changes))


def invented_people(model: Model, n: int = 3000) -> tuple[dict[str, Array], Array]:
    """Columns of every field within its limits, and everybody's predicted risk by the model's first horizon."""
    generator = np.random.default_rng(11)
    columns = dict[str, Array]()
    for field in model.fields:
        if isinstance(field, NumberField):
            low, high = giving_limits(field)
            ends = (0.0 if low is None else low, 100.0 if high is None else high)
            middle, wide = sum(ends) / 2, ends[1] - ends[0]
            columns[field.id] = np.clip(generator.normal(middle, wide / 10, n), *ends)
        else:
            columns[field.id] = generator.integers(0, 2, n).astype(float)
    return columns, predict_rows(model, columns, model.spans[0], band=False).probability


def test_what_was_kept_and_what_was_not(tmp_path: Path) -> None:
    parent = shipped("tarnwick-cvd-10y")
    columns, risk = invented_people(parent)
    y = (np.random.default_rng(2).random(len(risk)) < np.minimum(1.6 * risk, 0.99)).astype(float)
    update = update_model(parent, columns, BinaryOutcome(y), UpdateWish(UpdateMethod.INTERCEPT))
    new = NewVersion(
        "1.1.0",
        "Tarnwick Northgate",
        population="Everybody of Tarnwick Northgate",
        documentation=(("software", "another"),),
    )
    package = package_update(parent, update, new)
    before, after = parent.content, package.model.content
    assert after.decision_points == before.decision_points
    assert after.exclusions == before.exclusions
    assert after.use.cautions == before.use.cautions
    assert after.use.population == "Everybody of Tarnwick Northgate"
    assert after.predictors == before.predictors
    assert all(example.computed is True for example in after.worked_examples)
    assert len(after.worked_examples) == len({str(example.values) for example in before.worked_examples})
    items = {item.item: item.text for item in after.documentation}
    assert items["software"] == "another"
    assert parent.fingerprint in items["updating"]
    assert "has not been validated in others" in items["external validation"]
    kept = {item.item for item in before.documentation} - {"updating", "external validation"}
    assert kept <= set(items)
    ancestry = after.ancestry
    assert isinstance(ancestry, Ancestry)
    assert (ancestry.fingerprint, ancestry.id, ancestry.version) == (parent.fingerprint, before.id, "1.0.0")
    assert (ancestry.cohort.words, ancestry.cohort.people, ancestry.method) == ("Tarnwick Northgate", 3000, "intercept")
    path = tmp_path / "new.json"
    write_study(package, path)
    said = write_sections(inspect_file(path))
    assert "Updated from" in said
    assert "How: the baseline anew, every coefficient as it was" in said


def test_women_and_men_recalibrations_and_unconfirmed_figures() -> None:
    parent = shipped("cvd-2021-regional")
    columns, risk = invented_people(parent, 8000)
    generator = np.random.default_rng(4)
    hazard = -np.log1p(-np.clip(risk, 1e-6, 0.95)) / 10
    times = generator.exponential(1 / hazard)
    gone = generator.exponential(80.0, len(times))
    seen = np.minimum(np.minimum(times, gone), 12.0)
    status = np.where(times <= seen, 1.0, np.where(gone <= seen, 2.0, 0.0))
    outcome = SurvivalOutcome(seen, status, None, "a")
    for method in (UpdateMethod.INTERCEPT, UpdateMethod.TWO_SCALE, UpdateMethod.REFIT):
        update = update_model(parent, columns, outcome, UpdateWish(method))
        package = package_update(parent, update, HERE)
        content = package.model.content
        assert (content.recalibrations, content.recalibration_required) == ((), False)
        assert any("Recalibrations were dropped" in remark for remark in package.remarks)
        assert any("The parent gave no number without one" in remark for remark in package.remarks)
        assert content.source.kind == "local"
        assert content.source.citation.startswith("Updated from ")
        bare = [isinstance(one.uncertainty, NoBand) for one in content.equations]
        assert bare == [method is not UpdateMethod.REFIT] * 2
        if method is UpdateMethod.REFIT:
            assert not any("/terms" in note.at for note in content.unconfirmed)


def test_a_rebuilt_band_stays_rebuilt() -> None:
    parent = shipped("general-cvd-2008-lipids")
    columns, risk = invented_people(parent)
    hazard = -1.4 * np.log1p(-np.clip(risk, 1e-6, 0.95)) / 10
    times = np.random.default_rng(4).exponential(1 / hazard)
    outcome = SurvivalOutcome(np.minimum(times, 11.0), (times <= 11.0).astype(float), None, "a")
    for together in (False, True):
        update = update_model(parent, columns, outcome, UpdateWish(UpdateMethod.CLOSED_TEST, together=together))
        content = package_update(parent, update, called(HERE, version="1.2.0")).model.content
        assert all(isinstance(one.uncertainty, ReconstructedBand) for one in content.equations)
        said = " ".join(content.ancestry.figures) if isinstance(content.ancestry, Ancestry) else ""
        assert ("together" in said) is together
        assert "Closed testing at a level of 0.05" in said
        known = [note.at for note in parent.content.unconfirmed]
        # nothing that nobody confirmed is lost: its own place, or the part of the equation that it is in
        assert all(any(old.startswith(note.at) for old in known) for note in content.unconfirmed)
        assert all(any(old.startswith(note.at) for note in content.unconfirmed) for old in known)
        assert any(note.why.startswith("A figure of version 1.1.0") for note in content.unconfirmed)


def test_a_second_update_names_the_first() -> None:
    first = updated_pima(pima_model(), "intercept_slope").model
    people, outcome = pima_people()
    update = update_model(first, people, outcome, UpdateWish(UpdateMethod.INTERCEPT))
    # its own people: there is nothing left to be moved
    assert update.equations[0].lines[0].intercept == pytest.approx(0.0, abs=1e-9)
    second = package_update(first, update, called(HERE, version="1.2.0"))
    ancestry = second.model.content.ancestry
    assert isinstance(ancestry, Ancestry)
    assert ancestry.fingerprint == first.fingerprint
    assert any("itself updated from version 1.0.0" in remark for remark in second.remarks)
    texts = [item.text for item in second.model.content.documentation if item.item == "updating"]
    assert "Of version 1.1.0: Version 1.0.0" in " ".join(texts)


def test_into_a_library_where_it_is_compared_and_approved(room: Room) -> None:
    parent = shipped("tarnwick-cvd-10y")
    old = room.approve(room.install())
    columns, risk = invented_people(parent)
    y = (np.random.default_rng(2).random(len(risk)) < np.minimum(1.6 * risk, 0.99)).astype(float)
    update = update_model(parent, columns, BinaryOutcome(y), UpdateWish(UpdateMethod.INTERCEPT_SLOPE))
    package = package_update(parent, update, HERE, key=key_of("Tarnwick Press"))
    path = room.folder / "new.json"
    write_study(package, path)
    installed = room.install(path)
    assert installed.standing is Standing.WAITING
    card = room.card(installed.fingerprint)
    check = next(check for check in card.checks if check.name == "Updated from")
    assert check.says.startswith(f"{parent.content.title} 1.0.0, fingerprint {parent.fingerprint[:4]}")
    assert card.candidate is not None
    assert [signature.worth for signature in card.candidate.signatures] == [Worth.UNKNOWN]
    changes = find_difference(parent.content, card.candidate.model.content).changes
    aspects = {change.aspect for change in changes}
    assert {Aspect.ANCESTRY, Aspect.COEFFICIENTS, Aspect.BASELINES, Aspect.COVARIANCE, Aspect.EXAMPLES} <= aspects
    assert {change.new for change in changes if change.what == "updated from: fingerprint"} == {parent.fingerprint}
    assert aspects.isdisjoint({Aspect.QUESTIONS, Aspect.CAUTIONS, Aspect.DECISION_POINTS, Aspect.EXCLUSIONS})
    assert room.approve(installed).standing is Standing.IN_USE
    assert room.card(old.fingerprint).state is not None


def test_work_can_be_stopped() -> None:
    course = Course()
    course.stop()
    people, outcome = pima_people()
    with pytest.raises(Stopped):
        update_model(pima_model(), people, outcome, UpdateWish(UpdateMethod.INTERCEPT), course)
    update = update_model(pima_model(), people, outcome, UpdateWish(UpdateMethod.INTERCEPT))
    with pytest.raises(Stopped):
        package_update(pima_model(), update, HERE, course)
