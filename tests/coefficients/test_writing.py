"""Writing: one layout, whole or not at all, and the same content when it is read again."""

import json
import math
import os
import stat
from pathlib import Path

import msgspec
import pytest

from clinicalc.coefficients.reader import read_bytes, read_file
from clinicalc.coefficients.schema import ModelContent
from clinicalc.coefficients.writer import WIDTH, write_bytes, write_file
from clinicalc.errors import FileNotWritten
from tests.coefficients.tiny_model import (
    changed,
    file_of,
    read_of,
    tiny_cloglog_model,
    tiny_logit_model,
    tree_of,
)


@pytest.mark.parametrize("model", [tiny_logit_model(), tiny_cloglog_model()])
def test_what_is_written_reads_as_the_same_content(model: ModelContent) -> None:
    written = write_bytes(file_of(model))
    read = read_bytes(written, "tiny.json")
    assert read.content == file_of(model)
    assert read == read_of(model)
    assert write_bytes(read.content) == write_bytes(read_bytes(write_bytes(read.content), "x").content)


def test_the_layout_is_indented_by_two_with_the_fields_in_their_order() -> None:
    text = write_bytes(file_of(tiny_logit_model())).decode()
    lines = text.splitlines()
    assert text.endswith("}\n")
    assert lines[:4] == ["{", '  "format": "clinicalc.coefficients/1",', '  "model": {', '    "id": "tiny-logit",']
    assert '        "derivation": [30, 75],' in lines
    assert '            "intercept": -5' in lines
    assert "            [0.0004, 0.001]," in lines
    assert '        "id": "age",' in lines
    assert lines[lines.index('        "kind": "number",') + 1] == '        "id": "age",'
    assert '    "documentation": []' in lines
    assert '  "signatures": []' in lines


def test_rows_too_wide_for_a_line_are_broken_and_none_is_wider() -> None:
    row = [1 / 3 + number for number in range(10)]
    spline = {"spline": {"knots": row, "basis": 1}}
    tree = changed(tree_of(tiny_logit_model()), ("/model/equations/0/terms/0/product/0/steps", [spline]))
    content = read_bytes(json.dumps(tree).encode(), "x").content
    text = write_bytes(content).decode()
    assert max(map(len, text.splitlines())) <= WIDTH
    assert '"knots": [\n' in text
    assert read_bytes(text.encode(), "x").content == content


def test_numbers_are_written_as_the_shortest_decimals() -> None:
    numbers = [0.1, 1 / 3, 1e-7, 30.0, -0.0, 5e-324, 123456789012345.0]
    draws = {"basis": "draws", "coefficients": [numbers[:2]] * 200, "baselines": [[number] for number in numbers] * 29}
    tree = changed(tree_of(tiny_logit_model()), ("/model/equations/0/uncertainty", draws))
    text = write_bytes(
        msgspec.structs.replace(file_of(tiny_logit_model()), model=msgspec.convert(tree["model"], ModelContent))
    )
    for spelled in (b"[0.1, 0.3333333333333333]", b"[1e-07]", b"[30]", b"[0]", b"[5e-324]", b"[123456789012345]"):
        assert spelled in text


def test_other_scripts_are_written_as_they_are_and_in_utf_8() -> None:
    model = msgspec.structs.replace(tiny_logit_model(), title="Ηλικία <b> 年齢 \U0001f600")
    assert "Ηλικία <b> 年齢 \U0001f600" in write_bytes(file_of(model)).decode("utf-8")


def test_a_number_that_is_not_finite_is_not_written() -> None:
    point = msgspec.structs.replace(tiny_logit_model().decision_points[0], probability=math.nan)
    with pytest.raises(FileNotWritten, match="cannot stand in a coefficient file"):
        write_bytes(file_of(msgspec.structs.replace(tiny_logit_model(), decision_points=(point,))))


def test_a_file_is_replaced_whole_and_nothing_is_left_beside_it(tmp_path: Path) -> None:
    path = tmp_path / "tiny.json"
    path.write_text("older")
    write_file(path, file_of(tiny_logit_model()))
    assert read_file(path).content == file_of(tiny_logit_model())
    assert os.listdir(tmp_path) == ["tiny.json"]
    assert stat.S_IMODE(path.stat().st_mode) == 0o644 or os.name == "nt"


def test_where_nothing_can_be_written_it_is_said_and_nothing_is_left(tmp_path: Path) -> None:
    with pytest.raises(FileNotWritten, match="could not be written") as caught:
        write_file(tmp_path / "absent" / "tiny.json", file_of(tiny_logit_model()))
    assert "tiny.json" in str(caught.value)
    (tmp_path / "folder.json").mkdir()
    (tmp_path / "folder.json" / "kept").touch()
    with pytest.raises(FileNotWritten):
        write_file(tmp_path / "folder.json", file_of(tiny_logit_model()))
    assert os.listdir(tmp_path) == ["folder.json"]
