"""The fourfold table of each binary exposure in the analysis set."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np
from numpy.typing import NDArray

from fourfold.data.columns import Rows
from fourfold.measures.fourfold_table import fourfold_table
from fourfold.results import tree


def fourfold_tables(
    rows: Rows,
    event: NDArray[np.bool_],
    variables: Sequence[tree.Variable],
    design: str,
    analysis: tree.Analysis,
) -> list[tree.FourfoldTable]:
    """One table for each binary exposure (or predictor), cells counted in people."""
    found = []
    for variable in variables:
        if variable.kind != "binary" or variable.role not in ("exposure", "predictor"):
            continue
        exposed = rows.columns[variable.name].values == 1
        a, b = rows.count(exposed & event), rows.count(exposed & ~event)
        c, d = rows.count(~exposed & event), rows.count(~exposed & ~event)
        found.append(
            fourfold_table(
                a,
                b,
                c,
                d,
                design,
                analysis.confidence,
                exposure=variable.name,
                label=variable.label,
                exposed_label=variable.present or "present",
                unexposed_label=variable.reference or "absent",
            )
        )
    return found
