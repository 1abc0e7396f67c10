"""Prints changed after they were saved, as somebody with a PDF editor could."""

import json
from collections.abc import Callable
from io import BytesIO
from typing import Any

from pypdf import PdfReader, PdfWriter
from pypdf.annotations import FreeText
from pypdf.generic import DecodedStreamObject, NameObject

Change = Callable[[Any], None]


def with_record(pdf: bytes, record: bytes) -> bytes:
    """The same pages with another text attached under the record's name."""
    writer = PdfWriter(clone_from=PdfReader(BytesIO(pdf)))
    root: Any = writer.root_object
    specification = root["/Names"]["/EmbeddedFiles"]["/Names"][1].get_object()
    stream = DecodedStreamObject()
    stream.set_data(record)
    stream[NameObject("/Type")] = NameObject("/EmbeddedFile")
    place = writer._add_object(stream)
    for key in ("/F", "/UF"):
        specification["/EF"][NameObject(key)] = place
    return _written(writer)


def with_changed_record(pdf: bytes, change: Change) -> bytes:
    """The same pages with the record changed in place."""
    record = json.loads(record_in(pdf))
    change(record)
    return with_record(pdf, json.dumps(record).encode())


def without_time(pdf: bytes) -> bytes:
    """The same print without any word of when it was made."""
    writer = PdfWriter(clone_from=PdfReader(BytesIO(pdf)))
    info: Any = writer._info
    del info["/CreationDate"]
    return _written(writer)


def without_record(pdf: bytes) -> bytes:
    """The same pages with nothing attached."""
    writer = PdfWriter(clone_from=PdfReader(BytesIO(pdf)))
    del writer.root_object["/Names"]
    return _written(writer)


def with_page(pdf: bytes, other: bytes, place: int, *, at: int) -> bytes:
    """The print with a page of another one put in, both counted from 0."""
    writer = PdfWriter(clone_from=PdfReader(BytesIO(pdf)))
    writer.insert_page(PdfReader(BytesIO(other)).pages[place], at)
    return _written(writer)


def without_page(pdf: bytes, place: int) -> bytes:
    """The print with one page taken out, counted from 0."""
    writer = PdfWriter(clone_from=PdfReader(BytesIO(pdf)))
    writer.remove_page(place)
    return _written(writer)


def with_annotation(pdf: bytes, place: int) -> bytes:
    """The print with a text laid over a page, as a viewer adds comments."""
    writer = PdfWriter(clone_from=PdfReader(BytesIO(pdf)))
    writer.add_annotation(place, FreeText(text="2 of 100", rect=(100, 400, 300, 440)))
    return _written(writer)


def record_in(pdf: bytes) -> bytes:
    """The record that a print carries."""
    return PdfReader(BytesIO(pdf)).attachments["assessment.json"][0]


def _written(writer: PdfWriter) -> bytes:
    target = BytesIO()
    writer.write(target)
    return target.getvalue()
