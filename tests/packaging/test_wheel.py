"""The wheel carries what the program reads, and both ways of installing find it.

Nothing here uses a network: the wheel is built by the build backend itself, and unpacked rather than installed.
"""

import json
import os
import subprocess
import sys
from pathlib import Path
from zipfile import ZipFile

import pytest

from clinicalc import __version__
from tests.packaging.checkout import ROOT

SHIPPED = ("resources", "example_models")

PATIENT = (
    "sex=female",
    "age=61",
    "total_cholesterol=180 mg/dL",
    "hdl_cholesterol=47 mg/dL",
    "systolic_bp=124",
    "bp_treated=no",
    "smoker=yes",
    "diabetes=no",
    "prior_cvd=no",
)
PATIENT_PROBABILITY = 0.1048
"""Worked by hand from the printed coefficients (doi:10.1161/CIRCULATIONAHA.107.699579), to four places."""

WHERE_AND_WHAT = """
import json, clinicalc
from clinicalc.resources import find_shipped, list_example_models, read_shipped
names = list_example_models()
print(json.dumps({
    "package": clinicalc.__file__,
    "folders": [str(find_shipped(name)) for name in ("resources", "example_models")],
    "models": {name: len(read_shipped("example_models/" + name)) for name in names},
    "units": len(read_shipped("resources/units.json")),
}))
"""


@pytest.fixture(scope="session")
def wheel(tmp_path_factory: pytest.TempPathFactory) -> Path:
    """The wheel of this checkout, built once for each worker into a temporary folder."""
    folder = tmp_path_factory.mktemp("wheel")
    build = [sys.executable, "-m", "hatchling", "build", "--target", "wheel", "--directory", str(folder)]
    done = subprocess.run(build, cwd=ROOT, capture_output=True, text=True)
    assert done.returncode == 0, done.stderr
    (built,) = folder.glob("*.whl")
    return built


@pytest.fixture(scope="session")
def unpacked(wheel: Path, tmp_path_factory: pytest.TempPathFactory) -> Path:
    """A folder with the wheel's content, as an installation lays it."""
    folder = tmp_path_factory.mktemp("unpacked")
    with ZipFile(wheel) as archive:
        archive.extractall(folder)
    return folder


@pytest.fixture(params=["wheel", "checkout"])
def home(request: pytest.FixtureRequest) -> Path:
    """The folder that `clinicalc` is imported from: the unpacked wheel, then the checkout."""
    if request.param == "checkout":
        return ROOT
    unpacked: Path = request.getfixturevalue("unpacked")
    return unpacked


def _run(home: Path, elsewhere: Path, *arguments: str) -> subprocess.CompletedProcess[str]:
    """A fresh interpreter in an empty folder that imports `clinicalc` from `home` before anywhere else."""
    environment = os.environ | {"PYTHONPATH": str(home), "QT_QPA_PLATFORM": "offscreen", "PYTHONDONTWRITEBYTECODE": "1"}
    command = [sys.executable, *arguments]
    return subprocess.run(
        command, cwd=elsewhere, env=environment, stdin=subprocess.DEVNULL, capture_output=True, text=True, timeout=120
    )


def _names(wheel: Path) -> list[str]:
    with ZipFile(wheel) as archive:
        return archive.namelist()


def _files_below(folder: Path) -> set[str]:
    return {
        path.relative_to(ROOT).as_posix()
        for path in folder.rglob("*")
        if path.is_file() and "__pycache__" not in path.parts
    }


def test_the_wheel_carries_every_file_of_both_shipped_folders(wheel: Path) -> None:
    carried = {name.removeprefix("clinicalc/shipped/") for name in _names(wheel) if "/shipped/" in name}
    assert carried == _files_below(ROOT / "resources") | _files_below(ROOT / "example_models")


def test_the_wheel_carries_every_module_and_the_type_marker(wheel: Path) -> None:
    carried = {name for name in _names(wheel) if name.startswith("clinicalc/") and "/shipped/" not in name}
    assert carried == _files_below(ROOT / "clinicalc")


def test_the_wheel_carries_no_tests_and_nothing_at_its_top_but_the_package(wheel: Path) -> None:
    tops = {name.partition("/")[0] for name in _names(wheel)}
    assert tops == {"clinicalc", f"clinicalc-{__version__}.dist-info"}
    assert not [name for name in _names(wheel) if "test_" in name or "__pycache__" in name]


def test_shipped_bytes_are_those_of_the_checkout(unpacked: Path) -> None:
    for name in sorted(_files_below(ROOT / "resources") | _files_below(ROOT / "example_models")):
        assert (unpacked / "clinicalc" / "shipped" / name).read_bytes() == (ROOT / name).read_bytes(), name


def test_resources_are_read_from_where_the_package_is(home: Path, tmp_path: Path) -> None:
    done = _run(home, tmp_path, "-c", WHERE_AND_WHAT)
    assert done.returncode == 0, done.stderr
    said = json.loads(done.stdout)
    assert Path(said["package"]).is_relative_to(home)
    assert [Path(folder).resolve().is_relative_to(home) for folder in said["folders"]] == [True, True]
    models = ROOT / "example_models"
    assert said["models"] == {path.name: path.stat().st_size for path in models.glob("*.json")}
    assert said["units"] == (ROOT / "resources" / "units.json").stat().st_size


def test_a_patient_is_assessed_from_an_empty_folder(home: Path, tmp_path: Path) -> None:
    shipped = home if home == ROOT else home / "clinicalc" / "shipped"
    file = shipped / "example_models" / "general-cvd-2008-lipids.json"
    done = _run(home, tmp_path, "-m", "clinicalc", "assess", str(file), *PATIENT, "--json")
    assert done.returncode == 0, done.stderr
    assert round(json.loads(done.stdout)["probability"], 4) == PATIENT_PROBABILITY
    assert list(tmp_path.iterdir()) == []


def test_an_editable_installation_points_at_the_checkout_and_copies_nothing(tmp_path: Path) -> None:
    build = "import sys, hatchling.build; print(hatchling.build.build_editable(sys.argv[1]))"
    done = subprocess.run([sys.executable, "-c", build, str(tmp_path)], cwd=ROOT, capture_output=True, text=True)
    assert done.returncode == 0, done.stderr
    (built,) = tmp_path.glob("*.whl")
    with ZipFile(built) as archive:
        (pointer,) = [name for name in archive.namelist() if ".dist-info/" not in name]
        assert Path(archive.read(pointer).decode().strip()).resolve() == ROOT
