"""Every fault is found by its name, and the faultless are left alone: invented cohorts, many seeds."""

from collections.abc import Iterator
from dataclasses import replace

import numpy as np
import pytest

from clinicalc.cohort.checked import CheckedCohort, SurvivalOutcome
from clinicalc.validation.fault_words import write_verdict
from clinicalc.validation.faults import find_faults
from clinicalc.validation.foretelling import outcome_at, predict_people
from clinicalc.validation.people import find_people, part_of
from clinicalc.validation.plan import NamedGroup, ValidationPlan
from clinicalc.validation.search import Search
from clinicalc.validation.validated import FaultKind
from clinicalc.validation.validating import validate_model
from tests.validation.invented_cohort import Invented, Kind, Wrong, invent, invented_model

SEEDS = range(20)
ENOUGH = 18
KINDS: tuple[Kind, ...] = ("cox", "logistic")


def _search(kind: Kind, invented: Invented) -> Search:
    model = invented_model(kind)
    people = find_people(model, invented.cohort, invented.plan)
    (span,) = model.spans
    predicted, outcome = predict_people(model, people, span), outcome_at(model, people, span)
    return find_faults(model, people, predicted, outcome, span, groups=invented.plan.groups)


def _searches(kind: Kind, wrong: Wrong) -> Iterator[tuple[Invented, Search]]:
    for seed in SEEDS:
        invented = invent(kind, seed, wrong)
        yield invented, _search(kind, invented)


@pytest.mark.parametrize("kind", KINDS)
def test_at_most_one_of_twenty_faultless_cohorts_is_accused(kind: Kind) -> None:
    accused = [search for _, search in _searches(kind, "") if search.findings]
    assert len(accused) <= 1
    assert not any(search.why for _, search in _searches(kind, ""))


@pytest.mark.parametrize("kind", KINDS)
def test_a_shifted_baseline_is_named(kind: Kind) -> None:
    named = 0
    for invented, search in _searches(kind, "baseline"):
        wanted = FaultKind.TOO_LOW if invented.up else FaultKind.TOO_HIGH
        named += [one.kind for one in search.findings] == [wanted]
    assert named >= ENOUGH


@pytest.mark.parametrize("kind", KINDS)
def test_a_wrong_slope_is_named_before_the_shift_that_comes_with_it(kind: Kind) -> None:
    named = 0
    for seed, (_, search) in enumerate(_searches(kind, "slope")):
        wanted = FaultKind.TOO_EXTREME if seed % 4 < 2 else FaultKind.TOO_MODERATE
        others = {FaultKind.TOO_LOW, FaultKind.TOO_HIGH}
        named += bool(search.findings) and search.findings[0].kind is wanted and not _kinds(search) - {wanted} - others
    assert named >= ENOUGH


@pytest.mark.parametrize("kind", KINDS)
def test_a_wrong_unit_is_named_as_a_unit_and_not_as_a_slope(kind: Kind) -> None:
    named = 0
    for invented, search in _searches(kind, "unit"):
        first = search.findings[0] if search.findings else None
        slopes = {FaultKind.TOO_EXTREME, FaultKind.TOO_MODERATE}
        named += (
            first is not None
            and (first.kind, first.at) == (FaultKind.UNIT, invented.at)
            and not _kinds(search) & slopes
        )
    assert named >= ENOUGH


@pytest.mark.parametrize("kind", KINDS)
def test_a_group_gone_wrong_is_named_and_not_as_a_baseline(kind: Kind) -> None:
    named = 0
    for invented, search in _searches(kind, "group"):
        wanted = FaultKind.GROUP_TOO_LOW if invented.up else FaultKind.GROUP_TOO_HIGH
        levels = {"practice": "C", "sex": "Male"}
        found = [(one.kind, one.at, one.level) for one in search.findings]
        named += found == [(wanted, invented.at, levels.get(invented.at, "Yes"))]
    assert named >= ENOUGH


def test_faultless_cohorts_of_any_size_are_seldom_accused() -> None:
    accused = sum(
        bool(_search(kind, invent(kind, 100 + seed, "", 400)).findings) for kind in KINDS for seed in range(60)
    )
    assert accused <= 5  # 1.2 expected at 1 %: more than 5 come up once in 500 times


def test_older_and_heavier_people_are_no_wrong_unit() -> None:
    invented = invent("cox", 3)
    old = invented.cohort.columns["age"] > 60
    columns = {id: column[old] for id, column in invented.cohort.columns.items()}
    cohort = CheckedCohort(
        int(old.sum()), columns, part_of(invented.cohort.outcome, old), None, np.flatnonzero(old), ()
    )
    assert not _search("cox", Invented(cohort, ValidationPlan())).findings


def test_a_unit_is_said_with_its_names_and_middles() -> None:
    invented = invent("logistic", 0, "unit")
    found = validate_model(invented_model("logistic"), invented.cohort, invented.plan)
    assert found.faults[0].kind is FaultKind.UNIT
    assert found.verdict[0].startswith(
        "The column of Weight seems to be in lb and was taken for kg: half of its values"
    )
    assert "the middle of the range the model was made from" in found.verdict[0]


def test_a_unit_that_the_limits_refuse_is_still_named() -> None:
    invented = invent("logistic", 0, "unit")
    tight = invented_model("logistic", stops=True)
    found = validate_model(tight, invented.cohort, invented.plan)
    assert found.count.refused > 0.5 * found.count.in_file
    assert (found.faults[0].kind, found.faults[0].at) == (FaultKind.UNIT, "weight")


