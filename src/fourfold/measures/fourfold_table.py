"""The fourfold table of a binary exposure and the outcome, and what the design lets it say."""

from __future__ import annotations

import math

from scipy.special import chdtrc

from fourfold.measures import hypergeometric
from fourfold.measures.proportion import newcombe, normal_quantile, wilson
from fourfold.results import tree

WOOLF = "Woolf"
CONDITIONAL = "conditional exact"
LOG_RATIO = "delta method, log scale"


def fourfold_table(
    a: int,
    b: int,
    c: int,
    d: int,
    design: str = "cohort",
    confidence: float = 95.0,
    *,
    exposure: str = "",
    label: str = "",
    exposed_label: str = "exposed",
    unexposed_label: str = "unexposed",
) -> tree.FourfoldTable:
    """Risks, odds ratio, risk ratio and difference, chi-squared and Fisher's test.

    Parameters
    ----------
    a, b, c, d : int
        Exposed with and without the event, unexposed with and without it (people).
    design : str
        ``cohort``, ``cross-sectional`` and ``survey`` have risks (or prevalences, by the same
        formula); ``case-control`` has the odds ratio alone.
    confidence : float
        In percent.

    Returns
    -------
    tree.FourfoldTable
        With a zero cell the odds ratio has no estimate and one conditional exact limit; nothing
        is ever added to a cell. ``note`` is then ``zero cell``; with an empty row or column it
        is ``empty margin`` and there is no measure of association.

    References
    ----------
    Woolf (1955). Ann Hum Genet 19, 251-253.
    Newcombe (1998). Stat Med 17, 873-890.
    """
    exposed, unexposed, events, total = a + b, c + d, a + c, a + b + c + d
    empty = 0 in (exposed, unexposed, events, b + d)
    note = "empty margin" if empty else "zero cell" if 0 in (a, b, c, d) else None
    chi_squared = None
    if not empty:
        # Ratios of margins first: the product of four of them may pass 2**63 in other tools.
        chi_squared = total * (a * d - b * c) ** 2 / (exposed * unexposed * events * (b + d))
    known_risks = design != "case-control"
    return tree.FourfoldTable(
        exposure=exposure,
        label=label or exposure,
        exposed_label=exposed_label,
        unexposed_label=unexposed_label,
        a=a,
        b=b,
        c=c,
        d=d,
        risk_exposed=wilson(a, exposed, confidence) if known_risks else None,
        risk_unexposed=wilson(c, unexposed, confidence) if known_risks else None,
        odds_ratio=None if empty else odds_ratio(a, b, c, d, confidence),
        risk_ratio=risk_ratio(a, b, c, d, confidence) if known_risks and not empty else None,
        risk_difference=(
            newcombe(a, exposed, c, unexposed, confidence) if known_risks and exposed and unexposed else None
        ),
        chi_squared=chi_squared,
        chi_squared_p=None if chi_squared is None else float(chdtrc(1, chi_squared)),
        fisher_p=hypergeometric.fisher(a, b, c, d) if not empty else None,
        smallest_expected=(min(exposed, unexposed) * min(events, total - events) / total if total else None),
        note=note,
    )


def odds_ratio(a: int, b: int, c: int, d: int, confidence: float = 95.0) -> tree.Interval:
    """Sample odds ratio with Woolf's interval; with a zero cell, the conditional exact limit alone.

    ``lower`` or ``upper`` is None where the limit is 0 or infinite.
    """
    if 0 in (a, b, c, d):
        lower, upper = hypergeometric.conditional_limits(a, b, c, d, confidence)
        return tree.Interval(lower=lower, upper=upper, method=CONDITIONAL)
    estimate = (a / b) * (d / c)
    half = normal_quantile(confidence) * math.sqrt(1 / a + 1 / b + 1 / c + 1 / d)
    return tree.Interval(
        estimate=estimate,
        lower=estimate * math.exp(-half),
        upper=estimate * math.exp(half),
        method=WOOLF,
    )


def risk_ratio(a: int, b: int, c: int, d: int, confidence: float = 95.0) -> tree.Interval:
    """Ratio of risks, interval on the log scale; without events on either side no interval.

    A ratio of 0 (no exposed event) is an estimate; one over 0 is not.
    """
    if c == 0:
        return tree.Interval(method=LOG_RATIO)
    estimate = a / (a + b) / (c / (c + d))
    if a == 0:
        return tree.Interval(estimate=estimate, method=LOG_RATIO)
    half = normal_quantile(confidence) * math.sqrt(1 / a - 1 / (a + b) + 1 / c - 1 / (c + d))
    return tree.Interval(
        estimate=estimate,
        lower=estimate * math.exp(-half),
        upper=estimate * math.exp(half),
        method=LOG_RATIO,
    )
