"""The figures of a validation as files: one page each of the figure's own size, with its words."""

from pathlib import Path

import pytest
from pypdf import PdfReader

from clinicalc.errors import FileNotWritten
from clinicalc.operations.validation_figures import (
    paint_validation,
    require_figures_place,
    write_validation_figures,
)
from tests.operations.reported_validations import KINDS, reported
from tests.report.printing import text_of


@pytest.mark.parametrize("kind", KINDS[:4])
def test_each_figure_is_one_page(kind: str, tmp_path: Path) -> None:
    told = reported(kind)
    write_validation_figures(tmp_path / "figures", told.validation, told.model)
    names = {path.name for path in (tmp_path / "figures").iterdir()}
    several = [f" {each.span.words}" if each.span else "" for each in told.validation.horizons]
    expected = {f"{what}{at}.pdf" for what in ("calibration", "spread", "net benefit") for at in several}
    assert names == expected | {"people.pdf", "groups.pdf"}
    for name in names:
        reader = PdfReader(tmp_path / "figures" / name)
        (page,) = reader.pages
        assert float(page.mediabox.width) == pytest.approx(522.0)
        assert reader.metadata is not None
        assert reader.metadata.title == f"{told.validation.title} {told.validation.version}: {name[:-4]}"
        assert reader.metadata.subject


def test_older_figures_make_room_only_where_that_is_asked_for(tmp_path: Path) -> None:
    folder, told, other = tmp_path / "figures", reported("timed"), reported("answered")
    write_validation_figures(folder, told.validation, told.model)
    with pytest.raises(FileNotWritten, match="left as they are"):
        require_figures_place(folder)
    require_figures_place(folder, replace=True)
    # those of two horizons, of which the second validation has neither
    write_validation_figures(folder, other.validation, other.model, replace=True)
    assert {path.name for path in folder.iterdir()} == set(paint_validation(other.validation, other.model))
    (folder / "letter.pdf").write_bytes(b"mine")
    with pytest.raises(FileNotWritten, match=r"letter\.pdf"):
        require_figures_place(folder, replace=True)
    with pytest.raises(FileNotWritten, match=r"letter\.pdf"):
        write_validation_figures(folder, other.validation, other.model, replace=True)


def test_their_words_are_those_of_the_report() -> None:
    told = reported("timed")
    files = paint_validation(told.validation, told.model)
    assert "act by the model" in text_of(files["net benefit 10 years.pdf"])
    assert "3,200 people in the file" in text_of(files["people.pdf"])
    groups = text_of(files["groups.pdf"])
    for group in told.validation.groups:
        assert f"{group.people:,}" in groups
    assert paint_validation(told.validation, told.model) == files
