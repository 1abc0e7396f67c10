"""`clinicalc score`: a table as a user scores it, row by row what `assess` says, and whole or not at all."""

import os
import sys
from collections import Counter
from pathlib import Path

import pyarrow as pa
import pyarrow.parquet as pq
import pytest

from tests.cli.calling import call, example
from tests.scoring.tables import FIELDS, invent_rows, left_in, odd_rows, rows_of, write_rows

COX = example("tarnwick-cvd-10y-cox")
RESULTS = ["probability", "lower", "upper", "equation", "stops", "cautions", "notes"]


@pytest.fixture
def table(tmp_path: Path) -> Path:
    """Ordinary rows with the odd ones among them."""
    return write_rows(tmp_path / "people.csv", [*invent_rows(60), *odd_rows(), *invent_rows(20, seed=3)])


def test_every_row_is_what_assess_says(table: Path, tmp_path: Path) -> None:
    """Number and band to the last bit, equation, and the codes of every finding.

    But for those said with every number, and that about decision points, which belongs to what stands beside a number.
    """
    out = tmp_path / "scored.csv"
    ended = call("score", COX, str(table), "-o", str(out), "--keep", "person", "--keep", "practice", "--json")
    assert ended.status == 0, ended.err
    once = {(one["code"], one["field"] or "") for one in ended.record["findings"]}
    given, scored = rows_of(table), rows_of(out)
    assert len(given) == len(scored)
    assert list(scored[0]) == ["person", "practice", *RESULTS]
    once.add(("decision_point", ""))
    stops: Counter[str] = Counter()
    for row, found in zip(given, scored, strict=True):
        words = [f"{id}={row[id]}" for id in FIELDS]
        record = call("assess", COX, *words, "--json").record
        assert (found["person"], found["practice"]) == (row["person"], row["practice"])
        band = record["band"] or {"lower": None, "upper": None}
        for name, figure in (("probability", record["probability"]), *((one, band[one]) for one in ("lower", "upper"))):
            assert (float(found[name]) if found[name] else None) == figure, (row, name)
        for grade in ("stop", "caution", "note"):
            said = {(one["code"], one["field"] or "") for one in record["findings"] if one["grade"] == grade}
            codes = {":".join(filter(None, pair)) for pair in said - once}
            assert set(found[f"{grade}s"].split()) == codes, (row, grade)
        stops.update(found["stops"].split())
    assert ended.record["stops"] == dict(stops)
    assert ended.record["rows"] == len(given)
    assert ended.record["with_number"] == sum(bool(row["probability"]) for row in scored)
    assert left_in(tmp_path) == {"people.csv", "scored.csv"}


def test_numbers_are_the_shortest_that_read_back(table: Path, tmp_path: Path) -> None:
    out = tmp_path / "scored.csv"
    assert call("score", COX, str(table), "-o", str(out)).status == 0
    for row in rows_of(out):
        for name in ("probability", "lower", "upper"):
            assert not row[name] or repr(float(row[name])) == row[name]


def test_the_summary(table: Path, tmp_path: Path) -> None:
    ended = call("score", COX, str(table), "-o", str(tmp_path / "scored.csv"))
    assert "Not vetted: for trying out, not for a patient." in ended.out
    assert "103 rows scored into" in ended.out
    assert "Age: no value (missing:age)" in ended.out
    assert ended.out.count("It is invented; its numbers are true of nobody") == 1


def test_forms_hold_the_same(table: Path, tmp_path: Path) -> None:
    """CSV, TSV and Parquet in and out: the same texts and numbers."""
    given = rows_of(table)
    pq.write_table(pa.Table.from_pylist(given), tmp_path / "people.parquet")
    write_rows(tmp_path / "people.tsv", given, "\t", "utf-16")
    call("score", COX, str(table), "-o", str(tmp_path / "a.csv"))
    first = rows_of(tmp_path / "a.csv")
    for name in ("people.parquet", "people.tsv"):
        assert call("score", COX, str(tmp_path / name), "-o", str(tmp_path / "b.csv"), "--replace").status == 0
        assert (tmp_path / "b.csv").read_bytes() == (tmp_path / "a.csv").read_bytes()
        ended = call("score", COX, str(tmp_path / name), "-o", str(tmp_path / "b.parquet"), "--replace")
        assert ended.status == 0, ended.err
        for row, found in zip(first, pq.read_table(tmp_path / "b.parquet").to_pylist(), strict=True):
            numbers = {one: float(row[one]) if row[one] else None for one in RESULTS[:3]}
            assert found == {**row, **numbers}


