"""Calibration, discrimination and validation."""

from __future__ import annotations

from fourfold.findings.entry import Entry, found
from fourfold.results import tree

CASE_CONTROL = "case-control"


def _predicts(results: tree.Results) -> bool:
    return results.study.purpose == "prediction"


def _by_construction(results: tree.Results) -> list[tree.Finding]:
    look = results.calibration
    if look is None or look.basis != "fitting data" or look.withheld is not None:
        return []
    return [found(BY_CONSTRUCTION, "remark")]


def _no_calibration(results: tree.Results) -> list[tree.Finding]:
    look = results.calibration
    if not _predicts(results) or results.model.n is None or (look is not None and look.withheld is None):
        return []
    return [found(NO_CALIBRATION, "serious")]


def _large(results: tree.Results) -> list[tree.Finding]:
    test = None if results.calibration is None else results.calibration.hosmer_lemeshow
    if test is None or test.verdict != "large n":
        return []
    return [found(LARGE, "concern", analysed=results.participants.analysed)]


def _thin(results: tree.Results) -> list[tree.Finding]:
    test = None if results.calibration is None else results.calibration.hosmer_lemeshow
    if test is None or test.verdict not in ("few groups", "thin groups"):
        return []
    return [found(THIN, "concern", groups=test.groups, why=test.verdict)]


def _poor(results: tree.Results) -> list[tree.Finding]:
    test = None if results.calibration is None else results.calibration.hosmer_lemeshow
    if test is None or test.verdict is not None or test.p_value is None or test.p_value >= 0.05:
        return []
    return [found(POOR, "concern", statistic=test.statistic, df=test.df, p=test.p_value)]


def _apparent(results: tree.Results) -> list[tree.Finding]:
    look = results.discrimination
    if not _predicts(results) or look is None or look.auc is None:
        return []
    return [found(APPARENT, "serious", auc=look.auc)]


def _no_interval(results: tree.Results) -> list[tree.Finding]:
    look = results.discrimination
    if look is None or look.auc is None or look.hidden:
        return []
    if look.lower is not None and look.upper is not None:
        return []
    return [found(NO_INTERVAL, "concern", auc=look.auc)]


def _few_events(results: tree.Results) -> list[tree.Finding]:
    people = results.participants
    if not _predicts(results) or people.events is None or people.non_events is None:
        return []
    if min(people.events, people.non_events) >= 100:
        return []
    return [found(FEW_EVENTS, "serious", events=people.events, non_events=people.non_events)]


def _not_validated(results: tree.Results) -> list[tree.Finding]:
    look = results.calibration
    if not _predicts(results) or (look is not None and look.basis != "fitting data"):
        return []
    return [found(NOT_VALIDATED, "concern")]


def _equation(results: tree.Results) -> list[tree.Finding]:
    if not _predicts(results) or results.model.withheld is None:
        return []
    return [found(EQUATION, "serious")]


BY_CONSTRUCTION = Entry(
    id="CAL-by-construction", section="trust", notice=_by_construction,
    source="Van Calster et al. (2016), J Clin Epidemiol 74, 167-176",
)  # fmt: skip
NO_CALIBRATION = Entry(
    id="CAL-none", section="trust", notice=_no_calibration,
    source="Van Calster et al. (2019), BMC Med 17, 230; TRIPOD+AI (2024), BMJ 385, e078378",
)  # fmt: skip
LARGE = Entry(
    id="CAL-hl-large", section="trust", notice=_large, counts=("analysed",),
    source="Paul, Pennell & Lemeshow (2013), Stat Med 32, 67-80",
)  # fmt: skip
THIN = Entry(
    id="CAL-hl-thin", section="trust", notice=_thin,
    source="Hosmer & Lemeshow (1980), Commun Stat A9, 1043-1069",
)  # fmt: skip
POOR = Entry(
    id="CAL-hl-poor", section="trust", notice=_poor,
    source="Hosmer & Lemeshow (1980), Commun Stat A9, 1043-1069",
)  # fmt: skip
APPARENT = Entry(
    id="AUC-apparent", section="trust", notice=_apparent,
    source="Harrell, Lee & Mark (1996), Stat Med 15, 361-387",
)  # fmt: skip
NO_INTERVAL = Entry(
    id="AUC-no-interval", section="trust", notice=_no_interval,
    source="DeLong, DeLong & Clarke-Pearson (1988), Biometrics 44, 837-845",
)  # fmt: skip
FEW_EVENTS = Entry(
    id="VAL-few-events", section="trust", notice=_few_events, counts=("events", "non_events"),
    source="Collins, Ogundimu & Altman (2016), Stat Med 35, 214-226",
)  # fmt: skip
NOT_VALIDATED = Entry(
    id="VAL-none", section="trust", notice=_not_validated,
    source="TRIPOD+AI (2024), BMJ 385, e078378, item 12",
)  # fmt: skip
EQUATION = Entry(
    id="EQN-withheld", section="trust", notice=_equation,
    source="TRIPOD+AI (2024), BMJ 385, e078378, item 22",
)  # fmt: skip

ENTRIES = (
    BY_CONSTRUCTION, NO_CALIBRATION, LARGE, THIN, POOR, APPARENT, NO_INTERVAL, FEW_EVENTS, NOT_VALIDATED, EQUATION,
)  # fmt: skip
