"""Every shape problem of a parsed file at once: missing and unknown fields, wrong types, bounds, with their places.

The walk follows msgspec's own description of the structs in `schema`, so that this check, the structs and the JSON
Schema cannot drift apart. msgspec itself stops at the first problem; an author wants them all.
"""

import functools
import operator
import re
from collections.abc import Iterator, Mapping

from msgspec import inspect

from clinicalc.coefficients.pointers import listed, point, quoted, suggest
from clinicalc.coefficients.schema import CoefficientFile, FileStruct
from clinicalc.coefficients.strict_json import Unusable
from clinicalc.errors import Problem

_PATTERN_WORDS = {
    r"^[a-z][a-z0-9_-]{0,63}$": "begin with a small letter and hold only a-z, 0-9, _ and -, at most 64 of them",
    r"^[a-z][a-z0-9-]{0,63}$": "begin with a small letter and hold only a-z, 0-9 and -, at most 64 of them",
    r"^[0-9]{1,6}\.[0-9]{1,6}\.[0-9]{1,6}$": 'be three numbers with points between them, such as "1.0.0"',
    r"^[0-9]{4}-[0-9]{2}-[0-9]{2}$": 'be a day such as "2026-10-02"',
}


_SPANS = {"year": "a", "years": "a", "y": "a", "month": "mo", "months": "mo", "week": "wk", "weeks": "wk"}
_SPANS |= {"day": "d", "days": "d"}
"""What units of time are called by people, and their codes."""


def find_shape_problems(parsed: object, kind: type[FileStruct] = CoefficientFile) -> Iterator[Problem]:
    """Every place where the parsed value does not have the shape of a coefficient file (or of another struct)."""
    return _walk(parsed, _shape_of(kind), "")


@functools.cache
def _shape_of(kind: type[FileStruct]) -> inspect.Type:
    return inspect.type_info(kind)


def _walk(value: object, shape: inspect.Type, path: str) -> Iterator[Problem]:
    if isinstance(value, Unusable):
        return
    match shape:
        case inspect.StructType():
            yield from _walk_struct(value, shape, path)
        case inspect.UnionType():
            yield from _walk_union(value, shape, path)
        case inspect.VarTupleType():
            yield from _walk_list(value, shape, path)
        case inspect.TupleType():
            yield from _walk_row(value, shape, path)
        case inspect.DictType():
            yield from _walk_dict(value, shape, path)
        case inspect.LiteralType():
            yield from _check_literal(value, shape, path)
        case inspect.StrType():
            yield from _check_text(value, shape, path)
        case inspect.FloatType() | inspect.IntType():
            yield from _check_number(value, shape, path)
        case _:
            if not _fits(value, shape):
                yield _wrong_type(value, shape, path)


def _walk_struct(value: object, shape: inspect.StructType, path: str) -> Iterator[Problem]:
    if not isinstance(value, dict):
        yield _wrong_type(value, shape, path)
        return
    fields = {field.encode_name: field for field in shape.fields}
    known = [*fields, *([shape.tag_field] if shape.tag_field else [])]
    absent = [name for name in known if name not in value]
    for name in value:
        if name not in known:
            hint = suggest(name, absent) or suggest(name, known)
            yield Problem(point(path, name), f"the field {quoted(name)} is not known here.{hint}")
    for name, field in fields.items():
        if name in value:
            yield from _walk(value[name], field.type, point(path, name))
        elif field.required:
            yield Problem(path, f"the field {quoted(name)} is missing.")


def _walk_union(value: object, shape: inspect.UnionType, path: str) -> Iterator[Problem]:
    tagged = {str(kind.tag): kind for kind in shape.types if isinstance(kind, inspect.StructType) and kind.tag_field}
    if tagged:
        yield from _walk_tagged(value, tagged, path)
        return
    fitting = [kind for kind in shape.types if _fits(value, kind)]
    if fitting:
        yield from _walk(value, fitting[0], path)
    else:
        yield _wrong_type(value, shape, path)


def _walk_tagged(value: object, tagged: Mapping[str, inspect.StructType], path: str) -> Iterator[Problem]:
    first = next(iter(tagged.values()))
    if not isinstance(value, dict):
        yield _wrong_type(value, first, path)
        return
    words, name = list(tagged), str(first.tag_field)
    tag = value.get(name)
    choice = listed(map(quoted, words), "or")
    if name not in value:
        yield Problem(path, f"the field {quoted(name)} is missing; it must be {choice}.")
    elif not isinstance(tag, str) or tag not in tagged:
        hint = suggest(tag, words) if isinstance(tag, str) else ""
        yield Problem(point(path, name), f"{quoted(tag)} is not one of {choice}.{hint}")
    else:
        yield from _walk_struct(value, tagged[tag], path)


def _walk_list(value: object, shape: inspect.VarTupleType, path: str) -> Iterator[Problem]:
    if not isinstance(value, list):
        yield _wrong_type(value, shape, path)
        return
    if shape.min_length is not None and len(value) < shape.min_length:
        yield Problem(path, f"this list has {len(value)} entries; at least {shape.min_length} must stand in it.")
    if shape.max_length is not None and len(value) > shape.max_length:
        yield Problem(path, f"this list has {len(value)} entries; at most {shape.max_length} may stand in it.")
    unbounded = shape.item_type == inspect.FloatType()
    for index, item in enumerate(value):
        if unbounded and type(item) in (float, int):
            continue  # rows of a covariance and of draws are most of a file
        yield from _walk(item, shape.item_type, point(path, index))


