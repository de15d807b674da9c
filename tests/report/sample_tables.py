"""Variables, estimates, fourfold table and characteristics of the sample reports.

Estimates, intervals and tests are those of birthwt.json; counts are counted from birthwt.csv.
"""

from __future__ import annotations

import csv
import json
import math
from collections.abc import Callable, Sequence
from pathlib import Path
from typing import Any

import numpy as np

from fourfold.results import tree

REFERENCE = Path(__file__).parents[1] / "reference"
CASE: dict[str, Any] = json.loads((REFERENCE / "birthwt.json").read_text(encoding="utf-8"))
LABELS = {
    "low": "Low birth weight",
    "smoke": "Mother smoked",
    "age": "Mother’s age",
    "lwt": "Mother’s weight",
    "race": "Group",
    "ptl": "Earlier preterm labours",
    "ht": "History of hypertension",
    "ui": "Uterine irritability",
}
LEVELS = ["white", "black", "other"]
DESCRIPTION = """study:
  title: Smoking and low birth weight, Tarn Valley
  design: cohort   # <b>not markup</b> {{ not a template }}
outcome: low
"""


def rows() -> list[dict[str, str]]:
    with (REFERENCE / "birthwt.csv").open(encoding="utf-8", newline="") as file:
        return list(csv.DictReader(file))


ROWS = rows()
Test = Callable[[dict[str, str]], bool]


def count(*tests: Test) -> int:
    return sum(all(test(row) for test in tests) for row in ROWS)


def is_(name: str, value: str) -> Test:
    return lambda row: row[name] == value


EVENT, NO_EVENT = is_("low", "yes"), is_("low", "no")


def variables(prediction: bool = False) -> list[tree.Variable]:
    lead, rest = ("predictor", "predictor") if prediction else ("exposure", "covariate")
    binary: dict[str, Any] = {"kind": "binary", "present": "yes", "reference": "no", "levels": ["no", "yes"]}
    return [
        tree.Variable(name="low", label=LABELS["low"], role="outcome", **binary),
        tree.Variable(name="smoke", label=LABELS["smoke"], role=lead, **binary),
        tree.Variable(
            name="age",
            label=LABELS["age"],
            role=rest,
            kind="quantity",
            unit="years",
            per=5.0,
            reason="Older mothers smoke less",
            planned=True,
        ),
        tree.Variable(name="lwt", label=LABELS["lwt"], role=rest, kind="quantity", unit="pounds", per=10.0),
        tree.Variable(
            name="race",
            label=LABELS["race"],
            role=rest,
            kind="category",
            levels=LEVELS,
            reference="white",
            reference_rule="most frequent",
        ),
        tree.Variable(name="ptl", label=LABELS["ptl"], role=rest, kind="quantity", per=1.0),
        tree.Variable(name="ht", label=LABELS["ht"], role=rest, **binary),
        tree.Variable(name="ui", label=LABELS["ui"], role=rest, **binary),
    ]


PARAMETERS = {
    "smokeyes": ("smoke", None),
    "age": ("age", None),
    "lwt": ("lwt", None),
    "raceblack": ("race", "black"),
    "raceother": ("race", "other"),
    "ptl": ("ptl", None),
    "htyes": ("ht", None),
    "uiyes": ("ui", None),
}


def estimate(
    found: Sequence[tree.Variable], parameter: str, b: float, se: float, lower: float, upper: float, p: float
) -> tree.Estimate:
    term, level = PARAMETERS[parameter]
    variable = next(one for one in found if one.name == term)
    per = variable.per if variable.kind == "quantity" else None
    scale = per or 1.0
    inside: Test = is_(term, level or "yes") if variable.kind != "quantity" else lambda row: True
    return tree.Estimate(
        term=term,
        label=variable.label,
        role=variable.role,
        level=level,
        reference=variable.reference,
        per=per,
        unit=variable.unit,
        events=count(inside, EVENT),
        total=count(inside),
        log_odds_ratio=b * scale,
        standard_error=se * scale,
        odds_ratio=math.exp(b * scale),
        lower=math.exp(lower * scale),
        upper=math.exp(upper * scale),
        p_value=p,
        interval="profile likelihood",
        test="likelihood ratio",
    )


