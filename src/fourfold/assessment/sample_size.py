"""Was the sample large enough for a model with this many candidate parameters?"""

from __future__ import annotations

import math

from fourfold.results import tree

SHRINKAGE = 0.9
OPTIMISM = 0.05
MARGIN = 0.05
MEAN_ABSOLUTE_ERROR = 0.05
ASSUMED_SHARE = 0.15


def shrinkage(likelihood_ratio: float, candidate_parameters: int) -> float | None:
    """Heuristic shrinkage factor of a model; None without a likelihood ratio above 0.

    References
    ----------
    van Houwelingen & le Cessie (1990). Stat Med 9, 1303-1325.
    """
    if likelihood_ratio <= 0:
        return None
    return (likelihood_ratio - candidate_parameters) / likelihood_ratio


def largest_r_squared(share: float) -> float:
    """Largest Cox-Snell R squared where ``share`` of people have the event."""
    return -math.expm1(2 * (share * math.log(share) + (1 - share) * math.log1p(-share)))


def required(share: float, candidate_parameters: int, r_squared: float) -> dict[str, float]:
    """Participants that each criterion asks for, before rounding up.

    Parameters
    ----------
    share : float
        Of people with the event, between 0 and 1.
    candidate_parameters : int
    r_squared : float
        Anticipated Cox-Snell R squared.

    Returns
    -------
    dict
        ``c1`` shrinkage of at most 10%, ``c2`` optimism in Nagelkerke's R squared of at most
        0.05, ``c3`` overall risk within 0.05, ``c4`` mean absolute error of risk at most 0.05.

    References
    ----------
    Riley et al. (2019). Stat Med 38, 1276-1296; (2020). BMJ 368, m441.
    van Smeden et al. (2019). Stat Methods Med Res 28, 2455-2474.
    """
    p = candidate_parameters

    def for_shrinkage(factor: float) -> float:
        return p / ((factor - 1) * math.log1p(-r_squared / factor))

    rarer = min(share, 1 - share)
    error = -0.508 + 0.259 * math.log(rarer) + 0.504 * math.log(p) - math.log(MEAN_ABSOLUTE_ERROR)
    return {
        "c1": for_shrinkage(SHRINKAGE),
        "c2": for_shrinkage(r_squared / (r_squared + OPTIMISM * largest_r_squared(share))),
        "c3": (1.96 / MARGIN) ** 2 * share * (1 - share),
        "c4": math.exp(error / 0.544),
    }


def assess(
    people: int,
    events: int,
    candidate_parameters: int,
    fitted_parameters: int,
    likelihood_ratio: float,
    *,
    absolute_risk: bool = True,
) -> tree.SampleSize:
    """Events per candidate parameter, heuristic shrinkage, and the four criteria with shortfall.

    Parameters
    ----------
    people, events : int
        In the analysis set.
    candidate_parameters : int
        Columns of every term that was considered, intercept not counted.
    fitted_parameters : int
        Columns in the model, intercept not counted.
    likelihood_ratio : float
        Of the model against none.
    absolute_risk : bool
        False where people were sampled by outcome: the share with the event is then the
        sampling's, and the criteria, which rest on it, are left out.

    Notes
    -----
    The R squared is that of Cox and Snell shrunken by the heuristic factor, never the apparent
    one. Where the factor is not positive, 15% of the largest possible is assumed.
    """
    parameters = max(candidate_parameters, 1)
    factor = shrinkage(likelihood_ratio, candidate_parameters)
    varies = 0 < events < people
    per_parameter = min(events, people - events) / parameters
    r_squared: float | None = None
    assumed = False
    criteria: list[tree.SampleSizeCriterion] = []
    if absolute_risk and varies:
        assumed = factor is None or factor <= 0
        if factor is None or factor <= 0:
            r_squared = ASSUMED_SHARE * largest_r_squared(events / people)
        else:
            r_squared = -math.expm1(-factor * likelihood_ratio / people)
        for name, number in required(events / people, parameters, r_squared).items():
            # A criterion met exactly must not be pushed over by rounding in the last bit.
            whole = math.ceil(number - 1e-9)
            criteria.append(
                tree.SampleSizeCriterion(id=name, required=whole, shortfall=max(0, whole - people))
            )
    most = max((c.required for c in criteria if c.required is not None), default=None)
    return tree.SampleSize(
        candidate_parameters=candidate_parameters,
        fitted_parameters=fitted_parameters,
        events_per_parameter=per_parameter,
        shrinkage=factor,
        r_squared=r_squared,
        criteria=criteria,
        required=most,
        shortfall=None if most is None else max(0, most - people),
        r_squared_assumed=assumed,
    )
