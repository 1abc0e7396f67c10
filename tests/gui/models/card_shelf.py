"""Cards of a real library in every standing, made once: an invented practice with versions of shipped files."""

import os
from collections.abc import Callable, Mapping
from dataclasses import dataclass
from datetime import datetime, timedelta
from pathlib import Path

import pytest

from clinicalc.library.machine import this_machine
from clinicalc.library.opening import OpenedLibrary
from clinicalc.operations.course import Course
from clinicalc.operations.library_reading import now
from clinicalc.operations.model_card import ModelCard
from clinicalc.operations.version_difference import VersionDifference
from clinicalc.operations.vetting_desk import VettingDesk
from tests.cli.calling import Ended, example
from tests.cli.practices import FINGERPRINT, TARNWICK, found_practice
from tests.library.versions import Tree, proved

POOLED = "ascvd-2013-pooled-cohort"


@dataclass(frozen=True, slots=True)
class CardShelf:
    """Cards by what they are cards of, the difference between the version in use and the waiting one, the library."""

    cards: Mapping[str, ModelCard]
    difference: VersionDifference
    opened: OpenedLibrary


def make_shelf(folder: Path) -> CardShelf:
    """1.0.0 is withdrawn, 1.2.0 in use, 1.3.0 waits, 1.4.0 is only looked at; and 1.2.0 held, overdue and refused."""
    with pytest.MonkeyPatch.context() as patch:
        in_use = fill_practice(folder, patch)
        opened = VettingDesk().read(Course()).opened
        return CardShelf(_cards(folder, in_use), _difference(in_use), opened)


def fill_practice(folder: Path, patch: pytest.MonkeyPatch) -> str:
    """A practice with the versions that are named above, before anything happens to 1.2.0; its fingerprint."""
    desk = found_practice(folder, patch)
    for version, factor in (("1.2.0", 1.01), ("1.3.0", 1.04), ("1.4.0", 1.2)):
        (folder / f"{version}.json").write_bytes(proved(TARNWICK, _version(version, factor)))
    _good(desk.install())
    _good(desk.approve("--fingerprint", FINGERPRINT))
    _good(desk.library("withdraw", TARNWICK, "--key", desk.key("ada"), "--reason", "A newer version is in use"))
    _good(desk.install(os.fspath(folder / "1.2.0.json")))
    in_use = fingerprint_of("1.2.0")
    _good(desk.approve("--fingerprint", in_use, model=in_use))
    _good(desk.install(os.fspath(folder / "1.3.0.json")))
    _good(desk.install(example(POOLED)))
    return in_use


def card_of(fingerprint: str, clock_ahead: timedelta = timedelta()) -> ModelCard:
    """The card of a model as it is read now, or by a clock that is ahead."""
    desk = VettingDesk(this_machine, lambda: now() + clock_ahead)
    return desk.card(desk.read(Course()), fingerprint, Course())


def _cards(folder: Path, in_use: str) -> Mapping[str, ModelCard]:
    desk = VettingDesk()
    cards = {
        "in use": card_of(in_use),
        "waiting": card_of(fingerprint_of("1.3.0")),
        "withdrawn": card_of(FINGERPRINT),
        "unconfirmed": card_of(fingerprint_of("1.0.0", POOLED)),
        "candidate": desk.look_at(folder / "1.4.0.json", Course()),
    }
    desk.hold(in_use, "its numbers look odd")
    cards["held"] = card_of(in_use)
    desk.release(in_use)
    (file,) = (folder / "library" / "models").glob(f"{in_use}*")
    content = file.read_bytes()
    file.chmod(0o600)
    file.write_bytes(content.replace(b"1.2.0", b"1.2.1"))
    cards["refused"] = card_of(in_use)
    file.write_bytes(content)
    cards["overdue"] = card_of(in_use, timedelta(days=400))
    return cards


def _difference(in_use: str) -> VersionDifference:
    # the clock was ahead when the library was last opened: by one further ahead nothing is wrong
    desk = VettingDesk(this_machine, lambda: datetime.now().astimezone() + timedelta(days=401))
    return desk.difference(desk.read(Course()), in_use, fingerprint_of("1.3.0"), Course())


def fingerprint_of(version: str, id: str = TARNWICK) -> str:
    """Of a version in the library that this machine has joined."""
    opened = VettingDesk().read(Course()).opened
    return next(state.fingerprint for state in opened.models if state.version == version and state.id == id)


def _version(version: str, factor: float) -> Callable[[Tree], None]:
    def change(model: Tree) -> None:
        model["version"] = version
        model["title"] = "Tarnwick cardiovascular, lipid form"
        model["use"]["cautions"] = [*model["use"]["cautions"], f"Read with care from {version} on."]
        for equation in model["equations"]:
            for term in equation["terms"][:3]:
                term["coefficient"] = round(term["coefficient"] * factor, 4)
        if version == "1.3.0":
            model["decision_points"] = [
                *model["decision_points"],
                {"probability": 0.2, "label": "Second look", "source": "Tarnwick partners’ meeting"},
            ]

    return change


def _good(ended: Ended) -> None:
    assert ended.status == 0, ended.err
