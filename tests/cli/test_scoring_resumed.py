"""`clinicalc score` stopped, killed, overtaken and resumed: the same bytes as of a run nobody stopped, or refused."""

import json
import os
import signal
import subprocess
import sys
import time
from pathlib import Path

import pytest

from tests.cli.calling import call, example
from tests.scoring.tables import invent_rows, left_in, odd_rows, rows_of, write_rows

COX = example("tarnwick-cvd-10y-cox")


def test_a_row_that_does_not_fit_can_be_corrected(tmp_path: Path) -> None:
    rows = invent_rows(120_000)
    table, out = write_rows(tmp_path / "people.csv", rows), tmp_path / "out.csv"
    right = table.read_bytes()
    assert call("score", COX, str(table), "-o", str(tmp_path / "right.csv")).status == 0
    lines = right.split(b"\n")
    lines[110_000] += b",one,too,many"
    table.write_bytes(b"\n".join(lines))
    ended = call("score", COX, str(table), "-o", str(out))
    assert ended.status == 4
    assert "line 110001: has 15 fields, and the first line has 12 names" in ended.err
    assert not out.exists()
    assert (tmp_path / "out.csv.part").exists()
    table.write_bytes(right)
    again = call("score", COX, str(table), "-o", str(out))
    assert again.status == 2
    assert "Say --resume to go on with it" in again.err
    resumed = call("score", COX, str(table), "-o", str(out), "--resume", "--json")
    assert resumed.status == 0, resumed.err
    assert resumed.record["went_on_after"] > 0
    assert out.read_bytes() == (tmp_path / "right.csv").read_bytes()
    assert left_in(tmp_path) == {"people.csv", "out.csv", "right.csv"}


def start(table: Path, out: Path, *words: str) -> "subprocess.Popen[bytes]":
    """A run of its own, once it has written down how far it is, or farther than the run before."""
    command = [sys.executable, "-m", "clinicalc", "score", COX, str(table), "-o", str(out), *words]
    state = out.with_name(f"{out.name}.part.state")
    before = state.read_bytes() if state.exists() else b""
    run = subprocess.Popen(command, stdout=subprocess.DEVNULL, stderr=subprocess.PIPE)
    while not state.exists() or state.read_bytes() == before:
        assert run.poll() is None
        time.sleep(0.01)
    return run


@pytest.fixture(scope="module")
def long_table(tmp_path_factory: pytest.TempPathFactory) -> Path:
    """So many rows that a run takes some seconds."""
    folder = tmp_path_factory.mktemp("long")
    table = write_rows(folder / "people.csv", [*invent_rows(100_000), *odd_rows()])
    head, rest = table.read_bytes().split(b"\n", 1)
    table.write_bytes(head + b"\n" + rest * 8)
    return table


@pytest.mark.parametrize("ending", ["csv", "parquet"])
def test_a_killed_run_goes_on_to_the_same_bytes(ending: str, long_table: Path, tmp_path: Path) -> None:
    whole, out = tmp_path / f"whole.{ending}", tmp_path / f"out.{ending}"
    assert call("score", COX, str(long_table), "-o", str(whole)).status == 0
    for words in ((), ("--resume",)):
        run = start(long_table, out, *words)
        os.kill(run.pid, signal.SIGKILL)
        run.communicate()
        assert not out.exists()
    ended = call("score", COX, str(long_table), "-o", str(out), "--resume", "--json")
    assert ended.status == 0, ended.err
    assert 0 < ended.record["went_on_after"] < ended.record["rows"]
    assert out.read_bytes() == whole.read_bytes()
    anew = call("score", COX, str(long_table), "-o", str(whole), "--replace", "--json")
    assert {**ended.record, "went_on_after": None, "out": ""} == {**anew.record, "out": ""}
    assert left_in(tmp_path) == {whole.name, out.name}


def test_a_run_stopped_by_hand_says_how_to_go_on(long_table: Path, tmp_path: Path) -> None:
    out = tmp_path / "out.csv"
    run = start(long_table, out)
    run.send_signal(signal.SIGINT)
    _, err = run.communicate()
    assert run.returncode == 5
    assert b"The same command with --resume goes on from there." in err
    assert not out.exists()


def test_a_run_does_not_go_on_with_other_things(long_table: Path, tmp_path: Path) -> None:
    """Another table, other choices, another model, a part that was changed: each refused with a sentence."""
    out, table = tmp_path / "out.csv", tmp_path / "people.csv"
    table.write_bytes(long_table.read_bytes())
    run = start(table, out)
    os.kill(run.pid, signal.SIGKILL)
    run.communicate()
    state = json.loads((tmp_path / "out.csv.part.state").read_bytes())

    def resume(*words: str, model: str = COX) -> str:
        ended = call("score", model, str(table), "-o", str(out), "--resume", *words)
        assert ended.status == 2, ended.err
        assert not out.exists()
        return ended.err

    assert "the level of the band is not as it had" in resume("--level", "0.9")
    assert "the columns that are kept are not as it had" in resume("--keep", "practice")
    assert "how columns are read is not as it had" in resume("--missing", "NA")
    fine_gray = example("tarnwick-cvd-10y-finegray")
    assert "the model" in resume(model=fine_gray)
    right = table.read_bytes()
    at = state["input_at"] - 1000
    table.write_bytes(right[:at] + right[at:].replace(b"yes", b"no", 1))
    assert "is not what it was when its first rows were scored" in resume()
    table.write_bytes(right[: state["input_at"] - 10])
    assert "is not what it was when its first rows were scored" in resume()
    table.write_bytes(right)
    part = tmp_path / "out.csv.part"
    written = bytearray(part.read_bytes())
    written[100] ^= 1
    part.write_bytes(written)
    assert "is not what the stopped run wrote" in resume()
    assert call("score", COX, str(table), "-o", str(out), "--replace").status == 0


def test_a_table_that_changes_while_it_is_read(long_table: Path, tmp_path: Path) -> None:
    out, table = tmp_path / "out.csv", tmp_path / "people.csv"
    table.write_bytes(long_table.read_bytes())
    run = start(table, out)
    os.utime(table)
    _, err = run.communicate()
    assert run.returncode == 2
    assert b"is not what it was when its first rows were scored" in err
    assert not out.exists()


@pytest.mark.parametrize("words", [("--replace",), ("--resume",), ("--resume", "--replace")])
def test_a_second_run_does_not_write_into_the_first(words: tuple[str, ...], long_table: Path, tmp_path: Path) -> None:
    out = tmp_path / "out.csv"
    run = start(long_table, out)
    ended = call("score", COX, str(long_table), "-o", str(out), *words)
    assert run.poll() is None
    assert ended.status == 2
    assert f"another run is writing {out}." in ended.err
    _, err = run.communicate()
    assert run.returncode == 0, err
    assert len(rows_of(out)) == 8 * (100_000 + len(odd_rows()))
    assert left_in(tmp_path) == {"out.csv"}
