"""The record inside the print: the assessment as JSON, as an embedded file, without the patient label."""

from typing import Any

from clinicalc.errors import ClinicalcError

ATTACHED_NAME = "assessment.json"
_DESCRIPTION = "This assessment as data, without the patient label"


def attach_record(document: Any, record: str) -> None:
    """Puts the record into a document of the PDF library, in the name tree of embedded files (ISO 32000-1, 7.11.4)."""
    from reportlab.pdfbase.pdfdoc import PDFArray, PDFDictionary, PDFName, PDFStream, PDFString

    content = record.encode()
    stream = PDFStream(
        PDFDictionary(
            {
                "Type": PDFName("EmbeddedFile"),
                "Subtype": "/application#2Fjson",  # PDFName would write the slash as it is
                "Params": PDFDictionary({"Size": len(content)}),
            }
        ),
        content,
    )
    place = document.Reference(stream)
    specification = PDFDictionary(
        {
            "Type": PDFName("Filespec"),
            "F": PDFString(ATTACHED_NAME),
            "UF": PDFString(ATTACHED_NAME),
            "Desc": PDFString(_DESCRIPTION),
            "EF": PDFDictionary({"F": place, "UF": place}),
        }
    )
    names = PDFArray([PDFString(ATTACHED_NAME), document.Reference(specification)])
    document.Catalog.Names = PDFDictionary({"EmbeddedFiles": PDFDictionary({"Names": names})})


def read_attached_record(pdf: bytes) -> str:
    """The JSON text that a print carries. Raises ClinicalcError when `pdf` is no PDF or carries no record."""
    from io import BytesIO

    from pypdf import PdfReader
    from pypdf.errors import PyPdfError

    try:
        held = PdfReader(BytesIO(pdf)).attachments.get(ATTACHED_NAME, [])
        return held[0].decode()
    except (PyPdfError, UnicodeDecodeError, IndexError) as error:
        raise ClinicalcError(
            "no record of an assessment can be read from this file.",
            why="It is not a print of this program, or it was changed since.",
            do="Open the PDF file as it was saved.",
        ) from error
