"""What a coefficient file is written in: texts, ids, bounded numbers, and the base of every object."""

from typing import Annotated

from msgspec import Meta, Struct

LONGEST_TEXT = 4000
"""Letters of a text of the file."""

Text = Annotated[str, Meta(min_length=1, max_length=LONGEST_TEXT)]
Label = Annotated[str, Meta(min_length=1, max_length=120)]
Id = Annotated[str, Meta(pattern=r"^[a-z][a-z0-9_-]{0,63}$")]
ModelId = Annotated[str, Meta(pattern=r"^[a-z][a-z0-9-]{0,63}$")]
Version = Annotated[str, Meta(pattern=r"^[0-9]{1,6}\.[0-9]{1,6}\.[0-9]{1,6}$")]
Fingerprint = Annotated[str, Meta(pattern=r"^[0-9a-f]{64}$")]
Day = Annotated[str, Meta(pattern=r"^[0-9]{4}-[0-9]{2}-[0-9]{2}$")]
Probability = Annotated[float, Meta(ge=0, le=1)]
Level = Annotated[float, Meta(gt=0, lt=1)]
Positive = Annotated[float, Meta(gt=0)]
Count = Annotated[int, Meta(ge=0)]
Matrix = tuple[tuple[float, ...], ...]
Limits = tuple[float | None, float | None]
"""Lower and upper end, both included; null leaves a side open."""


class FileStruct(Struct, frozen=True, forbid_unknown_fields=True):
    """Base of everything a coefficient file is made of: immutable, and strict about names."""
