"""Is there enough to carry the model?"""

from __future__ import annotations

from fourfold.findings import asked
from fourfold.findings.entry import CONCERN, REMARK, SERIOUS, Entry, Noticed
from fourfold.results import tree

FEW_PER_PARAMETER, VERY_FEW_PER_PARAMETER = 10.0, 5.0
SHRINKAGE_WANTED, SHRINKAGE_NEEDED = 0.9, 0.8
ENOUGH_FOR_A_CURVE = 200
ENOUGH_FOR_VALIDATION = 100
CHANCE = 0.05


def events_per_parameter(results: tree.Results) -> Noticed | None:
    size = results.sample_size
    if size is None or size.events_per_parameter is None or size.candidate_parameters == 0:
        return None
    ratio = size.events_per_parameter
    if ratio >= FEW_PER_PARAMETER:
        return None
    fewer = asked.rarer(results)
    values = {"ratio": ratio, "fewer": fewer, "parameters": size.candidate_parameters}
    grave = ratio < VERY_FEW_PER_PARAMETER or asked.small(results, fewer)
    return Noticed(SERIOUS if grave else CONCERN, values)


def riley(results: tree.Results) -> Noticed | None:
    size = results.sample_size
    # The criteria are made for prediction models; an estimate is judged by its interval.
    if size is None or not asked.prediction(results) or not size.shortfall or size.required is None:
        return None
    n = results.participants.analysed
    criteria = [
        {"id": one.id, "required": one.required, "short": bool(one.shortfall)} for one in size.criteria
    ]
    values = {
        "n": n,
        "required": size.required,
        "shortfall": size.shortfall,
        "criteria": criteria,
        "assumed": size.r_squared_assumed,
    }
    grade = SERIOUS if 2 * size.shortfall > size.required else CONCERN
    return Noticed(grade, values, asked.model_names(results))


def shrinkage(results: tree.Results) -> Noticed | None:
    size = results.sample_size
    if size is None or size.shrinkage is None or size.shrinkage >= SHRINKAGE_WANTED:
        return None
    factor = size.shrinkage
    if asked.prediction(results):
        grade = SERIOUS if factor < SHRINKAGE_NEEDED else CONCERN
        return Noticed(grade, {"factor": factor}, asked.model_names(results))
    # A weak association makes the factor small in samples of any size: no fault of the size then.
    p = results.model.likelihood_ratio_p
    if factor < SHRINKAGE_NEEDED and p is not None and p < CHANCE:
        return Noticed(REMARK, {"factor": factor}, asked.model_names(results))
    return None


def few_for_curve(results: tree.Results) -> Noticed | None:
    fewer = asked.rarer(results)
    if not asked.prediction(results) or fewer is None:
        return None
    if not ENOUGH_FOR_VALIDATION <= fewer < ENOUGH_FOR_A_CURVE:
        return None
    return Noticed(CONCERN, {"fewer": fewer, "wanted": ENOUGH_FOR_A_CURVE})


def few_for_validation(results: tree.Results) -> Noticed | None:
    fewer = asked.rarer(results)
    if not asked.prediction(results) or fewer is None or fewer >= ENOUGH_FOR_VALIDATION:
        return None
    return Noticed(SERIOUS, {"fewer": fewer, "wanted": ENOUGH_FOR_VALIDATION})


ENTRIES = (
    Entry(
        id="SIZ-epp",
        section="trust",
        source="Peduzzi et al. 1996, J Clin Epidemiol 49:1373-9; "
        "van Smeden et al. 2016, BMC Med Res Methodol 16:163",
        rule=events_per_parameter,
        counts=("fewer",),
        derived=("ratio",),
    ),
    Entry(
        id="SIZ-riley",
        section="trust",
        source="Riley et al. 2019, Stat Med 38:1276-96; Riley et al. 2020, BMJ 368:m441",
        rule=riley,
        counts=("n",),
        derived=("required", "shortfall", "criteria[].required"),
    ),
    Entry(
        id="SIZ-shrinkage",
        section="trust",
        source="van Houwelingen & le Cessie 1990, Stat Med 9:1303-25",
        rule=shrinkage,
        derived=("factor",),
    ),
    Entry(
        id="CAL-few-events",
        section="trust",
        source="Van Calster et al. 2016, J Clin Epidemiol 74:167-76",
        rule=few_for_curve,
        counts=("fewer",),
    ),
    Entry(
        id="VAL-few-events",
        section="trust",
        source="Collins, Ogundimu & Altman 2016, Stat Med 35:214-26",
        rule=few_for_validation,
        counts=("fewer",),
    ),
)
