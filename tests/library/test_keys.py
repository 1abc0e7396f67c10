"""Public keys: one spelling, no weak ones, and the signatures of the standards."""

import secrets

import pytest
from cryptography.hazmat.primitives.asymmetric.ed25519 import Ed25519PublicKey

from clinicalc.errors import KeyRefused
from clinicalc.library import base64url
from clinicalc.library.keys import (
    check_public,
    decode_public,
    encode_public,
    group_key_id,
    is_signature,
    key_id,
    make_private,
    signing_key,
)
from tests.library.keys_at_hand import key_of

P = 2**255 - 19
L = 2**252 + 27742317777372353535851937790883648493
"""The order of the base point (RFC 8032, section 5.1)."""
D = -121665 * pow(121666, -1, P) % P

# The encodings that Chalkias, Garillot and Nikolaenko, "Taming the many EdDSAs" (2020), table 1, and the blocklists of
# several Ed25519 libraries hold: the points of order 1, 2, 4, 8 and their second spellings. Sign bit cleared.
SMALL_ORDER = (
    "0000000000000000000000000000000000000000000000000000000000000000",
    "0100000000000000000000000000000000000000000000000000000000000000",
    "26e8958fc2b227b045c3f489f2ef98f0d5dfac05d3c63339b13802886d53fc05",
    "c7176a703d4dd84fba3c0b760d10670f2a2053fa2c39ccc64ec7fd7792ac037a",
    "ecffffffffffffffffffffffffffffffffffffffffffffffffffffffffffff7f",
    "edffffffffffffffffffffffffffffffffffffffffffffffffffffffffffff7f",
    "eeffffffffffffffffffffffffffffffffffffffffffffffffffffffffffff7f",
)
IDENTITY = bytes.fromhex(SMALL_ORDER[1])

Point = tuple[int, int]


def add(one: Point, other: Point) -> Point:
    """The sum of two points of the curve -x^2 + y^2 = 1 + d x^2 y^2, by the affine law (RFC 8032, section 5.1.4)."""
    (x1, y1), (x2, y2) = one, other
    cross = D * x1 * x2 * y1 * y2
    x = (x1 * y2 + x2 * y1) * pow(1 + cross, -1, P)
    y = (y1 * y2 + x1 * x2) * pow(1 - cross, -1, P)
    return x % P, y % P


def times(count: int, point: Point) -> Point:
    """The point added to itself."""
    total: Point = (0, 1)
    while count:
        if count & 1:
            total = add(total, point)
        point, count = add(point, point), count >> 1
    return total


