"""A validation file held against its model: what it names must be there, and everything that is not is said at once."""

from collections.abc import Iterator, Mapping

from msgspec import UnsetType
from msgspec.structs import replace

from clinicalc.assessment.fields import NumberField, QuestionField
from clinicalc.assessment.model import Model
from clinicalc.coefficients.pointers import listed, point, quoted, suggest
from clinicalc.coefficients.spans import Span, span_of
from clinicalc.cohort.cohort_tables import BinaryTable, ColumnTable, spell_cells
from clinicalc.cohort.dictionary_tables import find_cohort_problems, make_dictionary
from clinicalc.errors import Problem, ValidationRefused
from clinicalc.validation.planning import MOST_GROUPS
from clinicalc.validation.predicted import FlagPoint
from clinicalc.validation.settled import ExclusionColumn, GroupName, SettledValidation, UpdateRequest
from clinicalc.validation.sought import find_sought
from clinicalc.validation.updated import GroupWeights, UpdateMethod, UpdateWish
from clinicalc.validation.validation_tables import ExclusionTable, UpdateTable, ValidationCohortTable, ValidationTables
from clinicalc.validation.written_file import ValidationFile, spell_place

_YES = ("yes", "1", "true", "y")
_METHODS = {"baseline": "intercept", "baseline_slope": "intercept_slope"}


def settle_validation(file: ValidationFile, model: Model) -> SettledValidation:
    """The file with its model (the one named in it, or another that a call names).

    Raises ValidationRefused with every problem of the file, each at its place.
    """
    tables = file.tables
    columns = _known_columns(tables.cohort, model) if file.of_study else tables.cohort.columns
    found = [Problem(spell_place(one.path), one.message) for one in _find_problems(tables, columns, model)]
    if file.problems or found:
        raise ValidationRefused(file.name, tuple(dict.fromkeys((*file.problems, *found))))
    groups = _groups(tables, model)
    sought = find_sought(model, tables.cohort.columns, groups)
    ids = tuple(predictor.id for predictor in sought)
    points = None if isinstance(tables.decision_points, UnsetType) else tables.decision_points
    drawn = None if isinstance(tables.bootstrap, UnsetType) else tables.bootstrap
    return SettledValidation(
        name=file.name,
        model=model,
        title=_text(tables.title),
        cohort=_text(tables.cohort.words),
        from_=_text(tables.cohort.from_),
        to=_text(tables.cohort.to),
        cohort_file=file.folder / tables.cohort.file,
        dictionary=make_dictionary(tables.cohort, ids, ""),
        predictors=sought,
        exclusions=tuple(
            ExclusionColumn(id, table.column, spell_yes(table)) for id, table in tables.cohort.exclusions.items()
        ),
        groups=tuple(_name_group(name, tables.cohort, model) for name in groups),
        spans=_spans(tables, model),
        recalibration=_text(tables.recalibration),
        points=None if points is None else tuple(FlagPoint(value) for value in sorted(set(points))),
        resamples=0 if drawn is None else drawn.replicates,
        seed=1 if drawn is None else drawn.seed,
        update=None if isinstance(tables.update, UnsetType) else _request(tables.update),
    )


def _find_problems(tables: ValidationTables, columns: Mapping[str, ColumnTable], model: Model) -> Iterator[Problem]:
    yield from find_cohort_problems(replace(tables.cohort, columns=dict(columns)), _answers(model))
    yield from _find_derived_problems(columns, model)
    yield from _find_exclusion_problems(tables.cohort, model)
    yield from _find_group_problems(tables, model)
    yield from _find_horizon_problems(tables, model)
    yield from _find_recalibration_problems(tables, model)


def _known_columns(cohort: ValidationCohortTable, model: Model) -> dict[str, ColumnTable]:
    """Columns of a study for what this model asks; the study's own model may ask for more."""
    return {id: table for id, table in cohort.columns.items() if id in model.by_id}


def _answers(model: Model) -> dict[str, tuple[str, ...] | None]:
    return {
        field.id: tuple(option.id for option in field.options) if isinstance(field, QuestionField) else None
        for field in model.fields
        if not (isinstance(field, QuestionField) and field.excludes)
    }


def _find_derived_problems(columns: Mapping[str, ColumnTable], model: Model) -> Iterator[Problem]:
    for field in model.derived:
        if field.id in columns and not field.may_be_typed:
            said = f"{quoted(field.id)} is worked out from {listed(map(quoted, field.sources))}. Name their columns."
            yield Problem(point("/cohort/columns", field.id), said)


def spell_yes(table: ExclusionTable) -> tuple[str, ...]:
    """The texts of a cell that mean yes."""
    return spell_cells(table.yes) or _YES


