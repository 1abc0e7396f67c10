"""Whatever was written, and in whatever order its files are found: one state, and the one that plain words give."""

from collections.abc import Iterable
from dataclasses import dataclass

from hypothesis import HealthCheck, given, settings
from hypothesis import strategies as st

from clinicalc.library.authority import replay_authority
from clinicalc.library.model_chain import replay_model
from clinicalc.library.records import Approved, Withdrawn
from clinicalc.library.standing import Authority, ModelState, SealedRecord, Standing
from tests.library.records_kit import ADA, BEN, CLEO, MODEL, NOW, Practice, edited, practice

PEOPLE = (ADA, BEN)
THEFTS = ("install", "withdraw", "remark", "approve")
DEEDS = ("approve", "withdraw", "remark", "approve longer", "approve otherwise")


@dataclass(frozen=True)
class Step:
    """One deed by one person, who saw the last few records, without some of them."""

    deed: str
    person: str
    unseen: frozenset[int]


STEPS = st.lists(
    st.builds(
        Step,
        st.sampled_from(DEEDS),
        st.sampled_from(PEOPLE),
        st.frozensets(st.integers(0, 6), max_size=4),
    ),
    max_size=7,
)


def _write(steps: Iterable[Step]) -> Practice:
    """The records of these deeds; whoever saw nothing else follows the installation."""
    made = practice()
    root = made.install(CLEO)
    for count, step in enumerate(steps):
        seen = [sealed for place, sealed in enumerate(made.about_model[1:]) if place not in step.unseen]
        written = f"2026-11-30T10:00:{count:02d}Z"  # no two records are the same
        after = seen or [root]
        if step.deed == "withdraw":
            made.withdraw(step.person, after=after, written=written)
        elif step.deed == "remark":
            made.remark(step.person, after=after, written=written)
        else:
            until = "2028-06-30" if step.deed == "approve longer" else "2027-06-30"
            recalibration = "tarnwick" if step.deed == "approve otherwise" else None
            made.approve(step.person, until, recalibration=recalibration, after=after, written=written)
    return made


def _comes_after(records: Iterable[SealedRecord], earlier: SealedRecord) -> list[SealedRecord]:
    """All that follow `earlier`, near or far, found by walking the records over and over."""
    found = {earlier.digest}
    while True:
        more = {each.digest for each in records if set(each.record.follows.model) & found} | found
        if more == found:
            return [each for each in records if each.digest in found and each is not earlier]
        found = more


def _in_plain_words(records: list[SealedRecord]) -> tuple[Standing, set[str]]:
    """The standing, and the review dates of the approvals in force.

    Withdrawn while any withdrawal has no approval after it. Else the approvals that no other approval (nor withdrawal)
    comes after are in force, if they chose the same recalibration.
    """
    approvals = {each.digest: each for each in records if isinstance(each.record.statement, Approved)}
    for each in records:
        after = {sealed.digest for sealed in _comes_after(records, each)}
        if isinstance(each.record.statement, Withdrawn) and not after & approvals.keys():
            return Standing.WITHDRAWN, set()
    decisive = (Approved, Withdrawn)
    last = [
        each.record.statement
        for each in approvals.values()
        if not any(isinstance(later.record.statement, decisive) for later in _comes_after(records, each))
    ]
    said = [statement for statement in last if isinstance(statement, Approved)]
    if len({statement.recalibration for statement in said}) != 1:
        return Standing.WAITING, set()
    return Standing.IN_USE, {statement.review_until for statement in said}


@settings(deadline=None, max_examples=60, suppress_health_check=[HealthCheck.too_slow])
@given(STEPS)
def test_the_state_is_the_one_that_plain_words_give(steps: list[Step]) -> None:
    made = _write(steps)
    state = made.replay()
    standing, reviews = _in_plain_words(made.about_model)
    assert state.standing is standing
    assert (state.approval is None) == (standing is not Standing.IN_USE)
    if state.approval is not None:
        assert state.approval.review_until.isoformat() == min(reviews)


@settings(deadline=None, max_examples=40, suppress_health_check=[HealthCheck.too_slow])
@given(steps=STEPS, data=st.data())
def test_every_order_of_the_files_gives_the_same_state(steps: list[Step], data: st.DataObject) -> None:
    """With a fork in the approvers, a revocation, a forged record and a missing one thrown in by chance."""
    made = _write(steps)
    first = made.about_library[-1:]
    if data.draw(st.booleans(), "two lists side by side"):
        made.appoint(ADA, BEN, after=first)
        made.appoint(BEN, CLEO, after=first)
    if data.draw(st.booleans(), "a key revoked"):
        made.revoke(ADA, *data.draw(st.lists(st.sampled_from(made.about_model), max_size=2), "still valid"))
    if data.draw(st.booleans(), "a record edited"):
        sealed = data.draw(st.sampled_from(made.about_model), "which")
        made.about_model.append(edited(sealed, role="somebody else"))
    if data.draw(st.booleans(), "a record gone"):
        made.about_model.remove(data.draw(st.sampled_from(made.about_model), "gone"))
    state, authority = made.replay(), made.authority()
    for _ in range(3):
        model = data.draw(st.permutations(made.about_model))
        library = data.draw(st.permutations(made.about_library))
        assert _replayed(made, model, library) == (state, authority)


@settings(deadline=None, max_examples=40, suppress_health_check=[HealthCheck.too_slow])
@given(steps=STEPS, who=st.sampled_from(PEOPLE))
def test_a_revocation_never_brings_a_withdrawn_model_back(steps: list[Step], who: str) -> None:
    made = _write(steps)
    before = made.replay().standing
    made.revoke(who)
    after = made.replay().standing
    if before is Standing.WITHDRAWN:
        assert after is Standing.WITHDRAWN


@settings(deadline=None, max_examples=60, suppress_health_check=[HealthCheck.too_slow])
@given(steps=STEPS, deed=st.sampled_from(THEFTS), by=st.sampled_from((ADA, "Mallory")), data=st.data())
def test_whatever_a_thief_adds_no_other_number_comes_of_it(
    steps: list[Step], deed: str, by: str, data: st.DataObject
) -> None:
    """With a revoked key or with one that nobody knows, following whatever they like."""
    made = _write(steps)
    made.revoke(ADA, *(each for each in made.about_model if each.record.name == ADA))
    before = made.replay()
    knowing = [data.draw(st.sampled_from(made.about_library), "knows")]
    after = data.draw(st.lists(st.sampled_from(made.about_model), unique=True), "follows")
    if deed == "install":
        made.install(by, after=after, knowing=knowing)
    elif deed == "withdraw":
        made.withdraw(by, after=after, knowing=knowing)
    elif deed == "remark":
        made.remark(by, after=after, knowing=knowing)
    else:
        made.approve(by, "2030-01-01", after=after, knowing=knowing)
    state = made.replay()
    assert state.approval in (before.approval, None)
    assert state.standing in (before.standing, Standing.WITHDRAWN, Standing.REFUSED)


def _replayed(made: Practice, model: list[SealedRecord], library: list[SealedRecord]) -> tuple[ModelState, Authority]:
    authority = replay_authority(library, made.library, made.key.id)
    return replay_model(MODEL, model, authority, NOW), authority
