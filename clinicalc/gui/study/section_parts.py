"""Sections of a report on a sheet of the page: the same words, statements and tables, without its figures."""

from collections.abc import Iterable

from clinicalc.gui.study.fact_rows import Fact, FactColumn
from clinicalc.gui.study.step_sheet import StepSheet
from clinicalc.report.contents import Cell, FactList, NotedCell, Prose, Section, Table

_FIGURE = tuple("0123456789−–<(")


def add_sections(sheet: StepSheet, sections: Iterable[Section]) -> None:
    """Each with its heading; what is neither prose, statements nor table is left to the report."""
    for section in sections:
        sheet.add_heading(section.heading)
        for block in section.blocks:
            if isinstance(block, Prose):
                for paragraph in block.paragraphs:
                    sheet.add_words(paragraph)
            elif isinstance(block, FactList):
                sheet.add_lines(tuple((fact.name, "; ".join(fact.paragraphs)) for fact in block.facts))
            elif isinstance(block, Table):
                sheet.add_table(section.heading, _columns(block), _facts(block))


def _columns(table: Table) -> tuple[FactColumn, ...]:
    """A column that holds nothing but figures has them at the right, whatever paper does."""
    texts = [[_text(row.cells[place]) for row in table.rows] for place in range(len(table.columns))]
    return tuple(
        FactColumn(column.heading, is_figures=bool(place) and all(text.startswith(_FIGURE) for text in texts[place]))
        for place, column in enumerate(table.columns)
    )


def _facts(table: Table) -> tuple[Fact, ...]:
    return tuple(
        Fact(tuple(_text(cell) for cell in row.cells), _notes(row.cells), is_marked=row.marked) for row in table.rows
    )


def _text(cell: Cell) -> str:
    return cell.text if isinstance(cell, NotedCell) else cell if isinstance(cell, str) else ""


def _notes(cells: Iterable[Cell]) -> str:
    return " ".join(note for cell in cells if isinstance(cell, NotedCell) for note in cell.notes)
