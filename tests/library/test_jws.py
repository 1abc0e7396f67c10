"""Signatures as JSON Web Signatures: the standard's own example, another library both ways, and everything refused."""

import json
from collections.abc import Callable

import pytest
from joserfc import errors as jose_errors
from joserfc import jws as jose
from joserfc.jwk import OKPKey

from clinicalc.coefficients.schema import Signature
from clinicalc.errors import SignatureRefused
from clinicalc.library import base64url
from clinicalc.library.jws import MODEL_TYPE, RECORD_TYPE, read_key_id, sign, signing_input, verify
from clinicalc.library.keys import SigningKey, key_id, signing_key
from tests.library.keys_at_hand import key_of

KEY = key_of("Dr Ada Tarn")
PAYLOAD = b'{"format":"x","model":1}'


def known(*keys: SigningKey) -> Callable[[str], bytes | None]:
    """A look-up among these keys."""
    return {key.id: key.raw for key in keys}.get


def signed_with(header: object, key: SigningKey = KEY, payload: bytes = PAYLOAD) -> Signature:
    """A genuine signature under any header: a text as it is, anything else as JSON without spaces."""
    text = header if isinstance(header, str) else json.dumps(header, separators=(",", ":"))
    protected = base64url.encode(text.encode())
    return Signature(protected, base64url.encode(key.sign(signing_input(protected, payload))))


def usual(**others: object) -> dict[str, object]:
    """The header as it must be, with these names instead or besides."""
    return {"alg": "Ed25519", "kid": KEY.id, "typ": MODEL_TYPE} | others


def test_what_is_signed_is_verified() -> None:
    assert verify(sign(KEY, PAYLOAD, MODEL_TYPE), PAYLOAD, MODEL_TYPE, known(KEY)) == KEY.id


def test_the_header_is_exactly_three_names_in_canonical_order() -> None:
    header = base64url.decode(sign(KEY, PAYLOAD, RECORD_TYPE).protected)
    assert header == f'{{"alg":"Ed25519","kid":"{KEY.id}","typ":"clinicalc-record+1"}}'.encode()


def test_rfc_8037_example() -> None:
    # RFC 8037, appendix A.4: its header names "EdDSA", the name before RFC 9864; the signature is over the same input
    key = signing_key(base64url.decode("nWGxne_9WmC6hEr0kuwsxERJxWl7MmkZcDusAxyuf2A") or b"", "")
    assert key.public == "11qYAYKxCrfVS_7TyWQHOg7hcvPapiMlrwIaaPcHURo"
    made = signing_input("eyJhbGciOiJFZERTQSJ9", b"Example of Ed25519 signing")
    assert made == b"eyJhbGciOiJFZERTQSJ9.RXhhbXBsZSBvZiBFZDI1NTE5IHNpZ25pbmc"
    assert (
        base64url.encode(key.sign(made))
        == "hgyY0il_MGCjP0JzlnLWG1PPOt7-09PGcvMg3AIbQR6dWbhijcNR4ki4iylGjg5BhVsPt9g7sVvpAr_MuM0KAg"
    )


def jose_key(public: str, private: bytes | None = None) -> OKPKey:
    """The key as joserfc takes it."""
    parts: dict[str, str | list[str]] = {"kty": "OKP", "crv": "Ed25519", "x": public}
    return OKPKey.import_key(parts if private is None else parts | {"d": base64url.encode(private)})


def jose_block(signature: Signature, payload: bytes) -> jose.GeneralJSONSerialization:
    """The signature with its payload in the general JSON shape (RFC 7515, section 7.2.1)."""
    return {
        "payload": base64url.encode(payload),
        "signatures": [{"protected": signature.protected, "signature": signature.signature}],
    }


@pytest.mark.parametrize("typ", [MODEL_TYPE, RECORD_TYPE])
def test_joserfc_verifies_ours(typ: str) -> None:
    block = jose_block(sign(KEY, PAYLOAD, typ), PAYLOAD)
    assert jose.deserialize_json(block, jose_key(KEY.public), algorithms=["Ed25519"]).payload == PAYLOAD


def test_joserfc_refuses_ours_over_another_payload() -> None:
    block = jose_block(sign(KEY, PAYLOAD, MODEL_TYPE), PAYLOAD + b" ")
    with pytest.raises(jose_errors.BadSignatureError):
        jose.deserialize_json(block, jose_key(KEY.public), algorithms=["Ed25519"])


def test_we_verify_joserfcs() -> None:
    private = bytes(range(32))
    key = signing_key(private, "")
    header: jose.HeaderDict = {"protected": {"alg": "Ed25519", "kid": key.id, "typ": MODEL_TYPE}}
    made = jose.serialize_json([header], PAYLOAD, jose_key(key.public, private), algorithms=["Ed25519"])
    (block,) = made["signatures"]
    signature = Signature(block["protected"], block["signature"])
    assert verify(signature, PAYLOAD, MODEL_TYPE, known(key)) == key.id
    assert signature == sign(key, PAYLOAD, MODEL_TYPE)  # Ed25519 is deterministic (RFC 8032, section 5.1.6)


