"""How well the model does, and how little the fitting data can say of that."""

from __future__ import annotations

from fourfold.findings import asked
from fourfold.findings.entry import CONCERN, REMARK, SERIOUS, Entry, Noticed
from fourfold.results import tree

VAN_CALSTER = "Van Calster et al. 2016, J Clin Epidemiol 74:167-76"
TRIPOD = "TRIPOD+AI (Collins et al. 2024, BMJ 385:e078378)"
FITTING_DATA = "fitting data"
THIN = 5.0
CHANCE = 0.05


def calibration_none(results: tree.Results) -> Noticed | None:
    if not asked.prediction(results) or not asked.fitted(results):
        return None
    found = results.calibration
    if found is not None and found.withheld is None:
        return None
    return Noticed(SERIOUS, {"by_design": found is not None})


def by_construction(results: tree.Results) -> Noticed | None:
    found = results.calibration
    if found is None or found.basis != FITTING_DATA or found.withheld is not None:
        return None
    if found.slope is not None or found.in_the_large is not None:
        values = {"offered": True, "slope": found.slope, "in_the_large": found.in_the_large}
        return Noticed(SERIOUS, values)
    if not asked.prediction(results):
        return None
    return Noticed(REMARK, {"offered": False, "slope": None, "in_the_large": None})


def hl_large(results: tree.Results) -> Noticed | None:
    test = _test(results)
    if test is None or test.verdict != "large n":
        return None
    grade = CONCERN if asked.prediction(results) else REMARK
    return Noticed(grade, {"n": results.participants.analysed})


def hl_thin(results: tree.Results) -> Noticed | None:
    test = _test(results)
    if test is None or results.calibration is None:
        return None
    expected = [
        min(group.expected, group.n - group.expected)
        for group in results.calibration.groups
        if group.n is not None and group.expected is not None
    ]
    smallest = min(expected, default=None)
    no_verdict = test.verdict in ("thin groups", "few groups")
    if not no_verdict and (smallest is None or smallest >= THIN):
        return None
    grade = CONCERN if no_verdict and asked.prediction(results) else REMARK
    values = {"groups": test.groups, "smallest": smallest, "verdict": test.verdict}
    return Noticed(grade, values, asked.model_names(results))


def hl_departs(results: tree.Results) -> Noticed | None:
    test = _test(results)
    if test is None or test.verdict is not None or test.p_value is None or test.p_value >= CHANCE:
        return None
    values = {"p_value": test.p_value, "groups": test.groups}
    return Noticed(CONCERN, values, asked.model_names(results))


def _test(results: tree.Results) -> tree.HosmerLemeshow | None:
    return None if results.calibration is None else results.calibration.hosmer_lemeshow


def auc_apparent(results: tree.Results) -> Noticed | None:
    found = results.discrimination
    # For association the area is a by-product; for prediction it is what the model is judged by.
    if not asked.prediction(results) or found is None or found.auc is None:
        return None
    if results.calibration is not None and results.calibration.basis != FITTING_DATA:
        return None
    return Noticed(SERIOUS, {"auc": found.auc}, asked.model_names(results))


def auc_no_interval(results: tree.Results) -> Noticed | None:
    found = results.discrimination
    if not asked.prediction(results) or found is None or found.auc is None:
        return None
    if found.lower is not None or found.upper is not None:
        return None
    return Noticed(CONCERN, {"auc": found.auc}, asked.model_names(results))


def validation_none(results: tree.Results) -> Noticed | None:
    if not asked.prediction(results) or not asked.fitted(results):
        return None
    if results.calibration is not None and results.calibration.basis != FITTING_DATA:
        return None
    return Noticed(CONCERN)


def equation_missing(results: tree.Results) -> Noticed | None:
    if not asked.prediction(results) or not asked.fitted(results):
        return None
    model = results.model
    no_intercept = "(intercept)" not in model.terms
    pairs = zip(model.terms, model.coefficients, strict=False)
    unknown = list(dict.fromkeys(term for term, value in pairs if value is None and term != "(intercept)"))
    if not no_intercept and all(value is not None for value in model.coefficients):
        return None
    values = {"intercept": not no_intercept, "names": unknown, "by_design": model.withheld is not None}
    return Noticed(SERIOUS, values, unknown)


def groups_unexamined(results: tree.Results) -> Noticed | None:
    if not asked.prediction(results) or not asked.fitted(results):
        return None
    # Items 14 and 23a of the checklist are the authors' place to say what they did.
    if {"14", "23a"} & set(results.study.stated):
        return None
    return Noticed(CONCERN)


ENTRIES = (
    Entry(id="CAL-none", section="trust", source=f"{TRIPOD}; {VAN_CALSTER}", rule=calibration_none),
    Entry(id="CAL-by-construction", section="trust", source=VAN_CALSTER, rule=by_construction),
    Entry(
        id="CAL-hl-large",
        section="trust",
        source="Paul, Pennell & Lemeshow 2013, Stat Med 32:67-80",
        rule=hl_large,
        counts=("n",),
    ),
    Entry(
        id="CAL-hl-thin",
        section="trust",
        source="Hosmer & Lemeshow 1980, Commun Stat A9:1043-69",
        rule=hl_thin,
        derived=("smallest",),
    ),
    Entry(
        id="CAL-hl-departs",
        section="trust",
        source="Hosmer & Lemeshow 1980, Commun Stat A9:1043-69",
        rule=hl_departs,
        derived=("p_value",),
    ),
    Entry(
        id="AUC-apparent",
        section="trust",
        source="Harrell, Lee & Mark 1996, Stat Med 15:361-87; PROBAST (Wolff et al. 2019, "
        "Ann Intern Med 170:51-58)",
        rule=auc_apparent,
        derived=("auc",),
    ),
    Entry(
        id="AUC-no-interval",
        section="trust",
        source=f"{TRIPOD}, item 23a",
        rule=auc_no_interval,
        derived=("auc",),
    ),
    Entry(
        id="VAL-none",
        section="trust",
        source="Steyerberg et al. 2001, J Clin Epidemiol 54:774-81",
        rule=validation_none,
    ),
    Entry(id="EQN-missing", section="trust", source=f"{TRIPOD}, item 22", rule=equation_missing),
    Entry(
        id="FAIR-groups",
        section="trust",
        source=f"{TRIPOD}, items 14 and 23a",
        rule=groups_unexamined,
    ),
)
