"""What is opened as a coefficient file: a regular file of at most 4 MB, read once; all else is refused in words."""

import hashlib
import json
import os
import socket
import sys
import time
from pathlib import Path

import pytest

from clinicalc.coefficients.fingerprint import canonical_bytes, group_fingerprint
from clinicalc.coefficients.reader import MOST_BYTES, ReadFile, read_bytes, read_file
from clinicalc.coefficients.writer import write_bytes
from clinicalc.errors import CoefficientFileRefused
from tests.coefficients.tiny_model import (
    changed,
    file_of,
    refusals,
    tiny_cloglog_model,
    tiny_logit_model,
    tree_of,
)


def refusal_of(path: Path) -> str:
    with pytest.raises(CoefficientFileRefused) as caught:
        read_file(path)
    assert caught.value.exit_status == 4
    return str(caught.value)


def test_a_file_is_read_with_its_base_name_and_fingerprint(tmp_path: Path) -> None:
    path = tmp_path / "tiny.json"
    path.write_bytes(write_bytes(file_of(tiny_logit_model())))
    read = read_file(path)
    assert read.name == "tiny.json"
    assert read.content == file_of(tiny_logit_model())
    assert read.canonical == canonical_bytes(read.content)
    assert read.fingerprint == hashlib.sha256(read.canonical).hexdigest()


def test_a_folder_a_device_a_pipe_and_a_socket_are_refused_without_waiting(tmp_path: Path) -> None:
    assert "this is a folder" in refusal_of(tmp_path)
    if sys.platform == "win32":
        return
    assert "this is a device" in refusal_of(Path("/dev/zero"))
    os.mkfifo(tmp_path / "pipe.json")
    assert "this is a pipe (FIFO)" in refusal_of(tmp_path / "pipe.json")
    with socket.socket(socket.AF_UNIX) as listener:
        listener.bind(str(tmp_path / "s"))
        assert "this is a socket or" in refusal_of(tmp_path / "s")


def test_a_file_that_is_not_there_or_has_an_impossible_name_is_refused(tmp_path: Path) -> None:
    assert "there is no such file" in refusal_of(tmp_path / "absent.json")
    assert "its name cannot be a file name" in refusal_of(tmp_path / "a\0b.json")
    assert "could not be opened" in refusal_of(tmp_path / ("a" * 5000))


def test_a_file_above_four_megabytes_is_refused(tmp_path: Path) -> None:
    path = tmp_path / "large.json"
    path.write_bytes(b" " * 5_000_000)
    assert "larger than 4 MB" in refusal_of(path)


def test_exactly_four_megabytes_are_still_read() -> None:
    data = write_bytes(file_of(tiny_logit_model()))
    assert read_bytes(data + b" " * (MOST_BYTES - len(data)), "x").content == file_of(tiny_logit_model())
    with pytest.raises(CoefficientFileRefused, match="refused"):
        read_bytes(data + b" " * (MOST_BYTES - len(data) + 1), "x")


def read_again(read: ReadFile) -> ReadFile:
    return read_bytes(write_bytes(read.content), read.name)


def test_the_fingerprint_is_that_of_the_content_not_of_the_layout() -> None:
    tree = tree_of(tiny_cloglog_model())
    plain = read_bytes(json.dumps(tree).encode(), "x")
    turned = {"signatures": [], "model": dict(reversed(tree["model"].items())), "format": tree["format"]}
    assert read_bytes(json.dumps(turned, indent=7).encode(), "y").fingerprint == plain.fingerprint
    counted = changed(tree, ("/model/equations/0/horizons/0/events", 12), ("/model/equations/0/horizons/0/years", 5))
    as_decimals = changed(
        tree, ("/model/equations/0/horizons/0/events", 12.0), ("/model/equations/0/horizons/0/years", 5.0)
    )
    one, two = (read_bytes(json.dumps(each).encode(), "y") for each in (counted, as_decimals))
    assert one.fingerprint == two.fingerprint
    assert one.content == two.content
    assert read_again(plain).fingerprint == plain.fingerprint


def test_a_default_written_out_is_content_and_survives_writing() -> None:
    tree = changed(tree_of(tiny_logit_model()), ("/model/predictors/0/modifiable", False))
    tree = changed(tree, ("/model/worked_examples/0/recalibration", None))
    read = read_bytes(json.dumps(tree).encode(), "x")
    without = read_bytes(json.dumps(tree_of(tiny_logit_model())).encode(), "x")
    assert read.fingerprint != without.fingerprint
    assert read_again(read).fingerprint == read.fingerprint
    assert read_again(read).content == read.content


def test_a_signature_changes_the_content_but_not_the_fingerprint() -> None:
    tree = tree_of(tiny_logit_model())
    signed = changed(tree, ("/signatures/-", {"protected": "abc", "signature": "def"}))
    one, two = (read_bytes(json.dumps(each).encode(), "x") for each in (tree, signed))
    assert one.fingerprint == two.fingerprint
    assert len(two.content.signatures) == 1
    assert read_again(two).content == two.content


def test_a_fingerprint_is_grouped_by_plain_spaces() -> None:
    digits = "0123456789abcdef" * 4
    assert group_fingerprint(digits, 3) == "0123 4567 89ab"
    assert group_fingerprint(digits).replace(" ", "") == digits
    assert len(group_fingerprint(digits).split(" ")) == 16


def test_problems_of_different_kinds_come_all_at_once() -> None:
    found = refusals(
        changed(
            tree_of(tiny_logit_model()),
            ("/model/title", ""),
            ("/model/predictors/0/lable", "Age"),
            ("/model/equations/0/link", "logits"),
            ("/model/equations/0/horizons/0/years", -10),
            ("/model/predictors/1/label", "Smokes\u202enow"),
            ("/model/documentation", "not a list"),
        )
    )
    assert set(found) == {
        "/model/title",
        "/model/predictors/0/lable",
        "/model/equations/0/link",
        "/model/equations/0/horizons/0/years",
        "/model/predictors/1/label",
        "/model/documentation",
    }


def test_a_file_full_of_problems_is_answered_soon_and_with_the_first_of_them() -> None:
    tree = tree_of(tiny_logit_model())
    tree["model"].update({f"titel{number}": number for number in range(150_000)})
    begun = time.perf_counter()
    found = refusals(tree)
    assert time.perf_counter() - begun < 20
    assert len(found) == 501
    assert "these are the first 500" in found[""]
