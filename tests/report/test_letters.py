"""Every letter of the scripts that the print promises, block by block, and the typeface that it is set in."""

import shutil
import subprocess
import sys
import unicodedata
from collections.abc import Iterator
from pathlib import Path

import msgspec
import pytest

from clinicalc.assessment.result import Assessment
from clinicalc.errors import PrintRefused
from clinicalc.report.fonts import read_lettering
from clinicalc.report.typefaces import X_HEIGHT, Weight, read_first, read_second
from tests.coefficients.tiny_model import tiny_logit_model
from tests.report.printing import printed, text_of, with_band

# first and last code point of each block: Unicode Character Database, Blocks.txt (from memory)
BLOCKS = {
    "Latin-1 Supplement": (0x0080, 0x00FF),
    "Latin Extended-A": (0x0100, 0x017F),
    "Latin Extended-B": (0x0180, 0x024F),
    "Latin Extended Additional": (0x1E00, 0x1EFF),
    "Greek and Coptic": (0x0370, 0x03FF),
    "Greek Extended": (0x1F00, 0x1FFF),
    "Cyrillic": (0x0400, 0x04FF),
    "Cyrillic Supplement": (0x0500, 0x052F),
}
LETTERS = {
    "Latin-1 Supplement": 65,
    "Latin Extended-A": 128,
    "Latin Extended-B": 208,
    "Latin Extended Additional": 252,
    "Greek and Coptic": 115,
    "Greek Extended": 218,
    "Cyrillic": 248,
    "Cyrillic Supplement": 38,
}
"""How many letters the walk must find (counted with Python 3.11, Unicode 14): it cannot pass by finding none."""

EXCEPTIONS = (
    # no picture in either typeface: letters of medieval Welsh, met in editions of manuscripts (from memory)
    "\u1efc\u1efd\u1efe\u1eff"
    # no picture in either typeface: shha and el with descender, en with left hook, dzzhe and dchhe, which came late
    # into Unicode (6.0 and 7.0; from memory); of these only el with descender, in Khanty, is likely in a name of today
    "\u0526\u0527\u0528\u0529\u052a\u052b\u052c\u052d\u052e\u052f"
)
COPTIC = "COPTIC "
"""Names of the letters in the Greek block that are no Greek."""

RARE = "Аԥсҳа Ҩынҭҟа"
"""An Abkhaz name made up from letters that the first typeface lacks."""


def letters_of(block: str) -> Iterator[str]:
    """The assigned letters of a block, without the exceptions."""
    first, last = BLOCKS[block]
    for character in map(chr, range(first, last + 1)):
        named = unicodedata.name(character, "")
        if unicodedata.category(character)[0] == "L" and not named.startswith(COPTIC) and character not in EXCEPTIONS:
            yield character


def made_for(population: str, label: str = "") -> Assessment:
    """An assessment with a text of its model file in regular and a label in semibold."""
    content = tiny_logit_model()
    use = msgspec.structs.replace(content.use, population=population)
    return with_band(label, msgspec.structs.replace(content, use=use))


@pytest.mark.parametrize("block", BLOCKS)
def test_every_letter_of_a_block_comes_back(block: str) -> None:
    letters = "".join(letters_of(block))
    assert len(letters) == LETTERS[block]
    for start in range(0, len(letters), 60):
        part = letters[start : start + 60]
        wanted = unicodedata.normalize("NFC", part)
        read = text_of(printed(made_for("|".join(part), part))).replace(" ", "")
        assert wanted in read  # the label, in semibold
        assert unicodedata.normalize("NFC", "|".join(part)) in read  # the population, in regular, a few words


@pytest.mark.parametrize("letter", EXCEPTIONS)
def test_an_exception_is_one_still_and_is_refused_in_words(letter: str) -> None:
    with pytest.raises(PrintRefused, match=f"U\\+{ord(letter):04X}"):
        printed(with_band(f"Fenn {letter}"))


@pytest.mark.parametrize("other", ["\u05d0", "\u0628", "\u0531", "\u10d0", "\u0e81", "\u07ca", "\U0001f600", "\u2603"])
def test_the_second_typeface_adds_no_other_script_and_no_picture(other: str) -> None:
    # Hebrew, Arabic, Armenian, Georgian, Lao, N'Ko, a face, a snowman: the font file has all of them
    assert read_lettering().lacks(other)


def test_small_letters_and_capitals_of_both_typefaces_are_equally_high() -> None:
    for weight in Weight:
        first, second = read_first()[weight].boxes, read_second()[weight].boxes
        assert second[ord("x")].top == pytest.approx(X_HEIGHT)
        assert first[ord("x")].top == pytest.approx(X_HEIGHT, abs=15.0)
        assert second[ord("H")].top == pytest.approx(first[ord("H")].top, abs=20.0)