def _find_exclusion_problems(cohort: ValidationCohortTable, model: Model) -> Iterator[Problem]:
    known = [field.id for field in model.exclusions]
    for id in cohort.exclusions:
        if id not in known:
            said = f"the model has no exclusion {quoted(id)}.{suggest(id, known) or ' It has none.' * (not known)}"
            yield Problem(point("/cohort/exclusions", id), said)


def _find_group_problems(tables: ValidationTables, model: Model) -> Iterator[Problem]:
    seen = set[str]()
    for place, name in enumerate(() if isinstance(tables.groups, UnsetType) else tables.groups):
        path = point("/groups", place)
        if name in seen:
            yield Problem(path, f"{quoted(name)} stands here twice.")
        seen.add(name)
        field = model.by_id.get(name)
        if isinstance(field, NumberField) and name not in tables.cohort.group_columns:
            questions = [one.id for one in model.fields if isinstance(one, QuestionField) and not one.excludes]
            said = f"{quoted(name)} is a number, and groups need answers: name a question of the model"
            said += f" ({listed(map(quoted, questions), 'or')})" if questions else ""
            yield Problem(path, f"{said}, or a column of the table.")


def _find_horizon_problems(tables: ValidationTables, model: Model) -> Iterator[Problem]:
    known = listed((span.words for span in model.spans), "or")
    horizons = () if isinstance(tables.horizons, UnsetType) else tables.horizons
    for place, table in enumerate(horizons):
        span = span_of(table)
        if span is not None and _of_model(span, model) is None:
            said = f"the model gives no risk by {span.words}. It has {known}."
            yield Problem(point("/horizons", place), said)
    if isinstance(tables.cohort.outcome, BinaryTable):
        asked = len(horizons) or len(model.spans)
        if asked > 1:
            said = (
                f"an outcome of yes or no is about one horizon, and the model has {known}: name one, horizons = [...]."
            )
            yield Problem("/horizons", said)


def _find_recalibration_problems(tables: ValidationTables, model: Model) -> Iterator[Problem]:
    offered = model.content.recalibrations
    ids = [one.id for one in offered]
    id = _text(tables.recalibration)
    if id and id not in ids:
        said = f"the model has no recalibration {quoted(id)}.{suggest(id, ids) if ids else ' It has none.'}"
        yield Problem("/recalibration", said)
    if id in ids:
        for span in _spans(tables, model) or ():
            if id not in (one.id for one in model.recalibrations_at(span)):
                yield Problem("/recalibration", f"{quoted(id)} is not made for {span.words}.")


def _spans(tables: ValidationTables, model: Model) -> tuple[Span, ...] | None:
    """The horizons asked for as the model spells them, each once; None where none is asked for."""
    if isinstance(tables.horizons, UnsetType):
        return None
    spans = (span_of(table) for table in tables.horizons)
    found = (_of_model(span, model) for span in spans if span is not None)
    return tuple(dict.fromkeys(span for span in found if span is not None))


def _of_model(span: Span, model: Model) -> Span | None:
    """The horizon of the model that is as long; 10 years and 120 months are."""
    return next((own for own in model.spans if own == span or round(own.days - span.days, 6) == 0.0), None)


def _groups(tables: ValidationTables, model: Model) -> tuple[str, ...]:
    """The groups that are named; where nothing is said of groups, the questions that the model's equations use."""
    if not isinstance(tables.groups, UnsetType):
        return tables.groups
    sought = {predictor.id for predictor in find_sought(model, ())}
    questions = (field for field in model.fields if isinstance(field, QuestionField) and not field.excludes)
    return tuple(field.id for field in questions if field.id in sought and len(field.options) <= MOST_GROUPS)


def _name_group(name: str, cohort: ValidationCohortTable, model: Model) -> GroupName:
    column = cohort.group_columns.get(name)
    if column is None and isinstance(model.by_id.get(name), QuestionField):
        return GroupName(name, name, is_predictor=True)
    return GroupName(name, column or name, is_predictor=False)


def _request(table: UpdateTable) -> UpdateRequest:
    method = UpdateMethod(_METHODS.get(table.method, table.method))
    weights = GroupWeights(table.weights)
    groups = None if isinstance(table.groups, UnsetType) else table.groups
    wish = UpdateWish(method, together=table.together, groups=groups, weights=weights, alpha=table.alpha)
    population = "" if isinstance(table.use, UnsetType) else table.use.population
    return UpdateRequest(wish, _text(table.version), _text(table.id), population, table.documentation)


def _text(value: str | UnsetType) -> str:
    return "" if isinstance(value, UnsetType) else value
