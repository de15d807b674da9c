"""Random studies: rows of people, and the results tree that a report of them would hold.

Everything is counted from the rows here, with no part of the program but the tree, so that the
tree adds up as a real one does and the truth is known.
"""

from __future__ import annotations

import itertools
import math
from dataclasses import dataclass
from typing import Any

import numpy as np

from fourfold.results import tree

Rows = list[dict[str, Any]]


@dataclass(frozen=True)
class Shape:
    """How a random study looks."""

    people: int = 120
    levels: tuple[int, ...] = (2, 3)
    quantities: int = 1
    missing: float = 0.02
    event: float = 0.25
    excluded: int = 7
    limit: int = 5
    hide_zero: bool = False
    design: str = "cohort"
    skew: float = 1.0


def rows_of(shape: Shape, seed: int) -> Rows:
    """Draw people; a missing value is None."""
    rng = np.random.default_rng(seed)
    columns: dict[str, list[Any]] = {
        "outcome": list(np.where(rng.random(shape.people) < shape.event, "yes", "no"))
    }
    for place, count in enumerate(shape.levels):
        weights = np.arange(1, count + 1, dtype=float) ** -shape.skew
        columns[f"c{place}"] = [
            ("no" if k == 0 else "yes") if count == 2 else f"l{k}"
            for k in rng.choice(count, shape.people, p=weights / weights.sum())
        ]
    for place in range(shape.quantities):
        columns[f"q{place}"] = [round(float(x), 1) for x in rng.normal(50, 10, shape.people)]
    for name, values in columns.items():
        share = shape.missing if name != "outcome" else shape.missing / 2
        columns[name] = [None if rng.random() < share else value for value in values]
    return [dict(zip(columns, values, strict=True)) for values in zip(*columns.values(), strict=True)]


def tree_of(shape: Shape, rows: Rows) -> tree.Results:
    """The whole tree of a study of these rows."""
    return _Study(shape, rows).tree()


