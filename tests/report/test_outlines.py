"""Our own reading of a font's tables against the PDF library's reading of the same files."""

from io import BytesIO

import pytest
from reportlab.pdfbase.ttfonts import TTFont

from clinicalc.report.outlines import read_advances, read_glyphs
from clinicalc.resources import read_shipped


@pytest.mark.parametrize("name", ["SourceSans3-Regular", "SourceSans3-Semibold", "DejaVuSans", "DejaVuSans-Bold"])
def test_characters_and_advances_are_those_the_pdf_library_reads(name: str) -> None:
    content = read_shipped(f"resources/fonts/{name}.ttf")
    face = TTFont(f"{name}-test", BytesIO(content)).face
    glyphs = read_glyphs(content)
    assert set(glyphs) == set(face.charToGlyph)
    # the no-break space stands in two of DejaVu's maps, with two empty glyphs of one width
    assert {code for code in glyphs if glyphs[code] != face.charToGlyph[code]} <= {0xA0}
    assert read_advances(content, glyphs) == {code: face.getCharWidth(code) for code in glyphs}
