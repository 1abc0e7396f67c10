"""A researcher with values missing, few events and two equations, who works by command and in the window, and errs."""

import errno
import os
import re
import signal
import subprocess
import sys
import time
from dataclasses import dataclass
from pathlib import Path

import numpy as np
import pytest
from pypdf import PdfReader
from PySide6.QtCore import Qt
from PySide6.QtWidgets import QPushButton
from pytestqt.qtbot import QtBot

from clinicalc.gui.file_choosing import FileChoices
from clinicalc.gui.main_window import MainWindow
from clinicalc.gui.page_tabs import Page
from clinicalc.gui.study.fitting_deed import FittingDeed
from clinicalc.gui.study.steps import Step
from clinicalc.gui.study.study_page import StudyPage
from tests.cli.calling import Ended, call
from tests.journeys.keyboard import ENTER, hit

PEOPLE = 500
LONG = 60_000
HEAD = """id = "few"
version = "0.1.0"
title = "Few events, invented"
outcome = "The invented event"

[source]
kind = "local"
citation = "Invented people, for a test."

[use]
population = "Nobody: the people are invented"
setting = "Tests"
not_for = ["any patient"]
not_used = ["everything else"]
cautions = ["Invented."]
plain = {outcome = "the invented event", cautions = ["Invented."]}
"""
PREDICTORS = """
[[predictors]]
id = "age"
label = "Age"
kind = "number"
quantity = "age"
unit = "a"
group = "Person"
outside_derivation = "caution"

[[predictors]]
id = "sex"
label = "Sex"
kind = "choice"
group = "Person"
choices = [{id = "female", label = "Female"}, {id = "male", label = "Male"}]

[[predictors]]
id = "systolic_bp"
label = "Systolic blood pressure"
kind = "number"
quantity = "systolic_bp"
unit = "mm[Hg]"
group = "Measured"
outside_derivation = "caution"

[[predictors]]
id = "rare"
label = "Has the rare trait"
kind = "yes_no"
group = "Measured"

[[predictors]]
id = "region"
label = "Region"
kind = "choice"
group = "Person"
choices = [{id = "north", label = "North"}, {id = "south", label = "South"}]
"""
TERMS = """terms = [
    {id = "age", product = [{of = "age", steps = [{subtract = 60}]}]},
    {id = "systolic_bp", product = [{of = "systolic_bp", steps = [{subtract = 130}, {divide = 10}]}]},
    {id = "rare", product = [{of = "rare"}]},
]
"""
BINARY = '{kind = "binary", column = "dead", event = "1", no_event = "0"}'
TIMES = '{kind = "time_to_event", time = "years", unit = "a", status = "status", event = "1", censored = "0"}'
FILLED = "\n[imputation]\nsets = 3\nrounds = 2\nseed = 5\n"


@dataclass(frozen=True, slots=True)
class Plan:
    """What a study file says; `two`: an equation for each sex, `separate`: nobody with the rare trait has the event."""

    kind: str = "logistic"
    outcome: str = BINARY
    estimate: str = ""
    methods: str = FILLED
    two: bool = False
    separate: bool = False
    measured: float = 0.9


def people_csv(plan: Plan) -> str:
    """Invented people: of everybody `plan.measured` have a pressure, nine in ten an answer about the rare trait."""
    draw = np.random.default_rng(20261202)
    lines = ["age,sex,systolic_bp,rare,region,years,entry,status,dead"]
    for place in range(PEOPLE):
        age, pressure = int(draw.integers(40, 85)), int(draw.normal(132, 16))
        rare = draw.random() < 0.12
        risk = np.exp(0.06 * (age - 60) + 0.015 * (pressure - 130) + 0.3 * rare)
        died, left = draw.exponential(18 / risk), draw.uniform(4, 12)
        entry = round(0.5 * min(died, left) * draw.random(), 4)
        event = died <= left and not (plan.separate and rare)
        dead = draw.random() < risk / (3 + risk) and not (plan.separate and rare)
        sex, region = ("female", "male")[place % 2], ("north", "south")[place % 3 == 0]
        known = pressure if draw.random() < plan.measured else ""
        answer = ("no", "yes")[rare] if draw.random() < 0.9 else ""
        years = max(min(died, left), 0.001)
        lines.append(f"{age},{sex},{known},{answer},{region},{years:.4f},{entry:.4f},{int(event)},{int(dead)}")
    return "\n".join(lines) + "\n"


