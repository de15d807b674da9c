"""Rewriting of the tree: what is hidden becomes None, and its owner says why."""

from __future__ import annotations

import dataclasses
from collections.abc import Mapping
from typing import Any, TypeVar

from fourfold.report.disclosure.ledger import DERIVED, SMALL, Path

Tree = TypeVar("Tree")
Branches = dict[str | int, Any]


def hide_at(tree: Tree, reasons: Mapping[Path, str]) -> Tree:
    """A tree with None at each path; the nearest owner with a ``hidden`` mapping gets the reason.

    A list or mapping of which several places are hidden for different reasons is marked as hidden
    by subtraction: ``small`` is said only where all of it is.
    """
    branches: Branches = {}
    for path, reason in reasons.items():
        at = branches
        for step in path[:-1]:
            at = at.setdefault(step, {})
        at[path[-1]] = reason
    answer: Tree = _hide(tree, branches)[0]
    return answer


def round_at(tree: Tree, decimals: Mapping[Path, int]) -> Tree:
    """A tree with the doubles at these paths rounded."""
    for path, digits in decimals.items():
        tree = _replaced(tree, path, digits)
    return tree


def _hide(value: Any, branches: Branches | str) -> tuple[Any, set[str]]:
    """The value with its branches hidden, and the reasons that its owner has to tell."""
    if isinstance(branches, str):
        return None, {branches} if value is not None else set()
    if dataclasses.is_dataclass(value) and not isinstance(value, type):
        changed: dict[str, Any] = {}
        told: dict[str, str] = {}
        for name, below in branches.items():
            before = getattr(value, str(name))
            changed[str(name)], reasons = _hide(before, below)
            if reasons:
                told[str(name)] = _one(reasons)
        if not hasattr(value, "hidden"):
            return dataclasses.replace(value, **changed), set(told.values())
        if told:
            changed["hidden"] = {**value.hidden, **told}
        return dataclasses.replace(value, **changed), set()
    if isinstance(value, list):
        new = list(value)
        all_reasons: set[str] = set()
        for place, below in branches.items():
            new[int(place)], reasons = _hide(value[int(place)], below)
            all_reasons |= reasons
        return new, all_reasons
    if isinstance(value, dict):
        mapping = dict(value)
        all_reasons = set()
        for key, below in branches.items():
            mapping[key], reasons = _hide(value[key], below)
            all_reasons |= reasons
        return mapping, all_reasons
    return value, set()


def _one(reasons: set[str]) -> str:
    if len(reasons) == 1:
        return next(iter(reasons))
    return DERIVED if SMALL not in reasons and "subtraction" not in reasons else "subtraction"


def _replaced(value: Any, path: Path, digits: int) -> Any:
    if not path:
        return None if value is None else round(value, digits)
    step, rest = path[0], path[1:]
    if isinstance(value, list):
        new = list(value)
        new[int(step)] = _replaced(value[int(step)], rest, digits)
        return new
    below = _replaced(getattr(value, str(step)), rest, digits)
    return dataclasses.replace(value, **{str(step): below})
