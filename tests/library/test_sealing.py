"""Sealed records: one spelling, signed as they stand, and refused with a reason where anything differs."""

import hashlib
import json
from collections.abc import Callable
from dataclasses import replace
from typing import Any

import msgspec
import pytest
import rfc8785

from clinicalc.coefficients.schema import DecisionPoint
from clinicalc.errors import LibraryError, SignatureRefused
from clinicalc.library.jws import MODEL_TYPE, RECORD_TYPE, sign
from clinicalc.library.keys import encode_public
from clinicalc.library.records import (
    ABOUT_THE_LIBRARY,
    RECORD_FORMAT,
    Approved,
    Approver,
    Approvers,
    Commented,
    Compared,
    Follows,
    Founding,
    Installed,
    KeyRevoked,
    Policy,
    PolicyChanged,
    Record,
    Statement,
    Withdrawn,
)
from clinicalc.library.sealing import MOST_BYTES, is_proved, is_signed_by, seal, signature_of, unseal
from tests.library.keys_at_hand import key_of

KEY = key_of("Dr Ada Tarn")
OTHER = key_of("somebody else")
MODEL = "ab" * 32
LIBRARY = "cd" * 32
WEAK = encode_public((1).to_bytes(32, "little"))
"""The neutral point: every check of a signature under it can be made to hold."""

STATEMENTS: tuple[Statement, ...] = (
    Approvers((Approver("Dr Ada Tarn", "partner", KEY.public), Approver("Dr Bo Wick", "partner", OTHER.public))),
    PolicyChanged(Policy(author_may_approve=True, offline_hours=48), "a single-handed practice"),
    KeyRevoked(OTHER.id, "the stick was lost"),
    Installed("tarnwick", "1.0.0", "Tarnwick", "fitted here", (sign(OTHER, b"model", MODEL_TYPE),)),
    Approved(
        "checked against the paper",
        "2027-12-01",
        None,
        (DecisionPoint(probability=0.1, label="offer", source="the practice"),),
        (Compared("/model/equations/0", "Dr Bo Wick"),),
        False,
    ),
    Approved("as before", "2028-01-31", "low", (), (), True),
    Withdrawn("superseded"),
    Commented("Größer als 10 – «ja»; ein Zeichen: 𝛽"),
)


def record_of(statement: Statement, **others: Any) -> Record:
    """A record about a model, by KEY."""
    usual = Record(
        format=RECORD_FORMAT,
        library=LIBRARY,
        about=MODEL,
        follows=Follows(("ef" * 32,), ()),
        written="2026-12-01T10:00:00Z",
        by=KEY.id,
        name="Dr Ada Tarn",
        role="partner",
        statement=statement,
    )
    return msgspec.structs.replace(usual, **others)


FOUNDING = record_of(
    Founding("Tarnwick Practice", KEY.public, Policy()), library="", about=ABOUT_THE_LIBRARY, follows=Follows((), ())
)
SEALED = seal(record_of(STATEMENTS[6]), KEY)


def respelt(change: Callable[[dict[str, Any]], object]) -> bytes:
    """The canonical bytes of SEALED with something changed and not signed again."""
    tree = json.loads(SEALED.content)
    change(tree)
    return rfc8785.dumps(tree)


@pytest.mark.parametrize("record", [FOUNDING, *map(record_of, STATEMENTS)])
def test_every_kind_of_record_is_sealed_and_opened_again(record: Record) -> None:
    sealed = seal(record, KEY)
    assert unseal(sealed.content, "file") == sealed
    assert sealed.record == record
    assert sealed.digest == hashlib.sha256(sealed.content).hexdigest()
    assert is_signed_by(sealed, KEY.raw)
    assert not is_signed_by(sealed, OTHER.raw)


def test_the_file_is_canonical_and_the_same_each_time() -> None:
    assert SEALED.content == rfc8785.dumps(json.loads(SEALED.content))
    assert seal(record_of(STATEMENTS[6]), KEY) == SEALED
    assert signature_of(SEALED) == sign(KEY, rfc8785.dumps(json.loads(SEALED.content)["record"]), RECORD_TYPE)


@pytest.mark.parametrize(
    ("content", "reason"),
    [
        (SEALED.content + b"\n", "exactly the canonical ones"),
        (b" " + SEALED.content, "exactly the canonical ones"),
        (json.dumps(json.loads(SEALED.content)).encode(), "exactly the canonical ones"),
        (SEALED.content.replace(b'"superseded"', b'"super\\u0073eded"'), "exactly the canonical ones"),
        (SEALED.content[:-1], "breaks off"),
        (b"", "empty"),
        (b"\xff" + SEALED.content, "UTF-8"),
        (b"\xef\xbb\xbf" + SEALED.content, "byte order mark"),
        (SEALED.content.replace(b'"name":', b'"name":"Dr Bo Wick","name":'), "twice"),
        (b"[" * 5000, "64 deep"),
        (b'{"record":' + b"[" * 5000 + b"]" * 5000 + b"}", "64 deep"),
        (b" " * MOST_BYTES + SEALED.content, "256 KB"),
        (b"[]", "an object must stand here"),
        (b"null", "an object must stand here"),
    ],
)
def test_other_bytes_are_refused_with_the_reason(content: bytes, reason: str) -> None:
    with pytest.raises(LibraryError) as refused:
        unseal(content, "records/one.json")
    assert reason in str(refused.value)
    assert str(refused.value).startswith("records/one.json: ")


