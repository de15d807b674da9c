"""How the variables in the model were arrived at, and why they are there."""

from __future__ import annotations

from fourfold.findings import asked
from fourfold.findings.entry import CONCERN, REMARK, SERIOUS, Entry, Noticed
from fourfold.results import tree

BY_P_VALUES = ("stepwise", "univariable screening")


def p_values(results: tree.Results) -> Noticed | None:
    method = results.analysis.selection
    return Noticed(SERIOUS, {"method": method}) if method in BY_P_VALUES else None


def hidden(results: tree.Results) -> Noticed | None:
    """Selection that the reader cannot judge: unstated, or of candidates that are not counted."""
    method, candidates = results.analysis.selection, results.analysis.candidates
    size = results.sample_size
    columns = size.fitted_parameters if size is not None else None
    if method is None:
        why = "unstated"
    elif method != "beforehand" and candidates is None:
        why = "uncounted"
    elif candidates is not None and columns is not None and candidates > columns:
        why = "more"
    else:
        return None
    return Noticed(CONCERN, {"why": why, "method": method, "candidates": candidates, "fitted": columns})


def no_reason(results: tree.Results) -> Noticed | None:
    bare = [variable.name for variable in asked.of_role(results, "covariate") if not variable.reason]
    return Noticed(REMARK, {"names": bare}, bare) if bare else None


def unplanned(results: tree.Results) -> Noticed | None:
    late = [variable for variable in asked.modelled(results) if variable.planned is False]
    if not late:
        return None
    names = [variable.name for variable in late]
    leads = any(variable.role in asked.LEADING for variable in late)
    return Noticed(CONCERN if leads else REMARK, {"names": names, "leads": leads}, names)


def nothing(results: tree.Results) -> Noticed | None:
    if asked.prediction(results) or asked.of_role(results, "covariate"):
        return None
    exposures = [variable.name for variable in asked.of_role(results, "exposure")]
    return Noticed(CONCERN, {"exposures": len(exposures)}, exposures) if exposures else None


ENTRIES = (
    Entry(
        id="SEL-p-values",
        section="methods",
        source="PROBAST (Wolff et al. 2019, Ann Intern Med 170:51-58); Heinze, Wallisch & Dunkler 2018, "
        "Biom J 60:431-49",
        rule=p_values,
    ),
    Entry(
        id="SEL-hidden",
        section="methods",
        source="PROBAST (Wolff et al. 2019, Ann Intern Med 170:51-58)",
        rule=hidden,
    ),
    Entry(
        id="ADJ-no-reason",
        section="methods",
        source="STROBE item 16a (von Elm et al. 2007, PLoS Med 4:e296); "
        "VanderWeele 2019, Eur J Epidemiol 34:211-9",
        rule=no_reason,
    ),
    Entry(
        id="ADJ-unplanned",
        section="methods",
        source="STROBE items 12 and 17 (Vandenbroucke et al. 2007, PLoS Med 4:e297)",
        rule=unplanned,
    ),
    Entry(
        id="ADJ-nothing",
        section="results",
        source="STROBE items 12a and 16a (von Elm et al. 2007, PLoS Med 4:e296)",
        rule=nothing,
    ),
)
