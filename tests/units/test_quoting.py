"""Quoting a stranger's text."""

from hypothesis import given
from hypothesis import strategies as st

from clinicalc.units.quoting import quote


def test_plain_text_is_quoted_as_it_is() -> None:
    assert quote("5.2 mmol/l") == "“5.2 mmol/l”"
    assert quote("Größe µ") == "“Größe µ”"


def test_long_text_is_cut_at_forty_characters() -> None:
    assert quote("9" * 5000) == f"“{'9' * 40}…”"
    assert quote("9" * 40) == f"“{'9' * 40}”"


def test_invisible_characters_are_spelt_out() -> None:
    assert quote("5\u202e3") == "“5[U+202E]3”"
    assert quote("5\u00a0000") == "“5 000”"
    assert quote("\x00\ud800") == "“[U+0000][U+D800]”"


@given(st.text())
def test_a_quote_is_short_and_plainly_visible(text: str) -> None:
    quoted = quote(text)
    assert len(quoted) <= 43
    assert quoted.isprintable()
