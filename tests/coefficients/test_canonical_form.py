"""The canonical form under the fingerprint, against the examples of RFC 8785 (from memory)."""

import json
import struct

import pytest

from clinicalc.coefficients.fingerprint import canonical_bytes_of, fingerprint_of


def canonical(value: object) -> str:
    """The canonical text of a value, taken out of the one that is fingerprinted."""
    text = canonical_bytes_of({"format": "f", "model": value, "signatures": ["left out"]}).decode()
    assert text.startswith('{"format":"f","model":')
    assert text.endswith("}")
    return text.removeprefix('{"format":"f","model":')[:-1]


def test_the_example_of_section_3_2_2() -> None:
    # RFC 8785, section 3.2.2, from memory
    text = r"""{
      "numbers": [333333333.33333329, 1E30, 4.50, 2e-3, 0.000000000000000000000000001],
      "string": "\u20ac$\u000F\u000aA'\u0042\u0022\u005c\\\"\/",
      "literals": [null, true, false]
    }"""
    expected = (
        '{"literals":[null,true,false],"numbers":[333333333.3333333,1e+30,4.5,0.002,1e-27],'
        r'"string":"€$\u000f\nA' + "'" + r'B\"\\\\\"/"}'
    )
    assert canonical(json.loads(text)) == expected


def test_the_sorting_example_of_section_3_2_3() -> None:
    # RFC 8785, section 3.2.3, from memory: members are sorted by UTF-16 code units
    members = {
        "\u20ac": "Euro Sign",
        "\r": "Carriage Return",
        "\ufb33": "Hebrew Letter Dalet With Dagesh",
        "1": "One",
        "\U0001f600": "Emoji: Grinning Face",
        "\x80": "Control",
        "\xf6": "Latin Small Letter O With Diaeresis",
    }
    assert list(json.loads(canonical(members)).values()) == [
        "Carriage Return",
        "One",
        "Control",
        "Latin Small Letter O With Diaeresis",
        "Euro Sign",
        "Emoji: Grinning Face",
        "Hebrew Letter Dalet With Dagesh",
    ]


@pytest.mark.parametrize(
    ("bits", "text"),
    [
        # RFC 8785, appendix B, from memory: IEEE 754 bits and their spelling
        ("0000000000000000", "0"),
        ("8000000000000000", "0"),
        ("0000000000000001", "5e-324"),
        ("8000000000000001", "-5e-324"),
        ("7fefffffffffffff", "1.7976931348623157e+308"),
        ("ffefffffffffffff", "-1.7976931348623157e+308"),
        ("4340000000000000", "9007199254740992"),
        ("c340000000000000", "-9007199254740992"),
        ("4430000000000000", "295147905179352830000"),
        ("44b52d02c7e14af5", "9.999999999999997e+22"),
        ("44b52d02c7e14af6", "1e+23"),
        ("44b52d02c7e14af7", "1.0000000000000001e+23"),
        ("444b1ae4d6e2ef4e", "999999999999999700000"),
        ("444b1ae4d6e2ef4f", "999999999999999900000"),
        ("444b1ae4d6e2ef50", "1e+21"),
        ("3eb0c6f7a0b5ed8c", "9.999999999999997e-7"),
        ("3eb0c6f7a0b5ed8d", "0.000001"),
        ("41b3de4355555553", "333333333.3333332"),
        ("41b3de4355555554", "333333333.33333325"),
        ("41b3de4355555555", "333333333.3333333"),
        ("41b3de4355555556", "333333333.3333334"),
        ("41b3de4355555557", "333333333.33333343"),
        ("becbf647612f3696", "-0.0000033333333333333333"),
        ("43143ff3c1cb0959", "1424953923781206.2"),
    ],
)
def test_the_numbers_of_appendix_b(bits: str, text: str) -> None:
    (number,) = struct.unpack(">d", bytes.fromhex(bits))
    assert canonical(number) == text


def test_whole_numbers_are_spelled_alike_with_and_without_a_point() -> None:
    assert canonical([1, 1.0, 30, 30.0]) == "[1,1,30,30]"


def test_the_fingerprint_is_sha_256() -> None:
    # FIPS 180-4, the example "abc", from memory
    assert fingerprint_of(b"abc") == "ba7816bf8f01cfea414140de5dae2223b00361a396177a9cb410ff61f20015ad"
