"""The one reader of what ships beside the code: `resources/` and `example_models/`.

In a wheel both lie inside the package (`clinicalc/shipped/`); in a checkout they lie beside it. Nobody else builds
a path to either.
"""

from pathlib import Path

from clinicalc.errors import ShippedFileMissing

# a plain folder and not importlib.resources, which would cost every start 4 ms
_PACKAGE = Path(__file__).parent


def find_shipped(name: str) -> Path:
    """The shipped file or folder called `name`, such as "resources/units.json" or "example_models".

    Raises ShippedFileMissing when this installation does not have it.
    """
    for root in (_PACKAGE / "shipped", _PACKAGE.parent):
        found = root.joinpath(*name.split("/"))
        if found.is_file() or found.is_dir():
            return found
    raise ShippedFileMissing(
        f"the file {name} is missing from this installation.", do="Install clinicalc again from its wheel or checkout."
    )


def read_shipped(name: str) -> bytes:
    """The bytes of the shipped file called `name`."""
    return find_shipped(name).read_bytes()


def list_example_models() -> tuple[str, ...]:
    """The names of the shipped coefficient files, sorted, such as "tarnwick-cvd-10y.json"."""
    folder = find_shipped("example_models")
    return tuple(sorted(entry.name for entry in folder.iterdir() if entry.name.endswith(".json")))
