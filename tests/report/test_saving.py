"""A print is saved whole or not at all."""

import os
import stat
from pathlib import Path

import pytest

from clinicalc.errors import FileNotWritten, PrintRefused
from clinicalc.report.pdf import save_report
from tests.report.printing import PRINTED, printed, with_band

OLDER = b"%PDF-1.4 an older print"


def test_the_saved_file_is_the_print(tmp_path: Path) -> None:
    path = tmp_path / "print.pdf"
    path.write_bytes(OLDER)
    save_report(path, with_band("Ottilie Fenn"), practice="Tarnwick Northgate", printed_at=PRINTED)
    assert path.read_bytes() == printed(with_band("Ottilie Fenn"))
    assert [entry.name for entry in tmp_path.iterdir()] == ["print.pdf"]


def test_a_place_that_does_not_exist_is_answered_in_words(tmp_path: Path) -> None:
    path = tmp_path / "absent" / "print.pdf"
    with pytest.raises(FileNotWritten) as refused:
        save_report(path, with_band())
    assert str(path) in str(refused.value)
    assert list(tmp_path.iterdir()) == []


def test_a_folder_in_the_place_of_the_file_stays_and_nothing_is_left(tmp_path: Path) -> None:
    folder = tmp_path / "print.pdf"
    folder.mkdir()
    with pytest.raises(FileNotWritten):
        save_report(folder, with_band())
    assert [entry.name for entry in tmp_path.iterdir()] == ["print.pdf"]
    assert list(folder.iterdir()) == []


def test_a_file_in_the_place_of_the_folder_is_answered_in_words(tmp_path: Path) -> None:
    (tmp_path / "file").write_bytes(b"")
    with pytest.raises(FileNotWritten):
        save_report(tmp_path / "file" / "print.pdf", with_band())


@pytest.mark.parametrize("name", ["a" * 300 + ".pdf", "nul\x00l.pdf"])
def test_a_name_that_the_system_does_not_take_is_answered_in_words(tmp_path: Path, name: str) -> None:
    with pytest.raises(FileNotWritten):
        save_report(tmp_path / name, with_band())
    assert list(tmp_path.iterdir()) == []


@pytest.mark.skipif(os.name != "posix" or os.geteuid() == 0, reason="the folder's rights do not bind this user")
def test_a_read_only_folder_is_answered_in_words(tmp_path: Path) -> None:
    tmp_path.chmod(stat.S_IRUSR | stat.S_IXUSR)
    try:
        with pytest.raises(FileNotWritten):
            save_report(tmp_path / "print.pdf", with_band())
        assert list(tmp_path.iterdir()) == []
    finally:
        tmp_path.chmod(stat.S_IRWXU)


def test_a_refused_print_leaves_the_older_file(tmp_path: Path) -> None:
    path = tmp_path / "print.pdf"
    path.write_bytes(OLDER)
    with pytest.raises(PrintRefused):
        save_report(path, with_band("\u4e2d"))
    assert path.read_bytes() == OLDER
    assert len(list(tmp_path.iterdir())) == 1


@pytest.mark.parametrize("content", [b'{"format": "clinicalc.coefficients/1"}', b"", b"%PDF", b" %PDF-1.4"])
def test_a_file_that_is_no_pdf_stays_as_it_is(tmp_path: Path, content: bytes) -> None:
    path = tmp_path / "print.pdf"
    path.write_bytes(content)
    with pytest.raises(FileNotWritten, match="is there already, and it is not a PDF"):
        save_report(path, with_band())
    assert path.read_bytes() == content
    assert [entry.name for entry in tmp_path.iterdir()] == ["print.pdf"]


@pytest.mark.parametrize("name", ["print", "model.json", "print.pdf.txt", ".pdf"])
def test_a_name_that_does_not_end_in_pdf_is_refused(tmp_path: Path, name: str) -> None:
    with pytest.raises(FileNotWritten, match=r"ends in \.pdf"):
        save_report(tmp_path / name, with_band())
    assert list(tmp_path.iterdir()) == []


def test_the_ending_may_be_in_capitals(tmp_path: Path) -> None:
    save_report(tmp_path / "PRINT.PDF", with_band())
    assert (tmp_path / "PRINT.PDF").read_bytes().startswith(b"%PDF-")


@pytest.mark.skipif(os.name != "posix", reason="pipes with names are of POSIX")
def test_a_pipe_stays_a_pipe_and_is_not_waited_for(tmp_path: Path) -> None:
    path = tmp_path / "print.pdf"
    os.mkfifo(path)
    with pytest.raises(FileNotWritten, match=r"This is a pipe \(FIFO\), not a PDF"):
        save_report(path, with_band())
    assert stat.S_ISFIFO(path.lstat().st_mode)


@pytest.mark.skipif(os.name != "posix", reason="links need a right of their own elsewhere")
@pytest.mark.parametrize("target", ["older.pdf", "absent.pdf"])
def test_a_link_stays_a_link_and_what_it_leads_to_stays(tmp_path: Path, target: str) -> None:
    (tmp_path / "older.pdf").write_bytes(OLDER)
    path = tmp_path / "print.pdf"
    path.symlink_to(tmp_path / target)
    with pytest.raises(FileNotWritten, match="This is a symbolic link, not a PDF"):
        save_report(path, with_band())
    assert path.is_symlink()
    assert (tmp_path / "older.pdf").read_bytes() == OLDER
    assert not (tmp_path / "absent.pdf").exists()


def test_a_folder_is_called_a_folder(tmp_path: Path) -> None:
    (tmp_path / "print.pdf").mkdir()
    with pytest.raises(FileNotWritten, match="This is a folder, not a PDF"):
        save_report(tmp_path / "print.pdf", with_band())


@pytest.mark.skipif(os.name != "posix", reason="devices are files on POSIX")
def test_a_device_stays_a_device(tmp_path: Path) -> None:
    """A device of the test's own: were the check broken, a privileged user would lose the system's."""
    path = tmp_path / "print.pdf"
    try:
        os.mknod(path, stat.S_IFCHR | 0o600, os.stat(os.devnull).st_rdev)
    except PermissionError:
        path = Path(os.devnull)  # a user who may not make a device may not replace one either
    with pytest.raises(FileNotWritten, match="This is a device, not a PDF"):
        save_report(path, with_band())
    assert stat.S_ISCHR(path.lstat().st_mode)