def find_x(y: int) -> int | None:
    """An x that belongs to y, None where there is none (RFC 8032, section 5.1.3)."""
    square = (y * y - 1) * pow(D * y * y + 1, -1, P) % P
    x = pow(square, (P + 3) // 8, P)
    if (x * x - square) % P:
        x = x * pow(2, (P - 1) // 4, P) % P
    return None if (x * x - square) % P else x


def small_order_ys() -> set[int]:
    """y of every point whose order divides 8, found by taking L times points of the whole curve."""
    found: set[Point] = set()
    y = 2
    while len(found) < 8:
        x = find_x(y)
        if x is not None:
            found.add(times(L, (x, y)))
        y += 1
    return {y for _, y in found}


@pytest.mark.parametrize("sign", [0, 0x80])
@pytest.mark.parametrize("spelt", SMALL_ORDER)
def test_every_small_order_key_is_refused_in_every_spelling(spelt: str, sign: int) -> None:
    raw = bytearray.fromhex(spelt)
    raw[31] |= sign
    with pytest.raises(KeyRefused):
        decode_public(base64url.encode(bytes(raw)))
    with pytest.raises(KeyRefused):
        is_signature(IDENTITY + bytes(32), b"any", bytes(raw))


def test_the_eight_points_are_all_there_are() -> None:
    ys = small_order_ys()
    assert ys == {int.from_bytes(bytes.fromhex(spelt), "little") for spelt in SMALL_ORDER[:5]}
    for y in ys:
        with pytest.raises(KeyRefused, match="weak"):
            check_public(y.to_bytes(32, "little"))


def test_the_signature_that_fits_every_text_fits_none_here() -> None:
    # with A = R = the neutral point and S = 0, [S]B = R + [h]A holds for every h; OpenSSL takes it
    forged = IDENTITY + bytes(32)
    for payload in (b"one", b"another", secrets.token_bytes(40)):
        Ed25519PublicKey.from_public_bytes(IDENTITY).verify(forged, payload)
        with pytest.raises(KeyRefused, match="fits every text"):
            is_signature(forged, payload, IDENTITY)


@pytest.mark.parametrize("above", range(19))
def test_a_second_spelling_of_a_number_is_refused(above: int) -> None:
    with pytest.raises(KeyRefused, match="one way"):
        check_public((P + above).to_bytes(32, "little"))


def test_a_number_without_a_point_is_refused() -> None:
    bare = next(y for y in range(2, 100) if find_x(y) is None)
    with pytest.raises(KeyRefused, match="no point"):
        check_public(bare.to_bytes(32, "little"))


def test_points_of_the_curve_are_taken() -> None:
    for number in range(50):
        key = key_of(str(number))
        check_public(key.raw)
        assert decode_public(key.public) == key.raw


@pytest.mark.parametrize("length", [0, 31, 33, 64])
def test_another_length_is_refused(length: int) -> None:
    with pytest.raises(KeyRefused):
        decode_public(base64url.encode(b"\x05" * length))
    with pytest.raises(KeyRefused, match=f"{length} bytes"):
        check_public(b"\x05" * length)


@pytest.mark.parametrize(
    "spoil",
    [
        lambda text: text + "=",
        lambda text: text[:-1],
        lambda text: text + "\n",
        lambda text: " " + text,
        lambda text: text[:-1] + chr(ord(text[-1]) + 1),  # left-over bits that are not nought
        lambda text: "+" + text[1:],
        lambda text: "é" + text[1:],
    ],
)
def test_a_misspelt_key_is_refused(spoil: object) -> None:
    assert callable(spoil)
    with pytest.raises(KeyRefused, match="43 letters"):
        decode_public(spoil(key_of("someone").public))


def test_a_key_is_spelt_and_read_back() -> None:
    key = key_of("someone")
    assert decode_public(encode_public(key.raw)) == key.raw
    assert key.card.id == key.id == key_id(key.raw)


def test_the_id_is_the_digest_of_the_raw_key() -> None:
    # FIPS 180-2, appendix B: SHA-256("abc")
    assert key_id(b"abc") == "ba7816bf8f01cfea414140de5dae2223b00361a396177a9cb410ff61f20015ad"
    assert group_key_id(key_id(b"abc")).startswith("ba78 16bf 8f01 cfea ")
    assert len(group_key_id(key_id(b"abc")).split()) == 16


def test_rfc_8032_test_2() -> None:
    # RFC 8032, section 7.1, TEST 2
    key = signing_key(bytes.fromhex("4ccd089b28ff96da9db6c346ec114e0f5b8a319f35aba624da8cf6ed4fb8a6fb"), "")
    assert key.raw.hex() == "3d4017c3e843895a92b70aa74d1b7ebc9c982ccf2ec4968cc0cd55f12af4660c"
    signature = bytes.fromhex(
        "92a009a9f0d4cab8720e820b5f642540a2b27b5416503f8fb3762223ebdb69da"
        "085ac1e43e15996e458f3613d0f11d8c387b2eaeb4302aeeb00d291612bb0c00"
    )
    assert key.sign(b"\x72") == signature
    assert is_signature(signature, b"\x72", key.raw)
    assert not is_signature(signature, b"\x73", key.raw)


def test_a_second_number_for_the_same_signature_is_refused() -> None:
    # S + L signs the same; RFC 8032, section 5.1.7, requires S < L
    key = key_of("someone")
    signature = key.sign(b"text")
    other = (int.from_bytes(signature[32:], "little") + L).to_bytes(32, "little")
    assert is_signature(signature, b"text", key.raw)
    assert not is_signature(signature[:32] + other, b"text", key.raw)


def test_new_keys_differ() -> None:
    assert len({make_private() for _ in range(20)}) == 20


def test_a_key_does_not_show_its_secret() -> None:
    assert "sign" not in repr(key_of("someone"))
