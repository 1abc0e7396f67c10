"""Which tables can be scored, and in which forms the rows are written: told by the end of a file's name."""

from pathlib import Path

from clinicalc.cohort.frames import require
from clinicalc.errors import Problem, TableRefused, UsageError
from clinicalc.scoring.delimited_rows import DelimitedRows
from clinicalc.scoring.output_forms import DelimitedForm, OutputForm
from clinicalc.scoring.row_blocks import RowSource, Wanted

_TEXTS = {".csv": ",", ".tsv": "\t", ".txt": ","}


def open_source(path: Path) -> RowSource:
    """The table at `path`, its names read. Raises TableRefused, and OSError where it cannot be opened."""
    ending = path.suffix.lower()
    if ending in _TEXTS:
        return DelimitedRows(path)
    if ending == ".parquet":
        require(path, "pyarrow", "Parquet")
        from clinicalc.scoring.parquet_rows import ParquetRows

        return ParquetRows(path)
    why = f'Tables are scored from CSV, TSV and Parquet files, and the end of this name is "{ending}". Save it as CSV.'
    raise TableRefused(path.name, (Problem("", why),))


def open_form(out: Path, source: RowSource, wanted: Wanted) -> OutputForm:
    """The form of the output, by its name. Raises UsageError for another, TableRefused where pyarrow is lacking."""
    ending = out.suffix.lower()
    if ending == ".parquet":
        require(out, "pyarrow", "Parquet")
        from clinicalc.scoring.parquet_form import ParquetForm

        return ParquetForm({name: source.arrow_type(name) for name in wanted.keep})
    if ending not in _TEXTS:
        raise UsageError(f"{out.name} ends in none of .csv, .tsv and .parquet.", do="Name the output so.")
    return DelimitedForm(wanted.keep, _TEXTS[ending])
