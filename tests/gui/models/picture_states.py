"""The Models and Settings pages in their states, for the pictures that are to be looked at."""

from collections.abc import Callable
from functools import partial
from pathlib import Path
from tempfile import TemporaryDirectory

from clinicalc.gui.main_window import MainWindow
from clinicalc.gui.models.deeds.given import LibraryDeed
from clinicalc.gui.models.models_page import ModelsPage
from clinicalc.gui.page_tabs import Page
from clinicalc.operations.model_card import Deed
from tests.gui.models.picture_versions import VERSIONS_STATES
from tests.gui.models.shelves import HELD, IN_USE, OVERDUE, REFUSED, WAITING, FullShelf, page_of, rest
from tests.gui.practice.picture_steps import FIRST_STATES

_SHELVES: list[tuple[FullShelf, TemporaryDirectory[str]]] = []
"""The libraries whose windows are open; their folders go with the program."""


def open_full() -> MainWindow:
    """A window that works from a library with a model in every state."""
    folder = TemporaryDirectory()
    full = FullShelf(Path(folder.name))
    _SHELVES.append((full, folder))
    return full.open()


def show_models(window: MainWindow) -> ModelsPage:
    """The Models page, read."""
    window.show_page(Page.MODELS)
    page = page_of(window)
    rest(page)
    return page


def _choose(title: str, window: MainWindow) -> None:
    page = show_models(window)
    page.side.list.choose(_SHELVES[-1][0].fingerprints[title])
    page.read_again()
    rest(page)


def _look(title: str, window: MainWindow) -> None:
    """The model itself, which in a narrow window takes the place of the list."""
    _choose(title, window)
    page_of(window).go_across()


def _open(deed: Deed | LibraryDeed, window: MainWindow) -> None:
    _choose(WAITING, window)
    page = page_of(window)
    page.open_deed(deed, is_about_model=isinstance(deed, Deed))
    rest(page)


def _filter(window: MainWindow) -> None:
    _choose(HELD, window)
    page_of(window).side.filter.edit.setText("form 1.")
    page_of(window).side.focus_filter()


def _lose(window: MainWindow) -> None:
    full = _SHELVES[-1][0]
    show_models(window)
    full.lose()
    page_of(window).read_again()
    rest(page_of(window))


MODELS_STATES: tuple[tuple[str, Callable[[MainWindow], None], Callable[[], MainWindow]], ...] = (
    ("models-list", partial(_choose, IN_USE), open_full),
    ("models-waiting", partial(_look, WAITING), open_full),
    ("models-refused", partial(_look, REFUSED), open_full),
    ("models-overdue", partial(_look, OVERDUE), open_full),
    ("models-held", partial(_look, HELD), open_full),
    ("models-filter", _filter, open_full),
    ("models-copy", _lose, open_full),
    ("models-approve", partial(_open, Deed.APPROVE), open_full),
    ("models-history", partial(_open, LibraryDeed.HISTORY), open_full),
    ("models-people", partial(_open, LibraryDeed.PEOPLE), open_full),
    *VERSIONS_STATES,
    *FIRST_STATES,
)
"""Name, what is done, and the window."""
