"""Every error this program raises on purpose, in one tree.

    ClinicalcError
    ├── UsageError              a key, option, recalibration or horizon that does not exist        exit 2
    ├── CoefficientFileRefused  a coefficient file that may not be used; carries all its problems   exit 4
    ├── UnitError               a unit or quantity that the table does not have, or that does not convert
    ├── PrintRefused            a text that cannot be printed faithfully
    ├── DescriptionRefused      a description or fit from which no coefficient file can be made; all problems   exit 4
    ├── ValidationRefused       a validation file, or people, from which no validation is made; all problems   exit 4
    ├── TableRefused            a table of people that cannot be read as one; all its problems   exit 4
    ├── ReconstructionRefused   a band that cannot be rebuilt from what was printed; all that is lacking    exit 4
    ├── FitRefused              a model that these people do not let be estimated: a code, the columns   exit 4
    ├── LibraryError            something about the model library, its records or its keys   exit 6
    │   ├── LibraryUnreachable  its folder cannot be read or written at this moment; nothing was changed
    │   ├── NotInUse            a model that the library does not let be used now: no number   exit 3
    │   ├── SignatureRefused    a signature that does not count, with the reason
    │   └── KeyRefused          a key, key file or passphrase that may not be used
    ├── Stopped                 long work that whoever had begun it stopped; nothing half-done is left
    ├── FileNotWritten          an output file that could not be written; nothing half-written is left
    └── ShippedFileMissing      an installation that lacks a file it needs

What a person types about a patient never raises: it becomes a finding (room `assessment`).
"""

from dataclasses import dataclass


class ClinicalcError(Exception):
    """What happened, where, why, and what to do next; the parts read as one text in that order."""

    exit_status = 5

    def __init__(self, what: str, *, where: str = "", why: str = "", do: str = "") -> None:
        self.what = what
        self.where = where
        self.why = why
        self.do = do
        super().__init__(what, where, why, do)

    def __reduce__(self) -> tuple[object, ...]:
        return _rebuild, (type(self), self.args, self.__dict__)

    def __str__(self) -> str:
        head = f"{self.where}: {self.what}" if self.where else self.what
        return " ".join(part for part in (head, self.why, self.do) if part)


def _rebuild(kind: type[ClinicalcError], args: tuple[object, ...], state: dict[str, object]) -> ClinicalcError:
    """The error again in another process; its parts are keywords, which pickling alone would lose."""
    error = kind.__new__(kind, *args)
    error.args = args
    error.__dict__.update(state)
    return error


class UsageError(ClinicalcError):
    """The words of a call name something that is not there."""

    exit_status = 2


@dataclass(frozen=True, slots=True)
class Problem:
    """One fault of a coefficient file: `path` is a JSON Pointer into it ("" for the file itself).

    `offers` are the penalties that would give a fit which has no estimate without one, for a window to offer.
    """

    path: str
    message: str
    offers: tuple[str, ...] = ()

    def __str__(self) -> str:
        return f"{self.path}: {self.message}" if self.path else self.message


class CoefficientFileRefused(ClinicalcError):
    """A coefficient file that may not be used, with every problem found in it."""

    exit_status = 4

    def __init__(self, name: str, problems: tuple[Problem, ...]) -> None:
        self.name = name
        self.problems = problems
        count = "1 problem" if len(problems) == 1 else f"{len(problems)} problems"
        super().__init__(f"this coefficient file is refused ({count}).", where=name)

    def __str__(self) -> str:
        return "\n".join([super().__str__(), *(str(problem) for problem in self.problems)])


class DescriptionRefused(ClinicalcError):
    """A description or a fit from which no coefficient file can be made, with every problem found."""

    exit_status = 4

    def __init__(self, name: str, problems: tuple[Problem, ...]) -> None:
        self.name = name
        self.problems = problems
        count = "1 problem" if len(problems) == 1 else f"{len(problems)} problems"
        super().__init__(f"no coefficient file is made from this ({count}); nothing was written.", where=name)

    def __str__(self) -> str:
        return "\n".join([super().__str__(), *(str(problem) for problem in self.problems)])


class ValidationRefused(ClinicalcError):
    """A validation file, or people, from which no validation is made, with every problem found."""

    exit_status = 4

    def __init__(self, name: str, problems: tuple[Problem, ...]) -> None:
        self.name = name
        self.problems = problems
        count = "1 problem" if len(problems) == 1 else f"{len(problems)} problems"
        super().__init__(f"no validation is made from this ({count}).", where=name)

    def __str__(self) -> str:
        return "\n".join([super().__str__(), *(str(problem) for problem in self.problems)])


class TableRefused(ClinicalcError):
    """A file that cannot be read as a table of people, with every problem found; a path names a line of it."""

    exit_status = 4

    def __init__(self, name: str, problems: tuple[Problem, ...]) -> None:
        self.name = name
        self.problems = problems
        count = "1 problem" if len(problems) == 1 else f"{len(problems)} problems"
        super().__init__(f"this table is not read ({count}).", where=name)

    def __str__(self) -> str:
        return "\n".join([super().__str__(), *(str(problem) for problem in self.problems)])


class ReconstructionRefused(ClinicalcError):
    """A band that cannot be rebuilt from what a paper prints, with everything that is lacking or cannot be."""

    exit_status = 4

    def __init__(self, problems: tuple[Problem, ...]) -> None:
        self.problems = problems
        count = "1 problem" if len(problems) == 1 else f"{len(problems)} problems"
        super().__init__(f"the band cannot be rebuilt from the printed figures ({count}).")

    def __str__(self) -> str:
        return "\n".join([super().__str__(), *(str(problem) for problem in self.problems)])


class FitRefused(ClinicalcError):
    """A model that cannot be estimated: `code` says why, `columns` (places from 0) which columns are at fault.

    Columns have no names where it is raised; whoever knows them words the sentence anew from `code` and `columns`.
    """

    exit_status = 4

    def __init__(self, code: str, what: str, columns: tuple[int, ...] = ()) -> None:
        self.code = code
        self.columns = columns
        named = ", ".join(str(column + 1) for column in columns[:10])
        more = f" and {len(columns) - 10} more" if len(columns) > 10 else ""
        at = f" (column{'' if len(columns) == 1 else 's'} {named}{more})" if columns else ""
        super().__init__(f"{what}{at}.")


class UnitError(ClinicalcError):
    """A unit or quantity that is not in the table, or two units that do not convert into each other."""


class PrintRefused(ClinicalcError):
    """A text that the print could only show wrongly."""


class LibraryError(ClinicalcError):
    """Something about the model library, its records or its keys."""

    exit_status = 6


class LibraryUnreachable(LibraryError):
    """The library's folder cannot be read or written now: not there, not permitted, no room, a share that is gone."""


class NotInUse(LibraryError):
    """A model that the library does not let be used at the bedside now; there is no number.

    `standing` is the code of where it stands, such as "withdrawn".
    """

    exit_status = 3

    def __init__(self, what: str, *, where: str = "", why: str = "", do: str = "", standing: str = "") -> None:
        self.standing = standing
        super().__init__(what, where=where, why=why, do=do)


class SignatureRefused(LibraryError):
    """A signature that does not count: its form, its header, its key, or the bytes it is over."""


class KeyRefused(LibraryError):
    """A key, a key file or a passphrase that may not be used."""


class Stopped(ClinicalcError):
    """Long work was stopped by whoever had begun it."""


class FileNotWritten(ClinicalcError):
    """An output file that could not be written."""


class ShippedFileMissing(ClinicalcError):
    """A file that belongs to the program is not where the program is installed."""