def test_the_verdict_of_a_faultless_cohort_says_how_closely_could_be_seen_and_not_that_all_is_right() -> None:
    invented = invent("cox", 3)
    verdict = " ".join(validate_model(invented_model("cox"), invented.cohort, invented.plan).verdict)
    assert verdict.startswith("Nothing that was looked for was found to be wrong in 7,000 people")
    assert "Nine times of ten these people would have shown predictions 1." in verdict
    assert "this does not say that the model is right" in verdict


def test_what_is_promised_to_be_seen_nine_times_of_ten_is_seen_so_often() -> None:
    promised = _search("logistic", invent("logistic", 0)).shift
    seen = 0
    for seed in range(60):
        invented = invent("logistic", 200 + seed, shift=promised)
        seen += FaultKind.TOO_LOW in _kinds(_search("logistic", invented))
    assert 47 <= seen <= 60  # 54 expected; fewer than 47 come up once in 500 times


def test_few_people_are_said_to_be_few() -> None:
    invented = invent("cox", 3, "", 300)
    verdict = validate_model(invented_model("cox"), invented.cohort, invented.plan).verdict
    assert "there are too few to tell: predictions up to 2." in verdict[0]


def test_people_first_watched_late_are_no_fault() -> None:
    invented = invent("cox", 6)
    outcome = invented.cohort.outcome
    assert isinstance(outcome, SurvivalOutcome)
    entry = np.random.default_rng(6).uniform(0, 1500, invented.cohort.rows)
    came = outcome.times > entry
    columns = {id: column[came] for id, column in invented.cohort.columns.items()}
    late = SurvivalOutcome(outcome.times[came], outcome.status[came], entry[came], "d")
    cohort = CheckedCohort(int(came.sum()), columns, late, None, np.flatnonzero(came), ())
    assert not _search("cox", Invented(cohort, ValidationPlan())).findings


def test_everybody_alike_leaves_only_the_shift_to_be_seen() -> None:
    invented = invent("logistic", 1, "baseline")
    columns = {id: np.full_like(column, np.median(column)) for id, column in invented.cohort.columns.items()}
    cohort = replace(invented.cohort, columns=columns)
    assert _kinds(_search("logistic", Invented(cohort, ValidationPlan()))) <= {FaultKind.TOO_LOW, FaultKind.TOO_HIGH}


def test_a_column_turned_round_is_said() -> None:
    invented = invent("cox", 1)
    columns = {**invented.cohort.columns, "age": 114 - invented.cohort.columns["age"]}
    verdict = validate_model(invented_model("cox"), replace(invented.cohort, columns=columns), invented.plan).verdict
    assert verdict[0].startswith("The predictions are too extreme")
    assert "coded the other way round" in verdict[0]


def test_hardly_an_event_is_no_verdict() -> None:
    invented = invent("cox", 1, "", 12)
    verdict = validate_model(invented_model("cox"), invented.cohort, invented.plan).verdict
    assert verdict[0].startswith("It could not be seen whether anything is wrong. Fewer than 5 people had the event.")


def _kinds(search: Search) -> set[FaultKind]:
    return {one.kind for one in search.findings}


def test_one_group_alone_is_said_after_what_holds_over_all() -> None:
    invented = invent("cox", 0, "group")
    found = validate_model(invented_model("cox"), invented.cohort, invented.plan)
    assert found.verdict[0].startswith("Over all ")
    assert found.verdict[1].endswith("in the others as predicted.")


@pytest.mark.parametrize("kind", KINDS)
def test_a_group_in_which_nobody_had_the_event_is_said_without_limits(kind: Kind) -> None:
    invented = invent(kind, 5)
    outcome = invented.cohort.outcome
    had = outcome.status == 1 if isinstance(outcome, SurvivalOutcome) else outcome.y == 1
    group = NamedGroup("ward", "Ward", (~had & (np.arange(len(had)) % 3 == 0)).astype(np.int64), ("A", "B"))
    found = validate_model(invented_model(kind), invented.cohort, replace(invented.plan, groups=(group,)))
    said = next(sentence for sentence in found.verdict if "Ward: " in sentence)
    assert "Ward: B" in said
    assert "0.00 times (nobody in it had the event: no limits follow)" in said


def test_of_a_question_with_two_answers_one_says_how_closely_could_be_seen() -> None:
    invented = invent("cox", 3)
    search = _search("cox", invented)
    pair = tuple(one for one in search.groups if one.label == "Sex")
    horizon = validate_model(invented_model("cox"), invented.cohort, invented.plan).horizons[0]
    verdict = " ".join(write_verdict(replace(search, groups=pair), (), horizon))
    assert len(pair) == 2
    assert "(Sex: " in verdict
    assert "or only from" not in verdict


def test_an_observed_risk_without_other_events_is_not_said_to_have_been_seen() -> None:
    invented = invent("cox", 0, "baseline")
    outcome = invented.cohort.outcome
    assert isinstance(outcome, SurvivalOutcome)
    found = validate_model(invented_model("cox"), invented.cohort, invented.plan)
    others = int(((outcome.status == 2) & (outcome.times <= 3652.5)).sum())
    assert found.horizons[0].competing == others > 0
    assert "would have had the event by 10 years if no other event came first" in found.verdict[0]
    plain = SurvivalOutcome(outcome.times, np.where(outcome.status == 2, 0.0, outcome.status), None, "d")
    alone = validate_model(invented_model("cox"), replace(invented.cohort, outcome=plain), invented.plan)
    assert alone.horizons[0].competing == 0
    assert " had the event by 10 years, " in alone.verdict[0]
    assert alone.horizons[0].observed == found.horizons[0].observed
