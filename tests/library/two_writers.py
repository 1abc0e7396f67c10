"""Two processes that put models and records into one library at the same time, through two paths.

python -m tests.library.two_writers LIBRARY NUMBER START
"""

import subprocess
import sys
import time
from pathlib import Path

from clinicalc.library.folder import LibraryFolder
from clinicalc.library.standing import SealedRecord
from tests.library.shelf import comment, model
from tests.packaging.checkout import ROOT

WRITERS = 2
OWN = 50
"""Models, and as many records, that only one of the two puts: 200 operations in all."""
SHARED = 20
"""Models, and as many records, that both put."""
COMMON = model("both write about it")[0]


def things(writer: int) -> list[tuple[tuple[str, bytes], SealedRecord]]:
    """What a writer puts, the shared things among its own."""
    words = [f"writer {writer}, {number}" for number in range(OWN)]
    for number in range(SHARED):
        words.insert(number * 2, f"both, {number}")
    return [(model(one), comment(COMMON, one)) for one in words]


def write_through(paths: list[Path], folder: Path) -> None:
    """Start a writer for each path, let them begin together, and wait. Raises CalledProcessError."""
    start = folder / "start"
    writers = [
        subprocess.Popen(
            [sys.executable, "-m", "tests.library.two_writers", str(path), str(number), str(start)], cwd=ROOT
        )
        for number, path in enumerate(paths)
    ]
    while len(list(folder.glob("ready-*"))) < len(writers) and all(writer.poll() is None for writer in writers):
        time.sleep(0.01)
    start.write_bytes(b"")
    for writer in writers:
        if writer.wait(120):
            raise subprocess.CalledProcessError(writer.returncode, "two_writers")


def main(place: Path, number: int, start: Path) -> None:
    """Put everything as fast as possible from the moment that `start` is there."""
    library, mine = LibraryFolder(place), things(number)
    (start.parent / f"ready-{number}").write_bytes(b"")
    while not start.exists():
        time.sleep(0.0005)
    for (fingerprint, content), record in mine:
        library.put_model(fingerprint, content)
        library.put_record(record)


if __name__ == "__main__":
    main(Path(sys.argv[1]), int(sys.argv[2]), Path(sys.argv[3]))