def test_in_regular_a_word_changes_its_typeface_and_in_semibold_the_line() -> None:
    lettering = read_lettering()
    text = "Назаров Ҩынҭҟа of Tarnwick"
    regular = [(font.name, part) for font, part in lettering.runs(text, Weight.REGULAR)]
    assert regular == [
        ("SourceSans3-Regular", "Назаров "),
        ("DejaVuSans", "Ҩынҭҟа "),
        ("SourceSans3-Regular", "of "),
        ("SourceSans3-Regular", "Tarnwick"),
    ]
    assert [(font.name, part) for font, part in lettering.runs(text, Weight.SEMIBOLD)] == [("DejaVuSans-Bold", text)]


@pytest.mark.parametrize("weight", Weight)
def test_lines_keep_to_their_width_in_both_typefaces(weight: Weight) -> None:
    lettering = read_lettering()
    text = f"Some words, {RARE}, and WWWWWWWWWWWWWWWWWWWWWWWWWWWҨWWWWWWWWWWWWWWҨ end {RARE * 8}"
    lines = lettering.wrap(text, 90.0, 10.0, weight)
    for line in lines:
        pieces = lettering.pieces(line, weight)
        painted = sum(piece.font.width(piece.text) + piece.space * len(piece.text) for piece in pieces)
        assert painted / 100.0 == pytest.approx(lettering.width(line, 10.0, weight))
        assert painted / 100.0 <= 90.0 + 1e-9
    assert "".join(lines).replace(" ", "") == text.replace(" ", "")


def test_an_accent_of_the_second_typeface_stands_over_the_middle_of_its_letter() -> None:
    font = read_second()[Weight.REGULAR]
    letter, accent = read_lettering().pieces("Ԓ\u0304", Weight.REGULAR)
    start = font.advances[ord("Ԓ")] + letter.space
    drawn, under = font.boxes[0x0304], font.boxes[ord("Ԓ")]
    assert letter.font is accent.font is font
    assert start + drawn.middle == pytest.approx(under.middle, abs=5.0)
    assert drawn.bottom + accent.rise > under.top  # clear of the capital
    assert letter.space + accent.space == pytest.approx(0.0)


@pytest.mark.parametrize("mark", ["\u0358", "\u031b", "\u0361"])
def test_a_mark_at_the_end_of_its_letter_is_not_put_over_its_middle(mark: str) -> None:
    # a dot above right, a horn, a tie to the next letter; none of them has a letter of its own with x
    letter, accent = read_lettering().pieces(f"x{mark}", Weight.REGULAR)
    assert (letter.space, accent.space) == (0.0, 0.0)


def test_an_ordinary_print_never_reads_the_second_typeface() -> None:
    code = (
        "from clinicalc.report.typefaces import read_second\n"
        "from tests.report.printing import printed, with_band\n"
        f"for name in ('Ελένη Жанна Őry', {RARE!r}):\n"
        "    printed(with_band(name))\n"
        "    print(read_second.cache_info().currsize)\n"
    )
    root = Path(__file__).parents[2]
    done = subprocess.run([sys.executable, "-c", code], cwd=root, capture_output=True, text=True, check=True)
    assert done.stdout.split() == ["0", "1"]


def test_the_same_bytes_come_out_before_and_after_the_second_typeface_was_used() -> None:
    ordinary, rare = with_band("Ottilie Fenn"), made_for(RARE, RARE)
    before = printed(ordinary), printed(rare)
    assert (printed(ordinary), printed(rare)) == before
    assert b"DejaVu" not in before[0]
    assert b"DejaVu" in before[1]


@pytest.mark.skipif(
    shutil.which("qpdf") is None or shutil.which("pdffonts") is None or shutil.which("pdftotext") is None,
    reason="qpdf or poppler is not installed (Debian packages qpdf, poppler-utils)",
)
def test_other_programs_find_both_typefaces_embedded_and_read_the_names(tmp_path: Path) -> None:
    path = tmp_path / "print.pdf"
    path.write_bytes(printed(made_for(f"{RARE} of Tarnwick", f"{RARE} Ԓ\u0304")))
    check = subprocess.run(["qpdf", "--check", str(path)], capture_output=True, text=True)
    assert check.returncode == 0, check.stdout + check.stderr
    fonts = subprocess.run(["pdffonts", str(path)], capture_output=True, text=True, check=True).stdout.splitlines()[2:]
    assert {font.split()[0].split("+")[1] for font in fonts} == {
        "SourceSans3-Regular",
        "SourceSans3-Semibold",
        "DejaVuSans",
        "DejaVuSans-Bold",
    }
    for font in fonts:
        assert font.split()[-5:-2] == ["yes", "yes", "yes"]  # embedded, a subset, with a map back to Unicode
    read = subprocess.run(["pdftotext", "-enc", "UTF-8", str(path), "-"], capture_output=True, check=True)
    assert f"{RARE} Ԓ\u0304" in read.stdout.decode()
    assert f"{RARE} of Tarnwick" in read.stdout.decode()
