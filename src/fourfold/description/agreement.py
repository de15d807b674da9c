"""Whether the parts of a description agree with each other."""

from __future__ import annotations

from collections.abc import Iterator

from fourfold.description.agreement_conditions import check_exclusions
from fourfold.description.agreement_roles import check_roles
from fourfold.description.agreement_variables import check_variables
from fourfold.description.legible import Legible
from fourfold.description.node import Positions
from fourfold.errors import Problem


def disagreements(parts: Legible, positions: Positions) -> Iterator[Problem]:
    """Everything in one part that another part contradicts, at its position."""
    yield from check_variables(parts, positions)
    yield from check_roles(parts, positions)
    yield from check_exclusions(parts, positions)
