"""What stands in a module, as plain lists that a rule can be asked about."""

import ast
from collections.abc import Iterator
from dataclasses import dataclass
from functools import cache
from pathlib import Path

from tests.packaging.checkout import place

type_of_function = ast.FunctionDef, ast.AsyncFunctionDef
type_of_definition = ast.FunctionDef, ast.AsyncFunctionDef, ast.ClassDef


@dataclass(frozen=True, slots=True)
class Definition:
    """A function or class: where it stands, its dotted name, and the node."""

    where: str
    name: str
    node: ast.FunctionDef | ast.AsyncFunctionDef | ast.ClassDef

    def __str__(self) -> str:
        return f"{self.where}:{self.node.lineno} {self.name}"

    @property
    def is_public(self) -> bool:
        """No part of its dotted name starts with an underscore, and no function encloses it."""
        return not any(part.startswith("_") or part == "<in function>" for part in self.name.split("."))

    @property
    def body_lines(self) -> int:
        """The lines from the first statement after the docstring to the last, both counted; 0 without any."""
        body = self.node.body[1:] if ast.get_docstring(self.node) is not None else self.node.body
        return (body[-1].end_lineno or body[-1].lineno) - body[0].lineno + 1 if body else 0


@cache
def parse(path: Path) -> ast.Module:
    """The module's syntax tree."""
    return ast.parse(path.read_text(encoding="utf-8"), place(path))


def definitions(path: Path) -> Iterator[Definition]:
    """Every function and class of a module, the nested ones too, in no particular order."""
    waiting: list[tuple[ast.AST, str]] = [(parse(path), "")]
    while waiting:
        node, prefix = waiting.pop()
        for child in ast.iter_child_nodes(node):
            inner = prefix
            if isinstance(child, type_of_definition):
                name = prefix + child.name
                yield Definition(place(path), name, child)
                inner = name + (".<in function>." if isinstance(child, type_of_function) else ".")
            waiting.append((child, inner))
