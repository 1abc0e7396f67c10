"""The tables of a validation read back: every figure to its last bit, nothing for none, whole or not at all."""

import csv
import math
from collections.abc import Callable
from dataclasses import replace
from io import StringIO
from pathlib import Path

import pytest

from clinicalc.errors import FileNotWritten
from clinicalc.operations.validation_tables import (
    TABLES,
    require_tables_place,
    tabulate_validation,
    write_validation_tables,
)
from clinicalc.validation.validated import GroupFigures, HorizonValidation, Measure, Validation
from tests.operations.reported_validations import answered, competed, scarce, timed

KINDS = [timed, competed, answered, scarce]
Line = dict[str, str]


def read(validation: Validation, name: str) -> list[Line]:
    text = tabulate_validation(validation)[f"{name}.csv"].decode("utf-8")
    return list(csv.DictReader(StringIO(text)))


def number(cell: str) -> float | None:
    return float(cell) if cell else None


def known(value: float | None) -> float | None:
    return None if value is None or not math.isfinite(value) else value


def at(lines: list[Line], horizon: HorizonValidation) -> list[Line]:
    """The lines of one horizon."""
    wanted = ("", "") if horizon.span is None else (f"{horizon.span.time:g}", horizon.span.unit)
    return [line for line in lines if (line["horizon"], line["unit"]) == wanted]


def assert_measure(line: Line, measure: Measure) -> None:
    assert number(line["value"]) == known(measure.value)
    assert number(line["lower"]) == measure.lower
    assert number(line["upper"]) == measure.upper
    assert line["level"] == ("" if measure.lower is None else "0.95")
    assert line["why"] == measure.why
    assert line["method"] == ("" if measure.method == "none" else measure.method.value)
    assert line["interval"] == ("" if measure.interval == "none" else measure.interval.value)


@pytest.mark.parametrize("make", KINDS)
def test_every_measure(make: Callable[[], Validation]) -> None:
    validation = make()
    lines = read(validation, "measures")
    for horizon in validation.horizons:
        found = {line["measure"]: line for line in at(lines, horizon)}
        for name in ("observed", "observed_to_expected", "intercept", "slope", "c", "uno", "auc", "brier"):
            assert_measure(found.pop(name), getattr(horizon, name))
        assert_measure(found.pop("scaled_brier"), horizon.scaled_brier)
        assert_measure(found.pop("ici"), horizon.ici)
        for name in ("people", "events", "competing", "expected", "brier_null"):
            assert number(found.pop(name)["value"]) == getattr(horizon, name)
        indices = horizon.calibration.indices
        if indices is not None:
            for name in ("e50", "e90", "emax"):
                assert number(found[name]["value"]) == getattr(indices, name)
                assert_measure(found.pop(name), getattr(horizon, name))
            limits = horizon.calibration.limits
            assert limits is not None
            assert number(found.pop("ici_by_chance")["value"]) == limits.chance
            assert number(found.pop("ici_by_chance_95th")["value"]) == limits.chance_bound
        assert not found
    assert sum(len(at(lines, horizon)) for horizon in validation.horizons) == len(lines)


@pytest.mark.parametrize("make", KINDS)
def test_every_group(make: Callable[[], Validation]) -> None:
    validation = make()
    lines = read(validation, "groups")
    assert len(lines) == 5 * len(validation.groups)
    for place, group in enumerate(validation.groups):
        own = lines[5 * place : 5 * place + 5]
        assert {(x["by"], x["group"], x["people"], x["events"]) for x in own} == {_named(group)}
        found = {line["measure"]: line for line in own}
        for name in ("observed", "observed_to_expected", "slope", "c"):
            assert_measure(found[name], getattr(group, name))
        assert number(found["expected"]["value"]) == known(group.expected)


def _named(group: GroupFigures) -> tuple[str, str, str, str]:
    return group.by, group.level, str(group.people), str(group.events)


@pytest.mark.parametrize("make", KINDS)
def test_every_tenth_and_every_place_of_the_curve(make: Callable[[], Validation]) -> None:
    validation = make()
    tenths, places = read(validation, "tenths"), read(validation, "curve")
    for horizon in validation.horizons:
        calibration = horizon.calibration
        own = at(tenths, horizon)
        for number_, (line, group) in enumerate(zip(own, calibration.groups, strict=True), 1):
            assert (line["tenth"], line["people"], line["events"]) == (
                str(number_), str(group.people), str(group.events)
            )  # fmt: skip
            for name in ("predicted", "observed", "lower", "upper"):
                assert number(line[name]) == getattr(group, name)
            assert line["method"] == calibration.observed.value
        along = at(places, horizon)
        curve = calibration.curve
        if curve is None:
            assert along == []
            continue
        assert [number(line["predicted"]) for line in along] == curve.predicted.tolist()
        assert [number(line["observed"]) for line in along] == curve.observed.tolist()
        assert {line["smoother"] for line in along} == {curve.smoother.value}
        for name, limit in (("lower", curve.lower), ("upper", curve.upper)):
            assert [number(line[name]) for line in along] == ([None] * len(along) if limit is None else limit.tolist())


