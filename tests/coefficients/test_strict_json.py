"""Bytes that are no JSON, or JSON that says two things at once, are refused in words with their place."""

import json
import time
import unicodedata

import pytest

from clinicalc.coefficients.pointers import REFUSED_CHARACTERS
from clinicalc.coefficients.strict_json import parse
from tests.coefficients.tiny_model import refusals_of_bytes, tiny_logit_model, tree_of

VALID = json.dumps(tree_of(tiny_logit_model()), indent=2).encode()


@pytest.mark.parametrize(
    ("data", "words"),
    [
        (b"", "is empty"),
        (b" \n\t ", "is empty"),
        (VALID[:400], "breaks off at line 15, column"),
        (VALID.rstrip()[:-1], "breaks off at line"),
        (b'{"format": "clin', "breaks off at line 1, column 16"),
        (VALID.replace(b"Tiny", b"T\xefny"), "is not UTF-8 text: byte"),
        (b"\xef\xbb\xbf" + VALID, "byte order mark"),
        (VALID.decode().encode("utf-16"), "UTF-16"),
        (b"[" * 10_000 + b"]" * 10_000, "nested more than 64 deep at line 1, column 65"),
        (b'{"a":' * 10_000 + b"1" + b"}" * 10_000, "nested more than 64 deep"),
        (b"[" * 10_000, "nested more than 64 deep"),
        (VALID + b"{}", "after the end of the file's one object"),
        (b"{'format': 1}", "a name in double quotes is missing here"),
        (b'{"format" 1}', "a colon is missing"),
        (b'{"format": 1 "model": 2}', "a comma or a closing bracket is missing"),
        (b'{"format": yes}', "a value is missing here, or it is not JSON"),
        (b'{"a": "x\ny"}', "line break or another control character"),
        (b'{"a": "\\q"}', "this backslash"),
    ],
)
def test_bytes_that_are_no_json_are_refused_with_line_and_column(data: bytes, words: str) -> None:
    found = refusals_of_bytes(data)
    assert list(found) == [""]
    assert words in found[""]


def test_brackets_inside_texts_do_not_count_as_nesting() -> None:
    assert parse(json.dumps({"a": "[" * 500 + '\\"' + "{" * 500}).encode()).problems == ()


def test_sixty_four_levels_are_read_and_sixty_five_refused() -> None:
    assert parse(b"[" * 64 + b"]" * 64).readable
    assert not parse(b"[" * 65 + b"]" * 65).readable


def test_a_duplicate_name_is_named_with_its_path() -> None:
    doubled = VALID.replace(b'"id": "smoker",', b'"id": "smoker", "id": "smoker2",', 1)
    found = refusals_of_bytes(doubled)
    assert '"id" stands twice in one object' in found["/model/predictors/1/id"]


@pytest.mark.parametrize("letters", ["NaN", "Infinity", "-Infinity"])
def test_numbers_that_json_does_not_know_are_refused_where_they_stand(letters: str) -> None:
    found = refusals_of_bytes(VALID.replace(b"0.06", letters.encode(), 1))
    assert f"{letters} is not a number JSON knows" in found["/model/equations/0/terms/0/coefficient"]
    assert len(found) == 1


@pytest.mark.parametrize(
    ("letters", "words"),
    [
        ("1e999", "1e999 is too large to be a number at all"),
        ("-1e999", "too large to be a number at all"),
        ("9007199254740992", "beyond 9007199254740991 (2^53 − 1)"),
        ("9" * 400, "too large to be a number at all"),
        ("9" * 5000, "has 5000 characters; at most 400"),
        ("0." + "1" * 1_000_000, "has 1000002 characters; at most 400"),
        ("1e16", "beyond 9007199254740991"),
    ],
)
def test_numbers_too_large_are_refused_where_they_stand(letters: str, words: str) -> None:
    found = refusals_of_bytes(VALID.replace(b"0.06", letters.encode(), 1))
    assert words in found["/model/equations/0/terms/0/coefficient"]


@pytest.mark.parametrize(
    "code",
    [0x00, 0x09, 0x0A, 0x1F, 0x7F, 0x85, 0x9F, 0x061C, 0x200E, 0x200F, 0x2028, 0x202A, 0x202E, 0x2066, 0x2069, 0xD800],
)
def test_characters_that_disguise_a_text_are_refused_with_their_code_point(code: int) -> None:
    spoilt = VALID.replace(b'"Smokes now"', b'"Smokes \\u%04x now"' % code, 1)
    found = refusals_of_bytes(spoilt)
    assert list(found) == ["/model/predictors/1/label"]
    message = found["/model/predictors/1/label"]
    assert f"U+{code:04X}" in message
    assert chr(code) not in message


