"""Names come back whole, or are refused in words."""

import unicodedata

import pytest

from clinicalc.errors import PrintRefused
from clinicalc.report.fonts import read_lettering
from clinicalc.report.typefaces import Weight
from tests.report.printing import printed, text_of, with_band

WHOLE = [
    "Żaneta Łącka-Őry, née Ñuñez Þórðardóttir",
    "Ελένη Παπαδοπούλου Ὀδυσσεύς",
    "Жанна Щукина-Ґалаґан Їжак",
    "Nguyễn Thị Hường",
    "Аԥсҳа Ҩынҭҟа, Ԓоӄэ",  # letters of Abkhaz and Chukchi that the first typeface lacks
    "Ɓala Ƙwarai, Nǃxau ǂOma, Ŋ́ma Ӄо̄ Ɓ̣́a",
    "Ϝάναξ Ϟ",
    "e\u0301lodie",  # comes back as é
    "x\u030c Ж\u0301у \u1ecd\u0301la m\u0323n",  # letters that have no accented letter of their own
    "<b>Fenn</b> &amp; <font size=40>Co</font> {0} %s \\n (x))",
    "office ffi fl",
    "A  B",
]


@pytest.mark.parametrize("name", WHOLE)
def test_a_name_comes_back_letter_for_letter(name: str) -> None:
    wanted = " ".join(unicodedata.normalize("NFC", name).split())
    assert wanted in text_of(printed(with_band(name)))
    assert wanted in text_of(printed(with_band(), practice=name))


@pytest.mark.parametrize(
    ("name", "code"),
    [("Fenn \u4e2d", "U+4E2D"), ("Fenn \U0001f600", "U+1F600"), ("שרה", "U+05E9"), ("Fenn \u0661", "U+0661")],
)
def test_a_character_the_typeface_lacks_is_refused_by_name(name: str, code: str) -> None:
    with pytest.raises(PrintRefused) as label:
        printed(with_band(name))
    assert code in str(label.value)
    assert "The patient label" in str(label.value)
    with pytest.raises(PrintRefused, match="The practice name"):
        printed(with_band(), practice=name)


def test_a_mark_that_leaves_no_mark_is_refused() -> None:
    with pytest.raises(PrintRefused, match="COMBINING GRAPHEME JOINER"):
        printed(with_band("Ottilie\u034f Fenn"))


def test_a_letter_is_refused_with_an_accent_of_another_typeface() -> None:
    # U+A75B is in the first typeface alone, U+0346 in the second alone
    with pytest.raises(PrintRefused, match=r"U\+0346"):
        printed(with_band("Fenn \ua75b\u0346"))
    assert "\ua75b \u0411\u0346" in text_of(printed(with_band("\ua75b \u0411\u0346")))


@pytest.mark.parametrize("hidden", ["\u202e", "\u2066", "\u200b", "\x07", "\n", "\x00", "\u2028", "\ud800", "\ufeff"])
def test_control_and_bidirectional_characters_are_refused(hidden: str) -> None:
    with pytest.raises(PrintRefused, match="hidden control character"):
        printed(with_band(f"Ottilie{hidden}Fenn"))


def test_a_typed_text_that_cannot_be_printed_is_refused_too() -> None:
    with pytest.raises(PrintRefused, match=r"U\+0665"):
        printed(with_band(age="\u0665\u0660"))


def test_a_label_longer_than_a_name_is_refused() -> None:
    assert "M" * 40 in text_of(printed(with_band("M" * 120))).replace(" ", "")
    with pytest.raises(PrintRefused, match="121 characters"):
        printed(with_band("M" * 121))


def test_without_a_label_the_print_says_so() -> None:
    assert "no patient label" in text_of(printed(with_band("  ")))
    assert "no patient label" not in text_of(printed(with_band("Ottilie Fenn")))


def test_an_accent_is_painted_over_the_middle_of_its_letter_and_above_it() -> None:
    lettering = read_lettering()
    letter, accent, rest = lettering.pieces("X\u030ca", Weight.REGULAR)
    wide = lettering.width("X", 1000.0)
    middle = lettering.first[Weight.REGULAR].boxes[ord("X")].middle
    assert (letter.text, accent.text, rest.text) == ("X", "\u030c", "a")
    assert wide + letter.space == pytest.approx(middle)
    assert letter.space + accent.space == pytest.approx(0.0)  # the next letter stands where it would without accent
    assert accent.rise > 100.0  # a capital is higher than the small letter the accent was drawn for
    assert rest.space == rest.rise == 0.0


def test_lines_keep_to_their_width_and_lose_nothing() -> None:
    lettering = read_lettering()
    text = "Some words of ordinary length and one-that-is-much-longer-than-the-line-" + "x" * 60 + " end"
    lines = lettering.wrap(text, 90.0, 10.0)
    assert all(lettering.width(line, 10.0) <= 90.0 for line in lines)
    assert "".join(lines).replace(" ", "") == text.replace(" ", "")