def write_files(folder: Path, plan: Plan) -> Path:
    """The study file, its people beside it."""
    (folder / "people.csv").write_text(people_csv(plan), encoding="utf-8")
    equations = estimates = ""
    for id in ("female", "male") if plan.two else ("all",):
        applies = f'applies_when = {{sex = ["{id}"]}}\n' if plan.two else ""
        equations += (
            f'\n[[equations]]\nid = "{id}"\n{applies}competing_events = {{handled = "not_applicable"}}\n'
            f"horizons = [{{years = 5}}]\n{TERMS}"
        )
        estimates += f'\n[estimate.{id}]\nkind = "{plan.kind}"\n{plan.estimate}'
    sexes = PREDICTORS if plan.two else _without(PREDICTORS, "sex")
    predictors = sexes if "strata" in plan.estimate else _without(sexes, "region")
    cohort = f'\n[cohort]\nfile = "people.csv"\noutcome = {plan.outcome}\n'
    path = folder / "few.toml"
    path.write_text(HEAD + predictors + equations + cohort + estimates + plan.methods, encoding="utf-8")
    return path


def _without(predictors: str, id: str) -> str:
    return "".join(
        f"[[predictors]]{part}" for part in predictors.split("[[predictors]]") if part.strip() and f'"{id}"' not in part
    )


def fit(tmp_path: Path, plan: Plan, *words: str) -> Ended:
    """The study of that plan, fitted by command."""
    return call("fit", str(write_files(tmp_path, plan)), *words)


@pytest.mark.parametrize(
    ("plan", "values"),
    [
        (Plan("cox", TIMES, 'strata = "region"\n'), ("region=north",)),
        (Plan("cox", TIMES.replace("status =", 'entry = "entry", status =')), ()),
        (Plan(two=True), ("sex=male",)),
        (Plan("cox", TIMES, 'penalty = "ridge"\nridge_strength = 2\n', two=True), ("sex=female",)),
        (Plan(estimate='penalty = "firth"\n', separate=True), ()),
        (Plan(estimate='penalty = "ridge"\n', separate=True), ()),
    ],
    ids=("strata", "late-entry", "two", "two-with-ridge", "firth", "ridge"),
)
def test_filled_in_fitted_written_read_and_used(tmp_path: Path, plan: Plan, values: tuple[str, ...]) -> None:
    out, report = tmp_path / "few.json", tmp_path / "few.pdf"
    ended = fit(tmp_path, plan, "-o", str(out), "--report", str(report))
    assert ended.status == 0, ended.err
    assert ended.out.count("Filled in, 3 sets") == (2 if plan.two else 1)
    assert "filled in" in " ".join(page.extract_text() for page in PdfReader(report).pages)
    assert "multiple imputation" in call("inspect", str(out)).out
    used = call("assess", str(out), "age=62", "systolic_bp=141", "rare=no", *values)
    assert used.status == 0, used.err
    assert "95\u202f% band" in used.out
    assert "were filled in by multiple imputation" in " ".join(used.out.split())


def test_the_strength_that_is_said_is_that_of_every_set(tmp_path: Path) -> None:
    ended = fit(tmp_path, Plan(estimate='penalty = "ridge"\n', measured=0.5), "--json")
    assert ended.status == 0, ended.err
    penalty = ended.record["fits"][0]["penalty"]
    said = " ".join(ended.record["remarks"])
    assert penalty["strengths_over_sets"] is not None, "with these people the sets have strengths of their own"
    low, high = penalty["strengths_over_sets"]
    assert low <= penalty["strength"] <= high
    assert low < high
    assert f"with a ridge of strength {low:.3g} to {high:.3g} (" in said
    assert "weakest ridge that is tried" not in said or low <= 0.01


