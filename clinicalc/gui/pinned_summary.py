"""What stays in sight of a result when there is no room for the sheet."""

from dataclasses import dataclass

from clinicalc.assessment.findings import Grade


@dataclass(frozen=True, slots=True)
class PinnedMark:
    """The mark of one finding, with its grade in words and the field to go to ("" for none)."""

    number: int
    grade: Grade
    word: str
    field: str


@dataclass(frozen=True, slots=True)
class PinnedSummary:
    """The number's percentage ("" for none), outcome or reason, the band lane's words, and the findings' marks."""

    percentage: str
    headline: str
    sentence: str
    band_name: str
    band_figures: str
    marks: tuple[PinnedMark, ...]
    vetted: bool
