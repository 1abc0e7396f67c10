"""A report that was written is taken back where the file that it tells of could not be."""

from collections.abc import Iterator
from contextlib import contextmanager, suppress
from pathlib import Path

from clinicalc.replacement import replace_file


@contextmanager
def undone_if_refused(report: Path | None) -> Iterator[None]:
    """What stood at the report's place stands there again where what is done inside fails; None for no report."""
    before = report.read_bytes() if report is not None and report.is_file() else None
    try:
        yield
    except BaseException:
        with suppress(OSError):
            if report is not None and before is None:
                report.unlink(missing_ok=True)
            elif report is not None and before is not None and report.read_bytes() != before:
                replace_file(report, before)
        raise
