"""Each finding fires where it should, with the grade it should have, and keeps silent elsewhere."""

from __future__ import annotations

import pytest
from tests.findings import cases_design, cases_fit, cases_flow, cases_reading, cases_rows
from tests.findings.trees import Build

from fourfold.findings.catalogue import CATALOGUE, notice
from fourfold.results import tree

CASES = {
    **cases_rows.CASES,
    **cases_flow.CASES,
    **cases_design.CASES,
    **cases_fit.CASES,
    **cases_reading.CASES,
}

FIRES = [
    pytest.param(id, build, grade, id=f"{id}-{place}")
    for id, case in CASES.items()
    for place, (build, grade) in enumerate(case.fires)
]
SILENT = [
    pytest.param(id, build, id=f"{id}-{place}")
    for id, case in CASES.items()
    for place, build in enumerate(case.silent)
]


def of_id(results: tree.Results, id: str) -> list[tree.Finding]:
    return [finding for finding in notice(results) if finding.id == id]


@pytest.mark.parametrize(("id", "build", "grade"), FIRES)
def test_fires(id: str, build: Build, grade: str):
    (finding,) = of_id(build(), id)
    assert finding.grade == grade
    assert finding.section == CATALOGUE[id].section
    assert finding.source == CATALOGUE[id].source
    assert set(finding.about) <= {variable.name for variable in build().variables}


@pytest.mark.parametrize(("id", "build"), SILENT)
def test_keeps_silent(id: str, build: Build):
    assert of_id(build(), id) == []


def test_cases_of_different_files_do_not_overwrite_each_other():
    assert len(CASES) == sum(
        len(part.CASES) for part in (cases_rows, cases_flow, cases_design, cases_fit, cases_reading)
    )
