"""What is made of a cell before it is read as what a person would type: missing, an answer's sign, a decimal comma."""

import re
from collections.abc import Mapping
from dataclasses import dataclass

from clinicalc.assessment.fields import Field, NumberField, QuestionField
from clinicalc.coefficients.answers import find_answer
from clinicalc.cohort.dictionary import ColumnEntry
from clinicalc.cohort.missing_cells import ALWAYS_MISSING
from clinicalc.errors import Problem, TableRefused
from clinicalc.scoring.scored import CodedTexts

_WITH_COMMA = re.compile(r"[-+−]?[0-9]*,[0-9]+")
_WITH_POINT = re.compile(r"[-+−]?[0-9]*\.[0-9]+")
_STRAY_POINT = "(a point, where decimals have a comma)"
_YES_NO = {"0": "no", "1": "yes", "false": "no", "true": "yes", "n": "no", "y": "yes"}


@dataclass(frozen=True, slots=True)
class CellReading:
    """How the cells of one column are read: texts for an empty cell (capitals do not count), signs of answers.

    `comma`: decimals have a comma, and a number with a point is none. `counted_from_one`: a cell "2" would make "1" and
    "2" of what was taken for 0 and 1.
    """

    field: str
    missing: frozenset[str]
    answers: Mapping[str, str]
    comma: bool
    counted_from_one: bool = False

    @property
    def words(self) -> str:
        """All of it as a text, to be compared with that of another run."""
        return f"{sorted(self.missing)} {sorted(self.answers.items())} {self.comma}"

    @property
    def changes(self) -> bool:
        """Whether any text would be read otherwise than as it stands."""
        return bool(self.missing or self.answers or self.comma)

    def read(self, file: str, cells: CodedTexts) -> CodedTexts:
        """The cells as they would be typed. Raises TableRefused for a question that is coded 1 and 2."""
        return CodedTexts([self._read(file, text) for text in cells.distinct], cells.at) if self.changes else cells

    def _read(self, file: str, text: str) -> str:
        trimmed = text.strip()
        if trimmed.casefold() in self.missing:
            return ""
        if trimmed in self.answers:
            return self.answers[trimmed]
        if self.counted_from_one and trimmed == "2":
            why = f"holds 2 where {self.field} is yes or no: say which is which under levels in its columns table."
            raise TableRefused(file, (Problem(f"the column of {self.field}", why),))
        if self.comma and _WITH_COMMA.fullmatch(trimmed):
            return trimmed.replace(",", ".")
        if self.comma and _WITH_POINT.fullmatch(trimmed):
            return f"{trimmed} {_STRAY_POINT}"
        return text


def reading_of(field: Field, entry: ColumnEntry | None, decimal: str, missing: tuple[str, ...]) -> CellReading:
    """How a field's column is read: as typed, and where a study says what the column is, as the study reads it."""
    stated = {text.strip().casefold() for text in missing}
    comma = decimal == "," and isinstance(field, NumberField)
    if entry is None:
        return CellReading(field.id, frozenset(stated), {}, comma)
    stated |= {text.strip().casefold() for text in entry.missing}
    if not isinstance(field, QuestionField):
        return CellReading(field.id, frozenset(stated | ALWAYS_MISSING), {}, comma)
    levels = {text.strip(): id for id, text in entry.levels}
    is_yes_no = [option.id for option in field.options] == ["no", "yes"]
    counted = is_yes_no and not levels
    answers = _YES_NO if counted else levels
    options = [(option.id, option.label) for option in field.options]
    silent = {one for one in ALWAYS_MISSING if one not in answers and find_answer(one, options) is None}
    return CellReading(field.id, frozenset(stated | silent), answers, comma=False, counted_from_one=counted)
