"""Each record stands after what it follows, in one order whatever the order of the files."""

import itertools

from clinicalc.library.ordering import Chain, missing_records, order_records
from clinicalc.library.standing import FaultKind, SealedRecord
from tests.library.records_kit import BEN, MODEL, Practice, digests, practice


def _chain(records: list[SealedRecord]) -> Chain:
    return order_records(records, lambda sealed: sealed.record.follows.model)


def _fork() -> tuple[Practice, SealedRecord, SealedRecord, SealedRecord, SealedRecord]:
    made = practice()
    root = made.install()
    left, right = made.remark(after=[root]), made.withdraw(after=[root])
    return made, root, left, right, made.approve(after=[left, right])


def test_every_order_of_the_files_gives_one_order_of_the_records() -> None:
    made, root, left, right, last = _fork()
    orders = {_chain(list(shuffled)).records for shuffled in itertools.permutations(made.about_model)}
    between = sorted([left, right], key=lambda each: each.digest)
    assert orders == {(root, *between, last)}


def test_following_is_near_and_far_and_never_oneself() -> None:
    made, root, left, right, last = _fork()
    chain = _chain(made.about_model)
    assert chain.follows(last.digest, root.digest)
    assert chain.follows(left.digest, root.digest)
    assert not chain.follows(left.digest, right.digest)
    assert not chain.follows(root.digest, last.digest)
    assert not chain.follows(root.digest, root.digest)


def test_heads_are_the_records_that_nobody_follows() -> None:
    made, root, left, right, last = _fork()
    chain = _chain(made.about_model)
    assert chain.newest(chain.records) == (last,)
    assert set(chain.newest([root, left, right])) == {left, right}
    assert chain.newest([]) == ()


def test_what_a_record_follows_is_found_with_all_before_it() -> None:
    made, root, left, _, _ = _fork()
    chain = _chain(made.about_model)
    assert chain.up_to([left.digest]) == (root, left)
    assert chain.up_to(["f" * 64]) == ()


def test_the_same_record_twice_counts_once() -> None:
    made, *_ = _fork()
    assert _chain(made.about_model * 2).records == _chain(made.about_model).records


def test_a_record_that_is_followed_and_is_not_there_is_named_once_by_its_whole_digest() -> None:
    _, root, left, right, last = _fork()
    chain = _chain([left, right, last])
    assert {follower for _, follower in chain.missing} == {left, right}
    everything = set(digests([left, right, last]))
    (fault,) = missing_records(chain, everything, everything, MODEL)
    assert fault.kind is FaultKind.MISSING_RECORD
    assert fault.record == root.digest
    assert root.digest in fault.sentence
    assert fault.stops


def test_what_only_a_void_record_misses_is_no_fault() -> None:
    _, _, left, right, last = _fork()
    chain = _chain([left, right, last])
    assert missing_records(chain, set(), set(digests([left, right, last])), MODEL) == ()


def test_a_ring_that_no_digest_allows_ends_the_work_and_is_named() -> None:
    made, root, left, right, last = _fork()
    ring = {left.digest: (last.digest,)}
    chain = order_records(made.about_model, lambda sealed: ring.get(sealed.digest, sealed.record.follows.model))
    assert set(chain.circular) == {left, last}
    assert set(chain.records) == {root, right}


def test_three_hundred_records_in_a_row_are_ordered() -> None:
    made = practice()
    first = made.install()
    line = [first]
    for _ in range(300):
        line.append(made.remark(BEN, after=[line[-1]]))
    chain = _chain(line[::-1])
    assert chain.records == tuple(line)
    assert chain.follows(line[-1].digest, first.digest)
