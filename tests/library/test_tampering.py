"""What is said when somebody has been at the records: each way once, in memory, with real signatures."""

import hashlib

import msgspec
import pytest
import rfc8785
from cryptography.hazmat.primitives.asymmetric.ed25519 import Ed25519PublicKey

from clinicalc.errors import SignatureRefused
from clinicalc.library import base64url
from clinicalc.library.authority import replay_authority
from clinicalc.library.keys import SigningKey, encode_public
from clinicalc.library.records import Approved, Approver, Approvers, Commented, Follows, Founding, Policy
from clinicalc.library.sealing import unseal
from clinicalc.library.standing import FaultKind, ModelState, SealedRecord, Standing
from tests.library.keys_at_hand import key_of
from tests.library.records_kit import (
    ADA,
    BEN,
    MODEL,
    OTHER_MODEL,
    Practice,
    digests,
    edited,
    kinds,
    practice,
    pretending,
    record,
    sealed_by_hand,
)

APPROVED = Approved("read against its paper", "2030-01-01", None, (), (), by_author=False)


def _in_use() -> Practice:
    made = practice()
    made.install()
    made.approve()
    assert made.replay().standing is Standing.IN_USE
    return made


def _refused(state: ModelState, kind: FaultKind, *words: str) -> None:
    assert state.standing is Standing.REFUSED
    assert state.approval is None
    assert kinds(state.faults) == [kind]
    assert state.reason == state.faults[0].sentence
    for word in words:
        assert word in state.reason


def test_an_approval_under_another_models_name() -> None:
    made = _in_use()
    made.model = OTHER_MODEL
    made.install(after=[])
    mixed = [sealed for sealed in made.about_model if not isinstance(sealed.record.statement, Approved)]
    copied = made.about_model[1]
    made.about_model = [mixed[-1], copied]
    _refused(made.replay(model=OTHER_MODEL), FaultKind.MISNAMED_RECORD, "is about another file", MODEL[:12])


def test_an_approval_rewritten_for_another_model() -> None:
    made = _in_use()
    copied = edited(made.about_model[1], about=OTHER_MODEL)
    made.model = OTHER_MODEL
    made.about_model = []
    made.install()
    made.about_model.append(copied)
    _refused(made.replay(model=OTHER_MODEL), FaultKind.BAD_SIGNATURE, "is not as Dr Ada Tarn signed it")


@pytest.mark.parametrize(
    "changes",
    [
        {"written": "2026-11-30T10:00:00Z"},
        {"statement": APPROVED},
        {"name": "Dr Ada Tarn MD"},
        {"role": "consultant"},
    ],
)
def test_an_approval_of_which_one_thing_was_edited(changes: dict[str, object]) -> None:
    made = _in_use()
    made.about_model[1] = edited(made.about_model[1], **changes)
    _refused(made.replay(), FaultKind.BAD_SIGNATURE, "it was changed or made up")


def test_an_approval_made_to_follow_a_withdrawal_it_never_saw() -> None:
    made = _in_use()
    approved = made.about_model[1]
    withdrawn = made.withdraw()
    follows = Follows(approved.record.follows.library, (withdrawn.digest,))
    made.about_model.append(edited(approved, follows=follows))
    _refused(made.replay(), FaultKind.BAD_SIGNATURE)


def test_a_record_taken_out_of_the_middle() -> None:
    made = _in_use()
    withdrawn = made.withdraw()
    made.remark()
    made.about_model.remove(withdrawn)
    _refused(made.replay(), FaultKind.MISSING_RECORD, f"Record missing: {withdrawn.digest}")


def test_the_installation_taken_away() -> None:
    made = _in_use()
    gone = made.about_model.pop(0)
    _refused(made.replay(), FaultKind.MISSING_RECORD, gone.digest)


def test_a_record_about_the_library_that_a_models_record_knew_taken_away() -> None:
    made = _in_use()
    gone = made.appoint(BEN)
    made.remark(BEN)
    made.about_library.remove(gone)
    _refused(made.replay(), FaultKind.MISSING_RECORD, f"Record missing: {gone.digest}", "who may approve")