@pytest.mark.parametrize(
    ("change", "reason"),
    [
        (lambda tree: tree.pop("signatures"), '"signatures" is missing'),
        (lambda tree: tree["signatures"].clear(), "at least 1"),
        (lambda tree: tree["signatures"].append(tree["signatures"][0]), "at most 1"),
        (lambda tree: tree.update(extra=1), '"extra" is not known here'),
        (lambda tree: tree["record"].update(extra=1), '"extra" is not known here'),
        (lambda tree: tree["record"].pop("by"), '"by" is missing'),
        (lambda tree: tree["record"].update(format="clinicalc.record/2"), "clinicalc.record/1"),
        (lambda tree: tree["record"].update(about=MODEL.upper()), "/record/about"),
        (lambda tree: tree["record"].update(library="ab"), "/record/library"),
        (lambda tree: tree["record"].update(written="today"), "/record/written"),
        (lambda tree: tree["record"].update(name="Dr\u202eAda"), "U+202E"),
        (lambda tree: tree["record"].update(name=None), "/record/name"),
        (lambda tree: tree["record"]["statement"].update(kind="praised"), '"praised" is not one of'),
        (lambda tree: tree["record"]["statement"].update(reason="x" * 5000), "at most 4000"),
        (lambda tree: tree["record"].update(written="2026-02-30T10:00:00Z"), "no moment there is"),
        (lambda tree: tree["record"].update(written="2026-12-01T24:00:00Z"), "no moment there is"),
        (lambda tree: tree["record"]["follows"].update(model=[7]), "/record/follows/model/0"),
    ],
)
def test_another_shape_is_refused_with_its_place(change: Callable[[dict[str, Any]], object], reason: str) -> None:
    with pytest.raises(LibraryError) as refused:
        unseal(respelt(change), "file")
    assert reason in str(refused.value)


def test_a_signature_block_of_another_form_is_refused() -> None:
    of_a_model = sign(KEY, b"anything", MODEL_TYPE)
    with pytest.raises(SignatureRefused, match="of the type"):
        unseal(respelt(lambda tree: tree.update(signatures=[msgspec.to_builtins(of_a_model)])), "file")
    of_another = sign(OTHER, b"anything", RECORD_TYPE)
    with pytest.raises(SignatureRefused, match="its signature says"):
        unseal(respelt(lambda tree: tree.update(signatures=[msgspec.to_builtins(of_another)])), "file")


def test_a_changed_record_opens_but_nobody_signed_it() -> None:
    changed = unseal(respelt(lambda tree: tree["record"]["statement"].update(reason="no reason")), "file")
    assert not is_signed_by(changed, KEY.raw)


def test_a_record_put_together_otherwise_is_not_signed() -> None:
    assert not is_signed_by(replace(SEALED, record=record_of(Withdrawn("another reason"))), KEY.raw)
    assert not is_signed_by(replace(SEALED, digest="0" * 64), KEY.raw)


def test_what_was_found_signed_vouches_for_nothing_else() -> None:
    assert is_signed_by(SEALED, KEY.raw)
    assert is_proved(SEALED)
    other = respelt(lambda tree: tree["record"]["statement"].update(reason="no reason"))
    for changed in (
        replace(SEALED, content=other),
        replace(SEALED, digest="0" * 64),
        replace(SEALED, record=record_of(Withdrawn("another reason"))),
        unseal(other, "file"),
    ):
        assert not is_signed_by(changed, KEY.raw)
        assert not is_proved(changed)
    assert not is_signed_by(SEALED, OTHER.raw)


def test_a_weak_key_has_signed_nothing() -> None:
    assert not is_signed_by(SEALED, (1).to_bytes(32, "little"))


def test_a_key_seals_only_what_names_it() -> None:
    with pytest.raises(SignatureRefused, match="the key at hand"):
        seal(record_of(Withdrawn("superseded")), OTHER)


@pytest.mark.parametrize(
    ("record", "reason"),
    [
        (record_of(Withdrawn("")), "empty"),
        (record_of(Withdrawn("   ")), "blank"),
        (record_of(Withdrawn("a\u200bb")), "U+200B"),
        (record_of(Withdrawn("a\ud800b")), "JSON cannot carry"),
        (record_of(Withdrawn("superseded"), name="x" * 121), "at most 120"),
        (record_of(Withdrawn("superseded"), written="2026-12-01 10:00"), "/record/written"),
        (record_of(Approved("checked", "2027-02-29", None, (), (), False)), "no day there is"),
        (record_of(Approvers((Approver("Dr Bo Wick", "partner", WEAK),))), "cannot be trusted"),
        (record_of(Approvers((Approver("Dr Bo Wick", "partner", KEY.public[:-1] + "~"),))), "/approvers/0/key"),
        (record_of(Founding("Tarnwick Practice", WEAK, Policy()), library=""), "cannot be trusted"),
        (record_of(Approvers(tuple(Approver("x" * 120, "y" * 120, KEY.public) for _ in range(900)))), "256 KB"),
    ],
)
def test_nothing_is_sealed_that_could_not_be_opened(record: Record, reason: str) -> None:
    with pytest.raises(LibraryError) as refused:
        seal(record, KEY)
    assert reason in str(refused.value)


def test_a_record_with_one_bit_changed_is_refused_or_unsigned() -> None:
    # bit 0 leaves letters letters and digits digits, so that many of these are still records
    opened = 0
    for place in range(len(SEALED.content)):
        changed = bytearray(SEALED.content)
        changed[place] ^= 1
        try:
            found = unseal(bytes(changed), "file")
        except LibraryError:
            continue
        opened += 1
        assert not is_signed_by(found, KEY.raw), place
    assert opened > 100