@pytest.mark.parametrize("payload", [PAYLOAD + b" ", PAYLOAD[:-1], b""])
def test_another_payload_is_refused(payload: bytes) -> None:
    with pytest.raises(SignatureRefused, match="was changed, or another key"):
        verify(sign(KEY, PAYLOAD, MODEL_TYPE), payload, MODEL_TYPE, known(KEY))


@pytest.mark.parametrize(
    ("header", "reason"),
    [
        (usual(alg="EdDSA"), '"EdDSA"; only "Ed25519"'),
        (usual(alg="none"), '"none"; only "Ed25519"'),
        (usual(alg="HS256"), '"HS256"; only "Ed25519"'),
        (usual(alg="ed25519"), '"ed25519"; only "Ed25519"'),
        (usual(alg=["Ed25519"]), "only"),
        (usual(typ=RECORD_TYPE), "of the type"),
        (usual(typ="JWT"), "of the type"),
        (usual(kid=KEY.id.upper()), "64 digits"),
        (usual(kid=KEY.id[:-1]), "64 digits"),
        (usual(kid=7), "64 digits"),
        (usual(crit=["b64"], b64=False), '"crit"'),
        (usual(jwk={"kty": "OKP", "crv": "Ed25519", "x": KEY.public}), '"jwk"'),
        (usual(jku="https://example.org/keys"), '"jku"'),
        (usual(x5c=["MIIB"]), '"x5c"'),
        (usual(x5u="https://example.org/c"), '"x5u"'),
        (usual(cty="json"), '"cty"'),
        ({"alg": "Ed25519", "kid": KEY.id}, 'lacks "typ"'),
        ({"alg": "Ed25519", "typ": MODEL_TYPE}, 'lacks "kid"'),
        ({"kid": KEY.id, "typ": MODEL_TYPE}, 'lacks "alg"'),
        ({"typ": MODEL_TYPE, "kid": KEY.id, "alg": "Ed25519"}, "canonical"),
        (json.dumps(usual()), "canonical"),
        (json.dumps(usual(), separators=(",", ":")) + "\n", "canonical"),
        (f'{{"alg":"none","alg":"Ed25519","kid":"{KEY.id}","typ":"{MODEL_TYPE}"}}', "twice"),
        (f'{{"alg":"Ed25519","kid":"{KEY.id}","typ":"clinicalc-model\\u002b1"}}', "canonical"),
        ([1], "no JSON object"),
        ("{", "cannot be read"),
        ("", "cannot be read"),
        ("[" * 80, "cannot be read"),
        (usual(note="x" * 2000), "too long"),
    ],
)
def test_any_other_header_is_refused_though_the_signature_fits(header: object, reason: str) -> None:
    signature = signed_with(header)
    with pytest.raises(SignatureRefused) as refused:
        verify(signature, PAYLOAD, MODEL_TYPE, known(KEY))
    assert reason in str(refused.value)


def test_the_header_as_it_must_be_is_taken_from_anybody() -> None:
    assert read_key_id(signed_with(usual()), MODEL_TYPE) == KEY.id
    assert verify(signed_with(usual()), PAYLOAD, MODEL_TYPE, known(KEY)) == KEY.id


@pytest.mark.parametrize(
    "spoil",
    [
        lambda s: Signature(s.protected + "=", s.signature),
        lambda s: Signature(s.protected + "\n", s.signature),
        lambda s: Signature(s.protected, s.signature + "=="),
        lambda s: Signature(s.protected, s.signature[:-1]),
        lambda s: Signature(s.protected, s.signature + "AA"),
        lambda s: Signature(s.protected, s.signature[:-1] + chr(ord(s.signature[-1]) + 1)),
        lambda s: Signature(s.protected, "/" + s.signature[1:]),
        lambda s: Signature(s.protected, ""),
    ],
)
def test_any_other_spelling_is_refused(spoil: Callable[[Signature], Signature]) -> None:
    with pytest.raises(SignatureRefused, match="base64url"):
        verify(spoil(sign(KEY, PAYLOAD, MODEL_TYPE)), PAYLOAD, MODEL_TYPE, known(KEY))


def test_the_key_comes_only_from_the_look_up() -> None:
    other = key_of("somebody else")
    with pytest.raises(SignatureRefused, match="not known here"):
        verify(sign(KEY, PAYLOAD, MODEL_TYPE), PAYLOAD, MODEL_TYPE, known(other))
    with pytest.raises(SignatureRefused, match="another key was found"):
        verify(sign(KEY, PAYLOAD, MODEL_TYPE), PAYLOAD, MODEL_TYPE, lambda _: other.raw)
    with pytest.raises(SignatureRefused, match="another key signed it"):
        verify(signed_with(usual(), key=other), PAYLOAD, MODEL_TYPE, known(KEY))


def test_a_weak_key_is_refused_even_where_the_look_up_has_it() -> None:
    weak = (1).to_bytes(32, "little")
    protected = base64url.encode(json.dumps(usual(kid=key_id(weak)), separators=(",", ":")).encode())
    forged = Signature(protected, base64url.encode(weak + bytes(32)))
    with pytest.raises(SignatureRefused, match="weak"):
        verify(forged, PAYLOAD, MODEL_TYPE, lambda _: weak)