class _Study:
    def __init__(self, shape: Shape, rows: Rows) -> None:
        self.shape, self.rows = shape, rows
        self.names = list(rows[0])
        self.categorical = [f"c{place}" for place in range(len(shape.levels))]
        self.complete = [row for row in rows if None not in row.values()]
        self.variables = self._variables()
        self.events = sum(row["outcome"] == "yes" for row in self.complete)

    def _variables(self) -> list[tree.Variable]:
        found = [
            tree.Variable(
                name="outcome", label="Outcome", role="outcome", kind="binary", present="yes", reference="no"
            )
        ]
        for place, count in enumerate(self.shape.levels):
            role = "exposure" if place == 0 else "covariate"
            if count == 2:
                found.append(
                    tree.Variable(
                        name=f"c{place}",
                        label=f"C{place}",
                        role=role,
                        kind="binary",
                        present="yes",
                        reference="no",
                    )
                )
            else:
                found.append(
                    tree.Variable(
                        name=f"c{place}", label=f"C{place}", role=role, kind="category",
                        levels=[f"l{k}" for k in range(count)], reference="l0",
                    )
                )  # fmt: skip
        for place in range(self.shape.quantities):
            found.append(
                tree.Variable(
                    name=f"q{place}", label=f"Q{place}", role="covariate", kind="quantity", per=10.0
                )
            )
        return found

    def tree(self) -> tree.Results:
        n = len(self.complete)
        return tree.Results(
            format=1,
            study=tree.Study(title="Falls, Oxwater", design=self.shape.design, purpose="association"),
            variables=self.variables,
            analysis=tree.Analysis(smallest_count=self.shape.limit, hide_zero=self.shape.hide_zero),
            provenance=tree.Provenance(
                fourfold="0", python="3", packages={}, data_file="falls.csv", data_sha256="f" * 64,
                description_file="falls.yaml", description_sha256="e" * 64, description="",
                rows_read=len(self.rows) + self.shape.excluded, columns_read=[], seed=1,
            ),
            participants=self._participants(),
            audit=tree.Audit(levels=self._levels()),
            descriptives=tree.Descriptives(
                by_outcome=self._table("outcome"),
                by_exposure=[self._table("c0")] if self.shape.design == "cohort" else [],
            ),
            tables=[self._fourfold("c0")] if self.shape.levels[0] == 2 else [],
            estimates=tree.Estimates(crude=self._estimates(), adjusted=self._estimates()),
            term_tests=[],
            model=tree.Model(
                parameters=[], terms=[], coding=[], coefficients=[], covariance=None, n=n, events=self.events,
                log_likelihood=None, null_log_likelihood=None, deviance=None, aic=None, bic=None,
                likelihood_ratio=None, likelihood_ratio_df=None, likelihood_ratio_p=None, converged=True,
                iterations=5, decrement=None, estimator="maximum likelihood", r_squared=None,
            ),
            discrimination=None,
            calibration=None,
            risk_distribution=self._bins(),
            sample_size=None,
            influence=None,
            collinearity=None,
            curves=[],
            outcome_by_quantity=[],
            findings=[],
            cautions=[],
        )  # fmt: skip

    def _participants(self) -> tree.Participants:
        lacking = [tuple(name for name in self.names if row[name] is None) for row in self.rows]
        patterns = {pattern: lacking.count(pattern) for pattern in lacking if pattern}
        eligible = len(self.rows)
        known = [row for row in self.rows if row["outcome"] is not None]

        def association(name: str) -> tree.MissingAssociation:
            out = [row for row in known if row[name] is None]
            within = [row for row in known if row[name] is not None]
            return tree.MissingAssociation(
                variable=name,
                events_incomplete=_events(out), incomplete=len(out),
                events_complete=_events(within), complete=len(within),
                odds_ratio=1.234567, lower=0.512345, upper=2.512345, p_value=0.6123456, test="Fisher",
            )  # fmt: skip

        return tree.Participants(
            read=eligible + self.shape.excluded,
            exclusions=[tree.Exclusion(reason="Too young", count=self.shape.excluded, remaining=eligible)],
            eligible=eligible,
            incomplete=eligible - len(self.complete),
            analysed=len(self.complete),
            events=self.events,
            non_events=len(self.complete) - self.events,
            crude_rows={name: sum(row[name] is not None for row in known) for name in self.names[1:]},
            missing=[
                tree.MissingVariable(variable=name, label=name, count=count, percent=100 * count / eligible)
                for name in self.names
                for count in [sum(row[name] is None for row in self.rows)]
            ],
            patterns=[
                tree.MissingPattern(variables=list(pattern), count=count)
                for pattern, count in patterns.items()
            ],
            missing_associations=[
                association(name) for name in self.names[1:] if any(row[name] is None for row in known)
            ],
        )

    def _levels(self) -> list[tree.SparseLevel]:
        found = []
        for variable in self.variables[1:]:
            if variable.kind == "quantity":
                continue
            for level in variable.levels or ["yes", "no"]:
                inside = [row for row in self.complete if row[variable.name] == level]
                found.append(
                    tree.SparseLevel(
                        variable=variable.name, level=level, events=_events(inside),
                        non_events=len(inside) - _events(inside), reference=level == variable.reference,
                    )
                )  # fmt: skip
        return found

    def _estimates(self) -> list[tree.Estimate]:
        found = []
        for variable in self.variables[1:]:
            levels = [None] if variable.kind != "category" else variable.levels[1:]
            for level in levels:
                inside = self.complete
                if variable.kind != "quantity":
                    inside = [row for row in self.complete if row[variable.name] == (level or "yes")]
                away = [row for row in self.complete if row[variable.name] == variable.reference]
                found.append(self._estimate(variable, level, inside, away))
        return found

    def _estimate(
        self, variable: tree.Variable, level: str | None, inside: Rows, away: Rows
    ) -> tree.Estimate:
        a, c = _events(inside), _events(away)
        b, d = len(inside) - a, len(away) - c
        log = se = None
        if variable.kind == "quantity":
            log, se = 0.3, 0.2
        elif min(a, b, c, d) > 0:
            log, se = math.log(a * d / (b * c)), math.sqrt(1 / a + 1 / b + 1 / c + 1 / d)
        known = log is not None and se is not None
        return tree.Estimate(
            term=variable.name, label=variable.label, role=variable.role, level=level,
            reference=variable.reference, per=variable.per, unit=None, events=a, total=len(inside),
            log_odds_ratio=log, standard_error=se,
            odds_ratio=math.exp(log) if log is not None else None,
            lower=math.exp(log - 1.96 * se) if known else None,
            upper=math.exp(log + 1.96 * se) if known else None,
            p_value=0.04 if known else None, interval="Wald", test="Wald",
            note=None if known else "separated",
        )  # fmt: skip

    def _fourfold(self, name: str) -> tree.FourfoldTable:
        a, b, c, d = (
            sum(row[name] == at and row["outcome"] == event for row in self.complete)
            for at in ("yes", "no")
            for event in ("yes", "no")
        )
        some = tree.Interval(estimate=0.123456, lower=0.1, upper=0.2)
        return tree.FourfoldTable(
            exposure=name, label="C0", exposed_label="yes", unexposed_label="no", a=a, b=b, c=c, d=d,
            risk_exposed=some, risk_unexposed=some, odds_ratio=some, risk_ratio=some, risk_difference=some,
            chi_squared=3.2, chi_squared_p=0.07, fisher_p=0.08, smallest_expected=4.4,
        )  # fmt: skip

    def _table(self, by: str) -> tree.DescriptiveTable:
        described = next(variable for variable in self.variables if variable.name == by)
        groups = described.levels or ["yes", "no"]
        columns = [[row for row in self.rows if row[by] is not None]]
        columns += [[row for row in self.rows if row[by] == group] for group in groups]
        rows: list[tree.Descriptive] = []
        for variable in self.variables:
            if variable.name == by:
                continue
            levels: list[str | None] = (
                [None] if variable.kind == "quantity" else [*(variable.levels or ["yes"])]
            )
            for level in levels:
                cells = [
                    _cell(name, column, variable, level)
                    for name, column in zip(["overall", *groups], columns, strict=True)
                ]
                rows.append(
                    tree.Descriptive(
                        variable=variable.name, label=variable.label, kind=variable.kind, level=level,
                        unit=None, decimals=1, overall=cells[0], groups=cells[1:],
                    )
                )  # fmt: skip
        return tree.DescriptiveTable(
            by=by, by_label=by, groups=groups, group_sizes=[len(column) for column in columns[1:]], rows=rows
        )

    def _bins(self) -> list[tree.RiskBin]:
        found = []
        edges = np.linspace(20, 80, 7)
        for low, high in itertools.pairwise(edges):
            inside = [row for row in self.complete if low <= min(max(row.get("q0", 50), 20.1), 79.9) < high]
            found.append(
                tree.RiskBin(
                    lower=low / 100,
                    upper=high / 100,
                    events=_events(inside),
                    non_events=len(inside) - _events(inside),
                )
            )
        return found


def _events(rows: Rows) -> int:
    return sum(row["outcome"] == "yes" for row in rows)


def _cell(name: str, column: Rows, variable: tree.Variable, level: str | None) -> tree.DescriptiveCell:
    known = [row[variable.name] for row in column if row[variable.name] is not None]
    missing = len(column) - len(known)
    if level is None:
        quartiles = [float(q) for q in np.quantile(known, [0.25, 0.5, 0.75])] if known else [None] * 3
        return tree.DescriptiveCell(
            group=name, total=len(known), missing=missing,
            mean=float(np.mean(known)) if known else None,
            sd=float(np.std(known, ddof=1)) if len(known) > 1 else None,
            lower_quartile=quartiles[0], median=quartiles[1], upper_quartile=quartiles[2],
        )  # fmt: skip
    count = sum(value == level for value in known)
    return tree.DescriptiveCell(
        group=name, count=count, total=len(known), missing=missing,
        percent=100 * count / len(known) if known else None,
    )  # fmt: skip
