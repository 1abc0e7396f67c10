"""A study file written by the program: the tree of a TOML file spelled out, put in place whole or not at all."""

import os
import re
from collections.abc import Iterator, Mapping
from pathlib import Path

from clinicalc.errors import FileNotWritten
from clinicalc.replacement import READABLE, create_file, replace_file
from clinicalc.settings.toml_text import quote_toml

_BARE = re.compile(r"[A-Za-z0-9_-]+")
_TOKENS = re.compile(
    r'"""(?:\\.|[^\\])*?"""|' r"'''(?:.|\n)*?'''|" r'"(?:\\.|[^"\\\n])*"|' r"'[^'\n]*'|(#)[^\n]*", re.DOTALL
)
_WIDE = 100
Tree = Mapping[str, object]


def has_comments(text: str) -> bool:
    """Whether a TOML text has comments."""
    return any(found[1] for found in _TOKENS.finditer(text))


def spell_toml(tree: Tree) -> str:
    """The tree as TOML: single values first, then tables, then lists of tables; texts, truths and numbers."""
    return "".join(_table(tree, ())).lstrip("\n")


def write_study(path: Path, text: str, *, replace: bool) -> None:
    """Put a study file in place whole or not at all.

    Raises FileNotWritten where it cannot be written, or where something stands there and `replace` is not said.
    """
    content = text.encode()
    try:
        (replace_file if replace else create_file)(path, content, READABLE)
    except FileExistsError:
        raise FileNotWritten(
            "a file of this name is there already and was left as it is.", where=path.name, do="Choose another name."
        ) from None
    except (OSError, ValueError) as fault:
        why = fault.strerror if isinstance(fault, OSError) and fault.strerror else str(fault)
        raise FileNotWritten(
            f"the study file could not be written to {os.fspath(path.parent)}: {why}.",
            where=path.name,
            do="Nothing was changed. Choose another folder, or see to that one.",
        ) from None


def _table(tree: Tree, path: tuple[str, ...]) -> Iterator[str]:
    for key, value in tree.items():
        if not isinstance(value, dict) and not is_tables(value):
            yield f"{_key(key)} = {_value(value)}\n"
    for key, value in tree.items():
        inner = (*path, key)
        if isinstance(value, dict):
            singles = any(not isinstance(item, dict) and not is_tables(item) for item in value.values())
            if singles or not value:
                yield f"\n[{'.'.join(map(_key, inner))}]\n"
            yield from _table(value, inner)
        elif isinstance(value, list) and is_tables(value):
            for item in value:
                yield f"\n[[{'.'.join(map(_key, inner))}]]\n"
                yield from (f"{_key(name)} = {_value(part)}\n" for name, part in item.items())


def is_tables(value: object) -> bool:
    """Whether a value is written as a list of tables."""
    return isinstance(value, list) and bool(value) and all(isinstance(item, dict) for item in value)


def _key(key: str) -> str:
    return key if _BARE.fullmatch(key) else quote_toml(key)


def _value(value: object) -> str:
    if isinstance(value, bool):
        return "true" if value else "false"
    if isinstance(value, str):
        return quote_toml(value)
    if isinstance(value, dict):
        return "{" + ", ".join(f"{_key(key)} = {_value(item)}" for key, item in value.items()) + "}"
    if isinstance(value, list):
        items = [_value(item) for item in value]
        line = f"[{', '.join(items)}]"
        several = is_tables(value) and len(value) > 1
        return line if len(line) <= _WIDE and not several else "[\n" + "".join(f"    {item},\n" for item in items) + "]"
    return repr(value)
