"""Was the study large enough for the model."""

from __future__ import annotations

from fourfold.findings.entry import Entry, found
from fourfold.results import tree


def _events_per_parameter(results: tree.Results) -> list[tree.Finding]:
    size = results.sample_size
    if size is None or size.events_per_parameter is None or size.events_per_parameter >= 10:
        return []
    grade = "serious" if size.events_per_parameter < 5 else "concern"
    return [
        found(
            EVENTS_PER_PARAMETER,
            grade,
            per_parameter=size.events_per_parameter,
            parameters=size.candidate_parameters,
        )
    ]


def _criteria(results: tree.Results) -> list[tree.Finding]:
    size = results.sample_size
    if results.study.purpose != "prediction" or size is None or not size.shortfall:
        return []
    return [
        found(
            CRITERIA,
            "serious",
            required=size.required,
            shortfall=size.shortfall,
            analysed=results.participants.analysed,
            criteria=[
                {"id": item.id, "required": item.required} for item in size.criteria if item.shortfall
            ],
        )
    ]


def _shrinkage(results: tree.Results) -> list[tree.Finding]:
    size = results.sample_size
    if size is None or size.shrinkage is None or size.shrinkage >= 0.9:
        return []
    if results.study.purpose != "prediction":
        grade = "remark" if size.shrinkage >= 0.8 else "concern"
    else:
        grade = "serious" if size.shrinkage < 0.8 else "concern"
    return [found(SHRINKAGE, grade, shrinkage=size.shrinkage, too_extreme=100 * (1 - size.shrinkage))]


def _expected_cells(results: tree.Results) -> list[tree.Finding]:
    small = [
        table
        for table in results.tables
        if table.smallest_expected is not None and table.smallest_expected < 5
    ]
    if not small:
        return []
    about = [table.exposure for table in small]
    return [found(EXPECTED_CELLS, "concern", about, names=about)]


EVENTS_PER_PARAMETER = Entry(
    id="SIZ-epp", section="trust", notice=_events_per_parameter, derived=("per_parameter",),
    source="Peduzzi et al. (1996), J Clin Epidemiol 49, 1373-1379; van Smeden et al. (2016), BMC Med Res "
    "Methodol 16, 163",
)  # fmt: skip
CRITERIA = Entry(
    id="SIZ-riley", section="trust", notice=_criteria,
    source="Riley et al. (2019), Stat Med 38, 1276-1296; (2020), BMJ 368, m441",
)  # fmt: skip
SHRINKAGE = Entry(
    id="SIZ-shrinkage", section="trust", notice=_shrinkage,
    source="van Houwelingen & le Cessie (1990), Stat Med 9, 1303-1325",
)  # fmt: skip
EXPECTED_CELLS = Entry(
    id="SIZ-cells", section="results", notice=_expected_cells, source="common practice"
)

ENTRIES = (EVENTS_PER_PARAMETER, CRITERIA, SHRINKAGE, EXPECTED_CELLS)