@pytest.mark.parametrize("make", KINDS)
def test_every_decision_and_every_place_of_net_benefit(make: Callable[[], Validation]) -> None:
    validation = make()
    lines, places = read(validation, "decisions"), read(validation, "net_benefit")
    for horizon in validation.horizons:
        own = at(lines, horizon)
        assert len(own) == 8 * len(horizon.decisions)
        for one in horizon.decisions:
            found = {line["measure"]: line for line in own if float(line["point"]) == one.point}
            assert {(line["label"], line["flagged"]) for line in found.values()} == {(one.label, str(one.flagged))}
            assert_measure(found["flagged_share"], one.flagged_share)
            assert_measure(found["sensitivity"], one.sensitivity)
            assert_measure(found["specificity"], one.specificity)
            assert_measure(found["positive_predictive_value"], one.positive_value)
            assert_measure(found["negative_predictive_value"], one.negative_value)
            assert number(found["missed_of_100"]["value"]) == one.missed
            assert number(found["net_benefit"]["value"]) == one.net_benefit
            assert number(found["net_benefit_on_everyone"]["value"]) == one.treat_all
        curve = horizon.net_benefit
        assert curve is not None
        along = at(places, horizon)
        assert [number(line["point"]) for line in along] == curve.points.tolist()
        assert [number(line["by_model"]) for line in along] == [known(each) for each in curve.by_model.tolist()]
        assert [number(line["on_everyone"]) for line in along] == curve.treat_all.tolist()


def test_where_everybody_went_and_what_was_found() -> None:
    validation = timed()
    count = validation.count
    steps = [(line["step"], line["of"], int(line["people"])) for line in read(validation, "people")]
    assert steps == [
        ("in_file", "", 3200),
        ("excluded", "prior_cvd", 88),
        ("not_covered", "", 7),
        ("no_outcome", "", 41),
        ("missing", "", 60),
        ("missing_value", "hdl_cholesterol", 45),
        ("missing_value", "egfr", 21),
        ("refused", "", 4),
        ("refused_value", "systolic_bp", 3),
        ("refused_value", "total_cholesterol", 2),
        ("used", "", count.used),
        ("beyond_derivation", "age", 31),
    ]
    faults = read(validation, "faults")
    assert [(x["kind"], x["of"], x["answer"], float(x["p"]), x["sentence"]) for x in faults] == [
        (one.kind.value, one.at, one.level, one.p, one.sentence) for one in validation.faults
    ]
    about = [(line["what"], line["text"]) for line in read(validation, "about")]
    assert ("fingerprint", validation.fingerprint) in about
    assert [text for what, text in about if what == "verdict"] == list(validation.verdict)


def test_digits_are_plain() -> None:
    for name, data in tabulate_validation(timed()).items():
        assert not data.startswith(b"\xef\xbb\xbf")
        for row in csv.reader(StringIO(data.decode("utf-8"))):
            for cell in row:
                assert "\u202f" not in cell or name in ("about.csv", "faults.csv"), (name, cell)
    p = read(timed(), "faults")[0]["p"]
    assert p == "0.000000002"


def test_no_text_runs_as_a_formula_in_a_spreadsheet() -> None:
    """Texts that begin as formulas do: OWASP, "CSV injection", the list of = + - @, tab and carriage return."""
    texts = ('=HYPERLINK("x")', "+44 practice", "-2+3", "@SUM(A1)", "\t=1", "-9", "+1.5", "a=b", "")
    whole = timed()
    groups = tuple(replace(whole.groups[0], level=text) for text in texts)
    lines = read(replace(whole, groups=groups, cohort="=1+1"), "groups")
    shown = [line["group"] for line in lines[::5]]
    # a code that is a plain number is one to a spreadsheet too
    assert shown == ['\'=HYPERLINK("x")', "'+44 practice", "'-2+3", "'@SUM(A1)", "'\t=1", "-9", "+1.5", "a=b", ""]
    about = read(replace(whole, cohort="=1+1"), "about")
    assert [line["text"] for line in about if line["what"] == "cohort"] == ["'=1+1"]
    # figures stay numbers, those below nought too
    intercepts = [line["value"] for line in read(whole, "measures") if line["measure"] == "scaled_brier"]
    assert all(float(cell) for cell in intercepts)
    below = [line["lower"] for line in read(scarce(), "measures") if line["lower"].startswith("-")]
    assert below
    assert all(float(cell) < 0 for cell in below)


def test_all_of_them_are_put_in_the_folder(tmp_path: Path) -> None:
    folder = tmp_path / "tables"
    require_tables_place(folder)
    write_validation_tables(folder, timed())
    assert {path.name for path in folder.iterdir()} == set(TABLES)
    assert {path.name: path.read_bytes() for path in folder.iterdir()} == tabulate_validation(timed())
    assert list(tmp_path.iterdir()) == [folder]
    with pytest.raises(FileNotWritten, match="holds such files already"):
        write_validation_tables(folder, competed())
    write_validation_tables(folder, competed(), replace=True)
    assert {path.name: path.read_bytes() for path in folder.iterdir()} == tabulate_validation(competed())
    assert list(tmp_path.iterdir()) == [folder]
