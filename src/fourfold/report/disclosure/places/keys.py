"""Names of the counts: the same people counted under the same conditions have the same key.

A key says which people (eligible or analysed), of which level of which variable, with which
outcome. ``RECORDED`` and ``MISSING`` split by whether the value is known, ``ALL`` does not ask.
"""

from __future__ import annotations

from collections.abc import Iterable, Mapping
from dataclasses import dataclass

from fourfold.report.disclosure.ledger import Key
from fourfold.results import tree

EVENT, NONE, UNRECORDED = "event", "no event", "outcome missing"
RECORDED, MISSING, ALL = "recorded", "missing", "all"
PRESENT, ABSENT = "present", "absent"

ELIGIBLE, ANALYSED, BETWEEN = "eligible", "analysed", "between"
"""Who is counted; ``BETWEEN`` are the eligible with a known outcome who are not analysed."""

MODEL_ROLES = ("exposure", "predictor", "covariate")


def people(who: str, variable: str, level: str, outcome: str) -> Key:
    """People of ``who`` at a level of a variable, by outcome."""
    if level == ALL:
        variable = ""
    return who, variable, level, outcome


def everyone(who: str, outcome: str = ALL) -> Key:
    """People of ``who``, by outcome."""
    return people(who, "", ALL, outcome)


def jointly(who: str, first: tuple[str, str], second: tuple[str, str]) -> Key:
    """People at a level of one variable and a level of another, whatever their outcome."""
    (one, at), (two, there) = sorted((first, second))
    return who, one, at, two, there


@dataclass(frozen=True, slots=True)
class Names:
    """How levels are written in the tree -> how they are named in keys."""

    variables: Mapping[str, tree.Variable]
    outcome: str

    @classmethod
    def of(cls, results: tree.Results) -> Names:
        by_name = {variable.name: variable for variable in results.variables}
        outcome = next((one.name for one in results.variables if one.role == "outcome"), "")
        return cls(by_name, outcome)

    def level(self, variable: str, written: str | None) -> str:
        """A level as part of a key; of a binary variable, present or absent."""
        described = self.variables.get(variable)
        if described is not None and described.kind == "binary":
            present = written is None or written == (described.present or "present")
            return PRESENT if present else ABSENT
        return f"={written}"

    def categorical(self, variable: str) -> bool:
        described = self.variables.get(variable)
        return described is not None and described.kind in ("binary", "category", "ordered")

    def levels(self, variable: str, seen: Iterable[str] = ()) -> list[str]:
        """All levels of a categorical variable, those ``seen`` included."""
        described = self.variables.get(variable)
        if described is None:
            return list(dict.fromkeys(seen))
        if described.kind == "binary":
            return [PRESENT, ABSENT]
        return list(dict.fromkeys([*(f"={level}" for level in described.levels), *seen]))

    def reference(self, variable: str) -> str | None:
        """The level that others are compared with."""
        described = self.variables.get(variable)
        if described is None:
            return None
        if described.kind == "binary":
            return ABSENT
        return None if described.reference is None else f"={described.reference}"

    def in_model(self) -> list[str]:
        return [name for name, variable in self.variables.items() if variable.role in MODEL_ROLES]

    def dearer(self, variable: str) -> float:
        """A count of the exposure answers the question: it is the last to be hidden for others."""
        described = self.variables.get(variable)
        return 2.0 if described is not None and described.role in ("exposure", "outcome") else 1.0
