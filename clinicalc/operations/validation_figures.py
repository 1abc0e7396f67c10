"""The figures of a validation as files of their own: one PDF each, as they stand in its report."""

from __future__ import annotations

from collections.abc import Container, Iterator
from pathlib import Path
from typing import TYPE_CHECKING

from clinicalc.operations.whole_folder import put_folder, require_folder

if TYPE_CHECKING:
    from clinicalc.assessment.model import Model
    from clinicalc.report.contents import StudyPart
    from clinicalc.validation.validated import Validation

_WHAT = "the figures"
_NAMES = ("people", "calibration", "spread", "net benefit", "groups")

# the layout of figures is loaded by the first of them, not by every start of the window


def write_validation_figures(folder: Path, validation: Validation, model: Model, *, replace: bool = False) -> None:
    """All figures in a folder, which is made, or was empty, or with `replace` holds older ones; whole or not at all.

    Raises PrintRefused for a text that could only be shown wrongly, and FileNotWritten.
    """
    put_folder(folder, paint_validation(validation, model), _WHAT, replace=replace, older=_OlderFigures())


def require_figures_place(folder: Path, *, replace: bool = False) -> None:
    """Nothing, where figures may be put in `folder`; asked before long work. Raises FileNotWritten."""
    require_folder(folder, _OlderFigures(), _WHAT, replace=replace)


def paint_validation(validation: Validation, model: Model) -> dict[str, bytes]:
    """Each figure as a PDF by the name of its file. Raises PrintRefused."""
    from clinicalc.report.figure_blocks import draw_figure_alone
    from clinicalc.report.figure_file import write_figure
    from clinicalc.report.fonts import check_texts, read_lettering
    from clinicalc.report.shapes import Text

    lettering = read_lettering()
    files = {}
    for name, part in _parts(validation, model):
        figure = draw_figure_alone(lettering, part)
        texts = tuple(shape.text for shape in figure.shapes if isinstance(shape, Text))
        check_texts(lettering, texts, "A text in the figure, from the table or the file,")
        files[f"{name}.pdf"] = write_figure(figure, lettering, f"{validation.title} {validation.version}: {name}")
    return files


class _OlderFigures(Container[str]):
    """Names that figures may have: which of them there are, and at which horizons, is known only afterwards."""

    def __contains__(self, name: object) -> bool:
        return isinstance(name, str) and name.endswith(".pdf") and name.removesuffix(".pdf").startswith(_NAMES)


def _parts(validation: Validation, model: Model) -> Iterator[tuple[str, StudyPart]]:
    """Each figure with the name of its file, less its ending."""
    from clinicalc.operations.validation_report_decisions import show_net_benefit
    from clinicalc.operations.validation_report_figures import show_calibration, show_spread
    from clinicalc.operations.validation_report_groups import show_groups
    from clinicalc.operations.validation_report_people import draw_up_way
    from clinicalc.report.contents import CalibrationPart, FlowPart, GroupsPart, NetBenefitPart, SpreadPart

    yield "people", FlowPart(draw_up_way(validation.count, model))
    for horizon in validation.horizons:
        at = "" if horizon.span is None else f" {horizon.span.words}"
        yield f"calibration{at}", CalibrationPart(show_calibration(horizon))
        yield f"spread{at}", SpreadPart(show_spread(horizon))
        shown = show_net_benefit(horizon)
        if shown is not None:
            yield f"net benefit{at}", NetBenefitPart(shown)
    if validation.groups:
        yield "groups", GroupsPart(show_groups(validation, model))
