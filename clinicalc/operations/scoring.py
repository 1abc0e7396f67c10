"""What is asked of a scoring: fields with their columns as typed, and the columns as a study names them."""

from collections.abc import Iterable, Iterator, Mapping
from pathlib import Path

import msgspec

from clinicalc.assessment.fields import QuestionField
from clinicalc.assessment.model import Model
from clinicalc.coefficients.pointers import quoted
from clinicalc.coefficients.shape import find_shape_problems
from clinicalc.cohort.dictionary import ColumnEntry
from clinicalc.cohort.dictionary_tables import find_cohort_problems, make_dictionary
from clinicalc.development.description import parse_description
from clinicalc.development.tables import Fault, read_text
from clinicalc.errors import DescriptionRefused, Problem, UsageError
from clinicalc.units.quoting import quote
from clinicalc.validation.settling import spell_yes
from clinicalc.validation.validation_tables import ValidationCohortTable

_NO = ("0", "no", "No", "NO", "n", "N", "false", "False", "FALSE")


def take_pairs(words: Iterable[str], option: str, example: str) -> Mapping[str, str]:
    """Fields with what is said of them, from words such as "age=AGE_YEARS".

    Raises UsageError for no "=", nothing behind it, and a field given twice.
    """
    taken: dict[str, str] = {}
    for word in words:
        id, mark, text = (part.strip() for part in word.partition("="))
        if not mark or not id or not text:
            raise UsageError(
                f"{quote(word)} cannot be used with {option}.", do=f"Write field, equals sign and name: {example}."
            )
        if id in taken:
            raise UsageError(f"{id} is given twice with {option}.", do="Give each field once.")
        taken[id] = text
    return taken


def read_columns(path: Path, model: Model) -> Mapping[str, ColumnEntry]:
    """What the [cohort.columns] of a study say of the columns of this model's fields, by field id.

    Of a validation plan the exclusions, too.

    Raises DescriptionRefused with everything that is wrong with them.
    """
    text = read_text(path)
    if isinstance(text, Fault):
        raise DescriptionRefused(path.name, (Problem("", text.message),))
    tree, problems = parse_description(text, path.name)
    cohort = tree.get("cohort")
    found = cohort.get("columns") if isinstance(cohort, dict) else None
    if not problems and not isinstance(found, dict):
        problems = (Problem("cohort.columns", "is not there: a table of it for each field says which column it is."),)
    if problems:
        raise DescriptionRefused(path.name, problems)
    stand_in: dict[str, object] = {
        "file": "-",
        "outcome": {"kind": "binary", "column": "-", "event": "1"},
        "columns": found,
    }
    if isinstance(cohort, dict) and "exclusions" in cohort:
        stand_in["exclusions"] = cohort["exclusions"]
    said = list(find_shape_problems(stand_in, ValidationCohortTable))
    if not said:
        plan = msgspec.convert(stand_in, ValidationCohortTable)
        said += find_cohort_problems(plan, dict(_answers(model)))
        if not said:
            entries = make_dictionary(plan, tuple(plan.columns), "").columns
            return {**dict(_read_exclusions(plan, model)), **{entry.predictor: entry for entry in entries}}
    raise DescriptionRefused(path.name, tuple(Problem(_spell(one.path), one.message) for one in said))


def _read_exclusions(cohort: ValidationCohortTable, model: Model) -> Iterator[tuple[str, ColumnEntry]]:
    """The columns by which a validation plan leaves people out. What is neither its yes nor a plain no is not known."""
    known = {field.id for field in model.exclusions}
    for id, table in cohort.exclusions.items():
        if id in known:
            said = {form for text in spell_yes(table) for form in (text, text.lower(), text.upper(), text.capitalize())}
            levels = [("yes", text) for text in sorted(said)] + [("no", text) for text in _NO if text not in said]
            yield id, ColumnEntry(table.column, predictor=id, levels=tuple(levels))


def _answers(model: Model) -> Iterator[tuple[str, tuple[str, ...] | None]]:
    for field in model.fields:
        yield field.id, tuple(one.id for one in field.options) if isinstance(field, QuestionField) else None


def _spell(pointer: str) -> str:
    """The place in the file that a pointer into its [cohort] names."""
    parts = [part for part in pointer.split("/") if part and part != "cohort"]
    return ".".join(["cohort", *(part if part.replace("_", "").isalnum() else quoted(part) for part in parts)])