def test_a_share_filled_in_is_one_of_the_people_used(tmp_path: Path) -> None:
    path = write_files(tmp_path, Plan())
    lines = (tmp_path / "people.csv").read_text(encoding="utf-8").splitlines()
    unknown = [line[:-1] if place > 400 else line for place, line in enumerate(lines)]  # 100 without the outcome
    (tmp_path / "people.csv").write_text("\n".join(unknown) + "\n", encoding="utf-8")
    used = [line.split(",") for line in unknown[1:401]]
    share = sum(cells[2] == "" for cells in used) / len(used)
    out = tmp_path / "few.json"
    ended = call("fit", str(path), "-o", str(out))
    assert ended.status == 0, ended.err
    read = " ".join(call("inspect", str(out)).out.split())
    assert f"Systolic blood pressure ({100 * share:.1f} %)" in read.replace("\u202f", " ")
    assert "among the 400 people used" in read


def test_mostly_made_up_is_said(tmp_path: Path) -> None:
    said = " ".join(fit(tmp_path, Plan(measured=0.2)).out.split())
    assert "Most of its values are made up, then" in said
    assert said.count("Most of its values") == 1


def test_a_refusal_in_a_set_names_equation_set_trait_and_line_to_write(tmp_path: Path) -> None:
    ended = fit(tmp_path, Plan(two=True, separate=True), "-o", str(tmp_path / "few.json"))
    assert ended.status == 4
    for id in ("female", "male"):
        assert re.search(
            rf'estimate\.{id}: in set \d of the values filled in: "rare": none of the \d+ people', ended.err
        )
        assert f'Or say penalty = "firth" or penalty = "ridge" in [estimate.{id}]' in ended.err
    assert sorted(path.name for path in tmp_path.iterdir()) == ["few.toml", "people.csv"]


def test_two_values_that_nobody_has_both_of_are_not_filled_in(tmp_path: Path) -> None:
    path = write_files(tmp_path, Plan())
    lines = (tmp_path / "people.csv").read_text(encoding="utf-8").splitlines()
    apart = [lines[0]]
    for place, line in enumerate(lines[1:]):
        cells = line.split(",")
        cells[2 + place % 2] = ""
        apart.append(",".join(cells))
    (tmp_path / "people.csv").write_text("\n".join(apart) + "\n", encoding="utf-8")
    ended = call("fit", str(path))
    assert ended.status == 4
    assert '"rare" and "systolic_bp" are never both known of the same person (500 people)' in ended.err


@pytest.mark.parametrize("before", [b"", b"%PDF-1.4 an older one"])
def test_no_report_of_a_file_that_could_not_be_written(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch, before: bytes
) -> None:
    place, report = tmp_path / "elsewhere", tmp_path / "few.pdf"
    place.mkdir()
    if before:
        report.write_bytes(before)
    out, link = place / "few.json", os.link

    def fill_disk(source: str, target: str, **more: bool) -> None:
        if Path(target).parent == place:
            raise OSError(errno.ENOSPC, os.strerror(errno.ENOSPC))
        link(source, target, **more)

    rename = os.replace

    def fill_disk_again(source: str, target: str) -> None:
        if Path(target).parent == place:
            raise OSError(errno.ENOSPC, os.strerror(errno.ENOSPC))
        rename(source, target)

    monkeypatch.setattr(os, "link", fill_disk)
    monkeypatch.setattr(os, "replace", fill_disk_again)
    ended = fit(tmp_path, Plan(methods=""), "-o", str(out), "--report", str(report), "--replace")
    assert ended.status == 5
    assert os.strerror(errno.ENOSPC) in ended.err
    assert not list(place.iterdir())
    assert (report.read_bytes() if report.exists() else b"") == before


