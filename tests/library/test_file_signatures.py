"""Signatures on a coefficient file: added without changing what the file is, and weighed by this machine's trust."""

import json
from datetime import UTC, datetime

import msgspec
import pytest

from clinicalc.coefficients.reader import ReadFile, read_bytes
from clinicalc.coefficients.schema import Signature
from clinicalc.coefficients.writer import write_bytes
from clinicalc.errors import CoefficientFileRefused, SignatureRefused
from clinicalc.library.file_signatures import Worth, sign_file, weigh_signatures
from clinicalc.library.jws import RECORD_TYPE, sign
from clinicalc.library.keys import SigningKey
from clinicalc.library.trust_store import Publisher, TrustStore
from clinicalc.resources import read_shipped
from tests.library.keys_at_hand import key_of

KEY, OTHER = key_of("Tarnwick Press"), key_of("somebody else")
NOW = datetime(2026, 12, 1, 10, 0, 0, tzinfo=UTC)
PLAIN = read_bytes(read_shipped("example_models/tarnwick-cvd-10y.json"), "tarnwick.json")
TRUSTING = TrustStore((Publisher(KEY.card, NOW),))


def signed(*items: SigningKey | Signature, read: ReadFile = PLAIN) -> ReadFile:
    """The file with a signature by each key, written and read again; a signature stands as it is."""
    for item in items:
        if isinstance(item, Signature):
            content = msgspec.structs.replace(read.content, signatures=(*read.content.signatures, item))
        else:
            content = sign_file(read, item)
        read = read_bytes(write_bytes(content), read.name)
    return read


def worths(read: ReadFile, trust: TrustStore) -> list[Worth]:
    """What each signature is worth."""
    return [signature.worth for signature in weigh_signatures(read, trust)]


def test_signing_does_not_change_what_the_file_is() -> None:
    read = signed(KEY, OTHER)
    assert (read.fingerprint, read.canonical, read.content.model) == (
        PLAIN.fingerprint,
        PLAIN.canonical,
        PLAIN.content.model,
    )
    assert len(read.content.signatures) == 2


def test_a_signature_is_worth_what_this_machine_knows() -> None:
    read = signed(KEY, OTHER)
    assert worths(PLAIN, TRUSTING) == []
    assert worths(read, TrustStore()) == [Worth.UNKNOWN, Worth.UNKNOWN]
    assert worths(read, TRUSTING) == [Worth.TRUSTED, Worth.UNKNOWN]
    assert worths(read, TrustStore((Publisher(KEY.card, NOW, NOW), Publisher(OTHER.card, NOW)))) == [
        Worth.REVOKED,
        Worth.TRUSTED,
    ]
    first, second = weigh_signatures(read, TRUSTING)
    assert (first.key, first.name, second.key, second.name) == (KEY.id, "Tarnwick Press", OTHER.id, "")


def test_a_signature_over_another_model_is_refused() -> None:
    other = read_bytes(read_shipped("example_models/cvd-2021-regional.json"), "other.json")
    (stolen,) = signed(KEY, read=other).content.signatures
    (found,) = weigh_signatures(signed(stolen), TRUSTING)
    assert (found.worth, found.name) == (Worth.REFUSED, "Tarnwick Press")
    assert "was changed, or another key" in found.why


def test_a_signature_of_another_form_is_refused() -> None:
    as_record = sign(KEY, PLAIN.canonical, RECORD_TYPE)
    (of_record, broken) = weigh_signatures(signed(as_record, Signature("e30", "AA")), TRUSTING)
    assert (of_record.worth, broken.worth) == (Worth.REFUSED, Worth.REFUSED)
    assert "type" in of_record.why
    assert 'lacks "alg"' in broken.why


def test_nobody_signs_twice_but_a_spoilt_signature_does_not_stand_in_the_way() -> None:
    with pytest.raises(SignatureRefused, match="has signed this file already"):
        sign_file(signed(KEY, OTHER), KEY)
    claimed = sign(KEY, b"another payload", "clinicalc-model+1")
    assert worths(signed(claimed, KEY), TRUSTING) == [Worth.REFUSED, Worth.TRUSTED]


def test_a_file_whose_examples_do_not_come_out_is_not_signed() -> None:
    tree = json.loads(read_shipped("example_models/tarnwick-cvd-10y.json"))
    tree["model"]["worked_examples"][0]["probability"] *= 1.01
    with pytest.raises(CoefficientFileRefused, match="worked_examples/0"):
        sign_file(read_bytes(json.dumps(tree).encode(), "wrong.json"), KEY)