def test_columns_of_a_parquet_file_keep_their_types(tmp_path: Path) -> None:
    rows = invent_rows(50)
    columns = {id: [row[id] for row in rows] for id in FIELDS}
    typed = pa.table(
        columns
        | {
            "age": pa.array([int(one) for one in columns["age"]], pa.int8()),
            "total_cholesterol": pa.array([float(one) for one in columns["total_cholesterol"]], pa.float32()),
            "smoker": pa.array([one == "yes" for one in columns["smoker"]]),
            "sex": pa.array(columns["sex"]).dictionary_encode(),
            "number": pa.array(range(50), pa.int32()),
        }
    )
    pq.write_table(typed, tmp_path / "typed.parquet")
    write_rows(tmp_path / "texts.csv", rows)
    words = ("-o", str(tmp_path / "typed-out.parquet"), "--keep", "number", "--keep", "sex")
    ended = call("score", COX, str(tmp_path / "typed.parquet"), *words)
    assert ended.status == 0, ended.err
    call("score", COX, str(tmp_path / "texts.csv"), "-o", str(tmp_path / "texts-out.csv"))
    found = pq.read_table(tmp_path / "typed-out.parquet")
    assert found.schema.field("number").type == pa.int32()
    assert found["sex"].to_pylist() == columns["sex"]
    assert found["probability"].to_pylist() == [
        float(row["probability"]) for row in rows_of(tmp_path / "texts-out.csv")
    ]


def test_columns_as_a_study_names_them(tmp_path: Path) -> None:
    """The Tarnwick cohort by its own study: 0 and 1 are no and yes, and a unit and signs of answers are taken."""
    folder = Path(COX).parent
    study, cohort = folder / "tarnwick-cvd-10y-cox.toml", folder / "tarnwick-cohort.csv"
    out = tmp_path / "scored.csv"
    words = ("prior_cvd=no", "-o", str(out), "--columns", str(study), "--keep", "person", "--json")
    ended = call("score", COX, str(cohort), *words)
    assert ended.status == 0, ended.err
    given, scored = rows_of(cohort), rows_of(out)
    assert len(given) == len(scored)
    complete = next(number for number, row in enumerate(scored) if row["probability"])
    row = given[complete]
    no_yes = {"0": "no", "1": "yes"}
    typed = {
        "prior_cvd": "no",
        "age": row["age"],
        "sex": {"F": "female", "M": "male"}[row["sex"]],
        "systolic_bp": row["sbp"],
        "bp_treated": no_yes[row["bp_tablets"]],
        "total_cholesterol": row["chol"],
        "hdl_cholesterol": row["hdl"],
        "egfr": row["egfr"],
        "smoker": row["smoker"],
        "diabetes": no_yes[row["diabetes"]],
    }
    record = call("assess", COX, *(f"{id}={text}" for id, text in typed.items()), "--json").record
    assert float(scored[complete]["probability"]) == record["probability"]
    assert set(ended.record["stops"]) <= {f"missing:{id}" for id in FIELDS}


def test_a_question_coded_one_and_two_is_refused(tmp_path: Path) -> None:
    rows = [row | {"smoker": {"no": "1", "yes": "2"}[row["smoker"]]} for row in invent_rows(50)]
    write_rows(tmp_path / "people.csv", rows)
    study = tmp_path / "study.toml"
    study.write_text('[cohort.columns]\nsmoker = {column = "smoker"}\n', encoding="utf-8")
    words = ("score", COX, str(tmp_path / "people.csv"), "-o", str(tmp_path / "out.csv"), "--columns", str(study))
    ended = call(*words)
    assert ended.status == 4
    assert "say which is which under levels" in ended.err
    assert left_in(tmp_path) == {"people.csv", "study.toml"}
    study.write_text('[cohort.columns]\nsmoker = {levels = {no = "1", yes = "2"}}\n', encoding="utf-8")
    assert call(*words).status == 0


def test_units_missing_texts_and_decimal_commas(tmp_path: Path) -> None:
    rows = invent_rows(40)
    plain = write_rows(tmp_path / "plain.csv", rows)
    assert call("score", COX, str(plain), "-o", str(tmp_path / "a.csv")).status == 0
    numbers = ("total_cholesterol", "hdl_cholesterol")
    commas = [row | {id: row[id].replace(".", ",") for id in numbers} for row in rows]
    commas[2]["hdl_cholesterol"] = "1.4"
    commas[3]["total_cholesterol"] = "-9"
    other = write_rows(tmp_path / "commas.csv", commas, ";")
    words = ("--missing=-9", "--unit", "total_cholesterol=mmol/l")
    ended = call("score", COX, str(other), "-o", str(tmp_path / "b.csv"), *words, "--json")
    assert ended.status == 0, ended.err
    assert ended.record["stops"] == {"missing:total_cholesterol": 1, "unreadable:hdl_cholesterol": 1}
    a, b = rows_of(tmp_path / "a.csv"), rows_of(tmp_path / "b.csv")
    assert [row["probability"] for row in a[4:]] == [row["probability"] for row in b[4:]]
    grams = [row | {"total_cholesterol": str(round(float(row["total_cholesterol"]) * 38.67))} for row in rows]
    mass = write_rows(tmp_path / "mass.csv", grams)
    assert call("score", COX, str(mass), "-o", str(tmp_path / "c.csv"), "--unit", "total_cholesterol=mg/dL").status == 0
    record = call("assess", COX, *(f"{id}={grams[0][id]}" for id in FIELDS if id != "total_cholesterol"),
                  f"total_cholesterol={grams[0]['total_cholesterol']} mg/dL", "--json").record  # fmt: skip
    assert float(rows_of(tmp_path / "c.csv")[0]["probability"]) == record["probability"]