def test_what_was_newest_taken_away_is_seen_by_the_machines_memory_only() -> None:
    """Nothing follows it, so the chain cannot tell; the heads that a machine keeps can."""
    made = _in_use()
    withdrawn = made.withdraw()
    heads = made.replay().heads
    made.about_model.remove(withdrawn)
    state = made.replay()
    assert state.standing is Standing.IN_USE
    assert heads == (withdrawn.digest,)
    assert not set(heads) <= set(digests(state.records))


def test_an_approval_by_a_key_that_nobody_trusts() -> None:
    made = practice()
    made.install()
    made.approve("Mallory")
    _refused(made.replay(), FaultKind.UNKNOWN_SIGNER, "never an approver’s", "in the name of “Mallory”")


def test_an_approval_by_another_key_in_an_approvers_name() -> None:
    made = practice()
    made.install()
    follows = Follows(digests(made.about_library[-1:]), digests(made.about_model))
    made.about_model.append(record(pretending(key_of("Mallory"), ADA), APPROVED, made.library, MODEL, follows))
    _refused(made.replay(), FaultKind.BAD_SIGNATURE, "is not as Dr Ada Tarn signed it")


def test_a_signature_moved_from_one_record_to_another() -> None:
    made = _in_use()
    remark = made.remark(ADA)
    made.about_model[-1] = edited(remark, statement=APPROVED)
    _refused(made.replay(), FaultKind.BAD_SIGNATURE)


def test_an_approver_who_appoints_somebody_in_a_models_chain() -> None:
    made = _in_use()
    follows = Follows(digests(made.about_library[-1:]), digests(made.about_model[-1:]))
    listed = Approvers((Approver("Mallory", "nobody", key_of("Mallory").public),))
    made.about_model.append(record(key_of(ADA), listed, made.library, MODEL, follows))
    _refused(made.replay(), FaultKind.MISNAMED_RECORD, "can only be said of the library")


def test_the_practice_key_swapped_with_everything_signed_anew() -> None:
    made = _in_use()
    forged = practice(key="Mallory")
    forged.install()
    forged.approve()
    authority = replay_authority(forged.about_library, forged.library, made.key.id)
    state = forged.replay(authority=authority)
    assert state.standing is Standing.REFUSED
    assert "The practice key is not the one this machine was told to trust" in state.reason
    assert authority.approvers == ()


def test_the_practice_key_swapped_inside_the_founding() -> None:
    made = _in_use()
    founding = made.about_library[0]
    forged = edited(founding, statement=Founding("Tarnwick Practice", key_of("Mallory").public, Policy()))
    authority = replay_authority([forged, *made.about_library[1:]], made.library, made.key.id)
    assert kinds(authority.faults) == [FaultKind.MISSING_RECORD]
    renamed = replay_authority([forged, *made.about_library[1:]], forged.digest, made.key.id)
    assert kinds(renamed.faults) == [FaultKind.OTHER_PRACTICE_KEY]
    kept = edited(founding, statement=Founding("Tarnwick Practice", made.key.public, Policy(offline_hours=720)))
    assert kinds(replay_authority([kept], kept.digest, made.key.id).faults) == [FaultKind.BAD_SIGNATURE]


@pytest.mark.parametrize(
    "header",
    [
        {"alg": "EdDSA", "kid": "", "typ": "clinicalc-record+1"},
        {"alg": "none", "kid": "", "typ": "clinicalc-record+1"},
        {"alg": "Ed25519", "kid": "", "typ": "clinicalc-model+1"},
        {"alg": "Ed25519", "jwk": "", "kid": "", "typ": "clinicalc-record+1"},
    ],
)
def test_another_algorithm_type_or_name_in_the_signatures_header(header: dict[str, str]) -> None:
    """Refused where the file is opened, even if the key signed exactly this header; and here, if it got that far."""
    made = _in_use()
    genuine = made.about_model[1].record
    protected = base64url.encode(rfc8785.dumps({**header, "kid": genuine.by}))
    body = msgspec.to_builtins(genuine)
    payload = f"{protected}.{base64url.encode(rfc8785.dumps(body))}".encode()
    signature = {"protected": protected, "signature": base64url.encode(key_of(ADA).sign(payload))}
    content = rfc8785.dumps({"record": body, "signatures": [signature]})
    with pytest.raises(SignatureRefused):
        unseal(content, "changed header")
    made.about_model[1] = SealedRecord(hashlib.sha256(content).hexdigest(), content, genuine)
    _refused(made.replay(), FaultKind.BAD_SIGNATURE)


