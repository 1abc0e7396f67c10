"""A folder of files put in place whole or not at all."""

import os
import shutil
import stat
import tempfile
from collections.abc import Container, Iterator, Mapping
from contextlib import contextmanager
from dataclasses import dataclass
from pathlib import Path

from clinicalc.errors import FileNotWritten
from clinicalc.replacement import OWNER_ONLY


def put_folder(
    folder: Path, files: Mapping[str, bytes], what: str, *, replace: bool = False, older: Container[str] = ()
) -> None:
    """The files, by name, in `folder`, which is made, or is there and empty, or with `replace` holds such files only.

    They are written beside it first; whatever happens, the folder holds all of the old files or all of the new. `what`
    names them in a sentence ("the tables"); `older` are names that may be replaced too. Raises FileNotWritten.
    """
    with _told(folder, what):
        require_folder(folder, _Either(files, older), what, replace=replace)
        place = folder.resolve()
        fresh = Path(tempfile.mkdtemp(dir=place.parent, prefix=f".{place.name[:40]}-", suffix=".part"))
        try:
            for name, content in files.items():
                _write(fresh / name, content)
            _swap(fresh, place)
        except BaseException:
            shutil.rmtree(fresh, ignore_errors=True)
            raise


def require_folder(folder: Path, names: Container[str], what: str, *, replace: bool) -> None:
    """Nothing, where files of these names may be put in `folder`; asked before long work. Raises FileNotWritten."""
    with _told(folder, what):
        if not folder.resolve().parent.is_dir():
            raise FileNotWritten(
                f"{what} cannot be written.",
                where=str(folder),
                why=f"There is no folder {folder.resolve().parent}.",
                do="Make it, or choose another.",
            )
        if not os.path.lexists(folder):
            return
        if not folder.is_dir():
            raise FileNotWritten(
                f"{what} were not written.",
                where=str(folder),
                why="This is a file, and not a folder.",
                do="Choose another name. Nothing was changed.",
            )
        held = sorted(entry.name for entry in folder.iterdir())
        other = next((name for name in held if name not in names or not (folder / name).is_file()), None)
        if other is not None:
            raise FileNotWritten(
                f"{what} were not written.",
                where=str(folder),
                why=f"The folder holds something else: “{other}”.",
                do="Choose a new or an empty folder. Nothing was changed.",
            )
        if held and not replace:
            raise FileNotWritten(
                "the folder holds such files already; they were left as they are.",
                where=str(folder),
                do="Choose another folder, or say that they are to be replaced.",
            )


@dataclass(frozen=True, slots=True)
class _Either(Container[str]):
    """Names of the one or the other."""

    one: Container[str]
    other: Container[str]

    def __contains__(self, name: object) -> bool:
        return name in self.one or name in self.other


def _write(path: Path, content: bytes) -> None:
    with open(path, "xb", opener=lambda name, flags: os.open(name, flags, OWNER_ONLY)) as stream:
        stream.write(content)
        stream.flush()
        os.fsync(stream.fileno())


def _swap(fresh: Path, place: Path) -> None:
    """Give the new folder the name; an old one steps aside first, and comes back where that fails."""
    if not place.exists():
        os.rename(fresh, place)
        return
    os.chmod(fresh, stat.S_IMODE(place.stat().st_mode))
    aside = Path(tempfile.mkdtemp(dir=place.parent, prefix=f".{place.name[:40]}-", suffix=".old"))
    old = aside / place.name
    try:
        os.rename(place, old)
        try:
            os.rename(fresh, place)
        except BaseException:
            os.rename(old, place)
            raise
    finally:
        if place.exists():  # else what is aside is all there is
            shutil.rmtree(aside, ignore_errors=True)


@contextmanager
def _told(folder: Path, what: str) -> Iterator[None]:
    """What the system says against a place, as FileNotWritten."""
    try:
        yield
    except (OSError, ValueError) as error:  # ValueError: a name with a null character
        said = error.strerror if isinstance(error, OSError) and error.strerror else str(error)
        raise FileNotWritten(
            f"{what} could not be written.",
            where=str(folder),
            why=f"The system says: {said.rstrip('.')}.",
            do="Choose a folder on a disk with room that you may write to, and close the files where they are open.",
        ) from error