def _walk_row(value: object, shape: inspect.TupleType, path: str) -> Iterator[Problem]:
    if not isinstance(value, list) or len(value) != len(shape.item_types):
        count = len(value) if isinstance(value, list) else None
        found = f"a list of {count}" if count is not None else _kind_of(value)
        yield Problem(path, f"two entries must stand here, [low, high], with null for an open side; found {found}.")
        return
    for index, (item, kind) in enumerate(zip(value, shape.item_types, strict=True)):
        yield from _walk(item, kind, point(path, index))


def _walk_dict(value: object, shape: inspect.DictType, path: str) -> Iterator[Problem]:
    if not isinstance(value, dict):
        yield _wrong_type(value, shape, path)
        return
    for name, item in value.items():
        yield from _walk(name, shape.key_type, point(path, name))
        yield from _walk(item, shape.value_type, point(path, name))


def _check_literal(value: object, shape: inspect.LiteralType, path: str) -> Iterator[Problem]:
    if not isinstance(value, str):
        yield _wrong_type(value, shape, path)
    elif value not in shape.values:
        words = [str(word) for word in shape.values]
        must = (
            f"must be {quoted(words[0])}." if len(words) == 1 else f"is not one of {listed(map(quoted, words), 'or')}."
        )
        hint = suggest(_SPANS.get(value.casefold(), value), words) if len(words) > 1 else ""
        yield Problem(path, f"{quoted(value)} {must}{hint if 'Did you' in hint else ''}")


def _check_text(value: object, shape: inspect.StrType, path: str) -> Iterator[Problem]:
    if not isinstance(value, str):
        yield _wrong_type(value, shape, path)
        return
    if shape.min_length is not None and len(value) < shape.min_length:
        yield Problem(path, "this text is empty; something must stand here.")
    if shape.max_length is not None and len(value) > shape.max_length:
        yield Problem(path, f"this text has {len(value)} characters; at most {shape.max_length} may stand here.")
    if shape.pattern is not None and not re.search(shape.pattern, value):
        yield Problem(path, f"{quoted(value)} must {_PATTERN_WORDS.get(shape.pattern, 'match ' + shape.pattern)}.")


def _check_number(value: object, shape: inspect.FloatType | inspect.IntType, path: str) -> Iterator[Problem]:
    if not isinstance(value, int | float) or isinstance(value, bool):
        yield _wrong_type(value, shape, path)
        return
    if isinstance(shape, inspect.IntType) and value != int(value):
        yield Problem(path, f"{quoted(value)} must be a whole number.")
    bounds = (
        (shape.ge, "at least", operator.ge),
        (shape.gt, "more than", operator.gt),
        (shape.le, "at most", operator.le),
        (shape.lt, "less than", operator.lt),
    )
    for limit, words, holds in bounds:
        if limit is not None and not holds(value, limit):
            yield Problem(path, f"{quoted(value)} must be {words} {quoted(limit)}.{_slip(value, shape)}")


def _slip(value: float, shape: inspect.FloatType | inspect.IntType) -> str:
    """The likely slip behind a number out of its bounds: a sign, or a percentage where a fraction stands."""
    above = 0 in (shape.gt, shape.ge)
    if above and value < 0:
        return " Take the minus sign away if it is a slip."
    if above and 1 in (shape.lt, shape.le) and 1 < value < 100:
        return f" It is a fraction, so this says {100 * value:g}\u202f%. Did you mean {quoted(value / 100)}?"
    return ""


def _fits(value: object, shape: inspect.Type) -> bool:
    """Whether the JSON type fits; bounds and fields are looked at afterwards."""
    match shape:
        case inspect.StructType() | inspect.DictType():
            return isinstance(value, dict)
        case inspect.VarTupleType() | inspect.TupleType():
            return isinstance(value, list)
        case inspect.StrType() | inspect.LiteralType():
            return isinstance(value, str)
        case inspect.BoolType():
            return isinstance(value, bool)
        case inspect.NoneType():
            return value is None
        case inspect.FloatType() | inspect.IntType():
            return isinstance(value, int | float) and not isinstance(value, bool)
        case _:
            return False


def _wrong_type(value: object, shape: inspect.Type, path: str) -> Problem:
    slip = ""
    if isinstance(value, str) and _fits(0, shape) and re.fullmatch(r"-?[0-9.]+", value):
        slip = " Leave the quotation marks away."
    return Problem(path, f"{_name_of(shape)} must stand here; found {_kind_of(value)}.{slip}")


def _name_of(shape: inspect.Type) -> str:
    match shape:
        case inspect.StructType() | inspect.DictType():
            return "an object"
        case inspect.VarTupleType() | inspect.TupleType():
            return "a list"
        case inspect.BoolType():
            return "true or false"
        case inspect.NoneType():
            return "null"
        case inspect.FloatType():
            return "a number"
        case inspect.IntType():
            return "a whole number"
        case inspect.UnionType():
            return listed(map(_name_of, shape.types), "or")
        case _:
            return "a text"


def _kind_of(value: object) -> str:
    if isinstance(value, dict):
        return "an object"
    if isinstance(value, list):
        return "a list"
    return f"the text {quoted(value)}" if isinstance(value, str) else quoted(value)