@pytest.mark.skipif(sys.platform == "win32", reason="no such interrupt there")
@pytest.mark.parametrize(
    "methods", ["\n[imputation]\nsets = 200\nrounds = 200\n", f"{FILLED}\n[bootstrap]\nreplicates = 5000\n"]
)
def test_interrupted_by_the_keyboard(tmp_path: Path, methods: str) -> None:
    study = write_files(tmp_path, Plan("cox", TIMES, methods=methods))
    words = [sys.executable, "-m", "clinicalc", "fit", str(study), "-o", "few.json", "--report", "few.pdf"]
    with subprocess.Popen(
        words, cwd=tmp_path, stdout=subprocess.PIPE, stderr=subprocess.PIPE, text=True, start_new_session=True
    ) as running:
        time.sleep(2.5)
        assert running.poll() is None
        os.killpg(running.pid, signal.SIGINT)
        _, said = running.communicate(timeout=30)
    assert running.returncode == 5
    assert "Stopped before the end; nothing was written." in said
    assert "Traceback" not in said
    assert sorted(path.name for path in tmp_path.iterdir()) == ["few.toml", "people.csv"]
    with pytest.raises(ProcessLookupError):  # nobody of the group is left
        os.killpg(running.pid, 0)


@pytest.fixture
def page(qtbot: QtBot) -> StudyPage:
    """The page Study of a window."""
    choices = FileChoices(which=lambda *_: None, where=lambda *_: None, folder=lambda _: None)
    window = MainWindow(choose_open=lambda _: None, choose_files=choices)
    qtbot.addWidget(window)
    window.resize(1280, 800)
    with qtbot.waitExposed(window):
        window.show()
    window.activateWindow()
    window.show_page(Page.STUDY)
    return window.others.study()


def rest(qtbot: QtBot, page: StudyPage) -> None:
    """Until nothing is being done any more."""
    qtbot.waitUntil(lambda: not page.errands.is_busy, timeout=LONG)


def open_study(qtbot: QtBot, page: StudyPage, study: Path) -> None:
    """The page with that study open."""
    page.work.open_study(study)
    rest(qtbot, page)
    assert page.state.not_opened is None, page.sheet.words


@pytest.mark.gui
def test_an_imputation_is_cancelled_in_the_window(qtbot: QtBot, page: StudyPage, tmp_path: Path) -> None:
    open_study(qtbot, page, write_files(tmp_path, Plan(methods="\n[imputation]\nsets = 200\nrounds = 200\n")))
    told: list[str] = []
    page.errands.moved.connect(lambda progress: told.append(progress.words))
    page.work.fit()
    qtbot.waitUntil(lambda: any("Filling in values for all" in words for words in told), timeout=LONG)
    qtbot.waitUntil(page.strip.cancel.isVisible, timeout=LONG)
    page.strip.cancel.setFocus()
    hit(Qt.Key.Key_Space)
    rest(qtbot, page)
    assert page.state.fit is None
    assert "The fit was stopped" in page.strip.words.text()


@pytest.mark.gui
def test_each_of_two_equations_is_offered_its_penalty(qtbot: QtBot, page: StudyPage, tmp_path: Path) -> None:
    open_study(qtbot, page, write_files(tmp_path, Plan(two=True, separate=True)))
    page.work.fit()
    rest(qtbot, page)
    assert page.state.fit is None
    assert page.step is Step.FIT
    offers = [each for each in page.sheet.findChildren(QPushButton) if "penalty" in each.text()]
    assert [each.text().replace("&", "") for each in offers] == [
        "Fit female with Firth’s penalty…",
        "Fit female with a ridge penalty…",
        "Fit male with Firth’s penalty…",
        "Fit male with a ridge penalty…",
    ]
    offers[2].setFocus()
    hit(ENTER)
    rest(qtbot, page)
    deed = page.right.currentWidget()
    assert isinstance(deed, FittingDeed)
    assert deed.penalty.chooser.hasFocus()
    hit(Qt.Key.Key_Return)
    deed.ask()
    assert page.state.draft is not None
    assert page.state.draft.tree["estimate"] == {
        "female": {"kind": "logistic"},
        "male": {"kind": "logistic", "penalty": "firth", "covariance": "model"},
    }
    assert "of the others only a penalty that was offered" in page.sheet.words
