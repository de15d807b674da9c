"""From an odds ratio to the risk ratio it stands for at a given baseline risk."""

from __future__ import annotations


def risk_ratio_from_odds_ratio(odds_ratio: float, baseline_risk: float) -> float:
    """Risk ratio implied by an odds ratio where the unexposed have ``baseline_risk``.

    For a warning that odds are not risks, never as an adjusted estimate: applied to an adjusted
    odds ratio it is biased under confounding.

    Raises
    ------
    ValueError
        If the odds ratio is negative or the risk outside 0 to 1.

    References
    ----------
    Zhang & Yu (1998). JAMA 280, 1690-1691.
    McNutt et al. (2003). Am J Epidemiol 157, 940-943.
    """
    if odds_ratio < 0 or not 0 <= baseline_risk <= 1:
        raise ValueError("An odds ratio of 0 or more and a risk between 0 and 1 are needed.")
    return odds_ratio / (1 - baseline_risk + baseline_risk * odds_ratio)
