"""A reading that fills a page: it waits its turn where another errand runs, and is forgotten with the page."""

from collections.abc import Callable
from typing import TypeVar

import shiboken6
from PySide6.QtCore import QObject, QTimer

from clinicalc.errors import ClinicalcError
from clinicalc.gui.errands import Errands
from clinicalc.operations.course import Course

_Result = TypeVar("_Result")
_AGAIN = 100
"""Milliseconds until it is tried again."""


def run_in_turn(
    errands: Errands,
    page: QObject,
    title: str,
    work: Callable[[Course], _Result],
    done: Callable[[_Result], None],
    failed: Callable[[ClinicalcError], None],
) -> None:
    """Run the errand now or as soon as no other runs; nothing is called once the page is gone."""

    def take(result: _Result) -> None:
        if shiboken6.isValid(page):
            done(result)

    def fail(error: ClinicalcError) -> None:
        if shiboken6.isValid(page):
            failed(error)

    def begin() -> None:
        if not errands.run(title, work, take, fail):
            QTimer.singleShot(_AGAIN, page, begin)

    begin()