def test_bytes_that_do_not_belong_to_the_record() -> None:
    made = _in_use()
    approved, withdrawn = made.about_model[1], made.withdraw()
    made.about_model[2] = SealedRecord(withdrawn.digest, withdrawn.content, approved.record)
    _refused(made.replay(), FaultKind.BAD_SIGNATURE)


@pytest.mark.parametrize("y", [0, 1, 2**255 - 20])
def test_a_weak_key_put_by_hand_into_the_list_of_approvers(y: int) -> None:
    """Small-order points: y = 0, 1 and p − 1. A signature of nought and the neutral point fits any text under y = 1."""
    made = practice()
    made.install()
    weak = y.to_bytes(32, "little")
    listed = Approvers(
        (Approver("Mallory", "nobody", encode_public(weak)), Approver(ADA, "partner", key_of(ADA).public))
    )
    follows = Follows(digests(made.about_library[-1:]), ())
    made.about_library.append(sealed_by_hand(made.key, listed, made.library, "0" * 64, follows))
    id = hashlib.sha256(weak).hexdigest()
    universal = SigningKey(id, encode_public(weak), "Mallory", lambda _: _weak_signature())
    here = Follows(digests(made.about_library[-1:]), digests(made.about_model))
    made.about_model.append(sealed_by_hand(universal, APPROVED, made.library, MODEL, here))
    _refused(made.replay(), FaultKind.UNKNOWN_SIGNER)


def test_the_weak_key_would_have_passed_the_bare_verification() -> None:
    """So the refusal above is what holds; OpenSSL by itself takes the signature for any text."""
    Ed25519PublicKey.from_public_bytes((1).to_bytes(32, "little")).verify(_weak_signature(), b"any text")


def _weak_signature() -> bytes:
    """R = the neutral point, S = 0: right for every text under the key y = 1, by S·B = R + k·A."""
    return (1).to_bytes(32, "little") + bytes(32)


def test_two_histories_in_one_folder() -> None:
    made, other = _in_use(), practice(key="Another practice")
    other.install()
    other.approve(BEN)
    made.about_model += other.about_model
    state = made.replay()
    assert state.standing is Standing.REFUSED
    assert kinds(state.faults) == [FaultKind.OTHER_LIBRARY, FaultKind.OTHER_LIBRARY]
    assert "belongs to another library" in state.reason


def test_an_approval_from_another_library_of_the_same_people() -> None:
    made, second = _in_use(), practice(policy=Policy(offline_hours=1))
    second.install()
    made.about_model.append(second.approve())
    _refused(made.replay(), FaultKind.OTHER_LIBRARY)


def test_a_record_from_the_future() -> None:
    made = _in_use()
    made.remark(written="2027-12-01T10:00:00Z")
    _refused(made.replay(), FaultKind.FROM_THE_FUTURE, "1 December 2027", "at 10:00 on that day", "Set the clock right")


@pytest.mark.parametrize("follow", [(), ("library",), ("model",)])
def test_a_record_of_an_approver_that_hangs_in_the_air(follow: tuple[str, ...]) -> None:
    made = _in_use()
    follows = Follows(
        digests(made.about_library[-1:] if "library" in follow else ()),
        digests(made.about_model[-1:] if "model" in follow else ()),
    )
    made.about_model.append(record(key_of(BEN), Commented("seen"), made.library, MODEL, follows))
    _refused(made.replay(), FaultKind.NOT_DESCENDED)


def test_what_is_void_and_unexplained_is_gone_when_its_file_is_taken_away() -> None:
    made = _in_use()
    heads = made.replay().heads
    made.approve("Mallory")
    assert made.replay().standing is Standing.REFUSED
    assert made.replay().heads == heads, "nobody follows it, and no machine remembers it"
    made.about_model.pop()
    assert made.replay().standing is Standing.IN_USE