@pytest.mark.parametrize(
    ("words", "said"),
    [
        (("--column", "age=ages"), 'has no column "ages", which should hold age. Did you mean "age"?'),
        (("--column", "aeg=age"), '"aeg" is not a field of this model. Did you mean "age"?'),
        (("--column", "age"), "cannot be used with --column"),
        (("--keep", "persons"), 'has no column "persons" that could be kept. Did you mean "person"?'),
        (("--unit", "total_cholesterol=mm[Hg]"), "is not given in mmHg"),
        (("--unit", "total_cholesterol=mmoll"), "the unit of total_cholesterol, is not known."),
        (("--unit", "sex=mmol/L"), "its answers have no unit"),
        (("--years", "5"), "no horizon of 5 years"),
        (("--recalibration", "high"), "offers no recalibrations"),
        (("--level", "95"), "Did you mean 0.95?"),
        (("age=50", "--column", "age=age"), "a column and a value for all rows"),
    ],
)
def test_what_cannot_be_asked_for(words: tuple[str, ...], said: str, table: Path, tmp_path: Path) -> None:
    ended = call("score", COX, str(table), "-o", str(tmp_path / "out.csv"), *words)
    assert ended.status == 2, ended.err
    assert said in ended.err.replace("\u202f", " ")
    assert left_in(tmp_path) == {"people.csv"}


def test_a_table_that_lacks_a_column(tmp_path: Path) -> None:
    (tmp_path / "people.csv").write_text("person,Age\n1,50\n", encoding="utf-8")
    ended = call("score", COX, str(tmp_path / "people.csv"), "-o", str(tmp_path / "out.csv"))
    assert ended.status == 2
    assert "without which this model gives no number" in ended.err
    assert "prior_cvd=no where that holds for everybody" in ended.err


@pytest.mark.parametrize("name", ["nobody.csv", "people.xlsx", "."])
def test_a_table_that_cannot_be_read(name: str, tmp_path: Path) -> None:
    ended = call("score", COX, str(tmp_path / name), "-o", str(tmp_path / "out.csv"))
    assert ended.status == 4, ended.err
    assert "Something went wrong" not in ended.err


def test_an_output_that_is_there_stays(table: Path, tmp_path: Path) -> None:
    out = tmp_path / "out.csv"
    out.write_text("mine", encoding="utf-8")
    ended = call("score", COX, str(table), "-o", str(out))
    assert ended.status == 2
    assert "is there already and was left as it is" in ended.err
    assert out.read_text(encoding="utf-8") == "mine"
    assert call("score", COX, str(table), "-o", str(out), "--replace").status == 0
    assert len(rows_of(out)) == 103
    assert "is read, so" in call("score", COX, str(table), "-o", str(table), "--replace").err
    assert call("score", COX, str(table), "-o", str(tmp_path / "no" / "out.csv")).status == 2


@pytest.mark.skipif(os.geteuid() == 0, reason="nothing is read-only for root")
def test_a_folder_that_may_not_be_written_to(table: Path, tmp_path: Path) -> None:
    folder = tmp_path / "fixed"
    folder.mkdir(mode=0o555)
    ended = call("score", COX, str(table), "-o", str(folder / "out.csv"))
    assert ended.status == 5
    assert "could not be written" in ended.err


@pytest.mark.skipif(sys.platform != "linux", reason="a folder in which nobody may make a file, not even root")
def test_a_folder_where_no_file_can_be_made(table: Path) -> None:
    ended = call("score", COX, str(table), "-o", "/proc/out.csv")
    assert ended.status == 5
    assert "/proc/out.csv.part could not be written" in ended.err
    assert "Check that the folder may be written to, or name another." in ended.err


def test_a_folder_without_room(table: Path) -> None:
    """/dev/full takes nothing; a link to it stands where the part would."""
    part = table.parent / "out.csv.part"
    part.symlink_to("/dev/full")
    ended = call("score", COX, str(table), "-o", str(table.parent / "out.csv"), "--replace")
    assert ended.status == 5
    assert "could not be written (No space left on device)" in ended.err
    assert "--resume" in ended.err