def estimates(found: Sequence[tree.Variable]) -> tree.Estimates:
    tests = {test["term"]: test["p_value"] for test in CASE["term_tests"]}
    adjusted = []
    for parameter, (term, _) in PARAMETERS.items():
        at = CASE["parameters"].index(parameter)
        p = CASE["wald_p"][at] if term == "race" else tests[term]
        adjusted.append(
            estimate(
                found,
                parameter,
                CASE["coefficients"][at],
                CASE["standard_errors"][at],
                CASE["profile_lower"][at],
                CASE["profile_upper"][at],
                p,
            )
        )
    crude = [
        estimate(
            found,
            parameter,
            one["coefficients"][at],
            one["standard_errors"][at],
            one["profile_lower"][at],
            one["profile_upper"][at],
            one["wald_p"][at],
        )
        for one in CASE["crude"]
        for at, parameter in enumerate(one["parameters"])
        if parameter in PARAMETERS
    ]
    return tree.Estimates(crude=crude, adjusted=adjusted)


def interval(value: float, limits: Sequence[float]) -> tree.Interval:
    return tree.Interval(estimate=value, lower=limits[0], upper=limits[1], method="")


def fourfold() -> tree.FourfoldTable:
    found = CASE["fourfold_smoke"]
    (a, b), (c, d) = found["table"]
    return tree.FourfoldTable(
        exposure="smoke",
        label=LABELS["smoke"],
        exposed_label="yes",
        unexposed_label="no",
        a=a,
        b=b,
        c=c,
        d=d,
        risk_exposed=interval(found["risk_exposed"], found["risk_exposed_wilson"]),
        risk_unexposed=interval(found["risk_unexposed"], found["risk_unexposed_wilson"]),
        odds_ratio=interval(found["odds_ratio"], found["woolf_interval"]),
        risk_ratio=interval(found["risk_ratio"], found["risk_ratio_interval"]),
        risk_difference=interval(found["risk_difference"], found["risk_difference_newcombe"]),
        chi_squared=found["chi_squared"],
        chi_squared_p=found["chi_squared_p"],
        fisher_p=found["fisher_p"],
        smallest_expected=23.1,
    )


def descriptives(found: Sequence[tree.Variable], by: str, missing: int) -> tree.DescriptiveTable:
    groups = [("yes", is_(by, "yes")), ("no", is_(by, "no"))]
    everyone: list[tuple[str, Test]] = [("overall", lambda row: True), *groups]
    described = []
    for variable in found:
        if variable.name == by:
            continue
        levels = ["yes"] if variable.kind == "binary" else variable.levels or [None]
        for level in levels:
            cells = [summary(variable, level, name, test, missing) for name, test in everyone]
            described.append(
                tree.Descriptive(
                    variable=variable.name,
                    label=variable.label,
                    kind=variable.kind,
                    level=level,
                    unit=variable.unit,
                    decimals=0,
                    overall=cells[0],
                    groups=cells[1:],
                )
            )
    return tree.DescriptiveTable(
        by=by,
        by_label=LABELS[by],
        groups=["yes", "no"],
        group_sizes=[count(test) for _, test in groups],
        rows=described,
    )


def summary(
    variable: tree.Variable, level: str | None, group: str, test: Test, missing: int
) -> tree.DescriptiveCell:
    left_out = missing if variable.name == "lwt" and group == "overall" else 0
    if level is not None:
        n, total = count(test, is_(variable.name, level)), count(test)
        return tree.DescriptiveCell(
            group=group, count=n, total=total, percent=100 * n / total, missing=left_out
        )
    x = np.array([float(row[variable.name]) for row in ROWS if test(row)])
    low, middle, high = (float(q) for q in np.quantile(x, [0.25, 0.5, 0.75]))
    return tree.DescriptiveCell(
        group=group,
        total=x.size,
        mean=float(x.mean()),
        sd=float(x.std(ddof=1)),
        median=middle,
        lower_quartile=low,
        upper_quartile=high,
        missing=left_out,
    )