@pytest.mark.parametrize(
    "code",
    [
        *(0x00AD, 0x034F, 0x115F, 0x1160, 0x17B4, 0x17B5, 0x180B, 0x180D, 0x180E, 0x180F, 0x200B, 0x200D),
        *(0x2060, 0x2065, 0x2800, 0x3164, 0xFE00, 0xFE0F, 0xFEFF, 0xFFA0, 0xFFFC, 0xE000, 0xF8FF, 0xFDD0),
        *(0xFDEF, 0xFFFE, 0xFFFF),
        *(0x1FFFE, 0xE0001, 0xE0041, 0xE007F, 0xE0100, 0xE01EF, 0xF0000, 0xFFFFD, 0x10FFFF),
    ],
)
def test_characters_that_are_not_seen_are_refused_with_their_code_point(code: int) -> None:
    tree = tree_of(tiny_logit_model())
    tree["model"]["predictors"][1]["label"] = f"Smokes{chr(code)} now"
    found = refusals_of_bytes(json.dumps(tree).encode())
    assert list(found) == ["/model/predictors/1/label"]
    assert f"holds U+{code:04X}: invisible" in found["/model/predictors/1/label"]
    assert chr(code) not in found["/model/predictors/1/label"]


def test_every_character_that_this_python_calls_format_control_or_private_is_refused() -> None:
    """And none that it calls a letter, a mark, a number, a sign or a space, but for those that are not seen."""
    unseen = {0x034F, 0x115F, 0x1160, 0x17B4, 0x17B5, 0x180B, 0x180C, 0x180D, 0x180F, 0x2800, 0x3164, 0xFFA0, 0xFFFC}
    unseen |= {*range(0xFE00, 0xFE10), *range(0xE0100, 0xE01F0)}  # variation selectors
    for code in range(0x110000):
        kind = unicodedata.category(chr(code))
        refused = REFUSED_CHARACTERS.fullmatch(chr(code)) is not None
        if kind in ("Cc", "Cf", "Cs", "Co", "Zl", "Zp") or code in unseen:
            assert refused, f"U+{code:04X}"
        elif kind != "Cn":
            assert not refused, f"U+{code:04X}"


@pytest.mark.parametrize("blank", [" ", "\u00a0", "\u202f", "\u3000 \u2003"])
def test_a_text_of_spaces_alone_is_refused(blank: str) -> None:
    for field in ("label", "group"):
        tree = tree_of(tiny_logit_model())
        tree["model"]["predictors"][1][field] = blank
        found = refusals_of_bytes(json.dumps(tree).encode())
        assert list(found) == [f"/model/predictors/1/{field}"]
        assert "this text is blank" in found[f"/model/predictors/1/{field}"]


def test_a_disguised_name_is_refused_and_shown_safely() -> None:
    found = refusals_of_bytes(VALID.replace(b'"title"', b'"ti\\u202etle"', 1))
    assert any("U+202E" in message for message in found.values())
    assert not any("\u202e" in path + message for path, message in found.items())


@pytest.mark.parametrize(
    "text", ["<b>Smokes</b>", "Ünïcode ≥ 3 µmol/L", "Ράγια Ф 中", "🙂", "a\u202f%", "a\u00a0b", "e\u0301te\u0301"]
)
def test_markup_and_other_scripts_are_letters_like_any(text: str) -> None:
    tree = tree_of(tiny_logit_model())
    tree["model"]["predictors"][1]["label"] = text
    assert refusals_of_bytes(json.dumps(tree).encode()) == {}
    assert refusals_of_bytes(json.dumps(tree, ensure_ascii=False).encode()) == {}


@pytest.mark.parametrize("start", [b'"', b'{"a":"', b"["])
def test_four_megabytes_of_quotes_and_backslashes_do_not_hang(start: bytes) -> None:
    begun = time.perf_counter()
    for filling in (b'\\"', b'"', b"\\\\", b'"\\'):
        parse((start + filling * 2_000_000)[:4_000_000])
    assert time.perf_counter() - begun < 20
