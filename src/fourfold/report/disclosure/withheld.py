"""Values of a finding for its words: hidden ones are there, but print as hidden."""

from __future__ import annotations

import re
from copy import deepcopy
from typing import Any

from fourfold.report.numbers import Withheld
from fourfold.results import tree


def values_of(finding: tree.Finding) -> dict[str, Any]:
    """The values of a finding with `Withheld` in the place of each hidden one.

    Places are written in the finding's ``hidden`` mapping like ``items[2].count``.
    """
    values = deepcopy(finding.values)
    for name, reason in finding.hidden.items():
        *before, last = [
            int(number) if number else word for word, number in re.findall(r"([^.\[\]]+)|\[(\d+)\]", name)
        ]
        owner: Any = values
        for step in before:
            owner = owner[step]
        if owner[last] is None:
            owner[last] = Withheld(reason)
    return values
