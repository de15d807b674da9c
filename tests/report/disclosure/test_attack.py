"""Random small studies against an attacker who puts every shown number into one set of equations.

The attacker (attacker.py) shares nothing with the program: his unknowns are the people of each
kind, and he solves for each hidden count by integer programming. METHODS of disclosure control:
Fischetti & Salazar (2001), Manage Sci 47, 1008-1027; Hundepool et al. (2012), Statistical
Disclosure Control.
"""

from __future__ import annotations

import itertools
import random
from dataclasses import replace

import pytest
from tests.report.disclosure.attacker import Attack, Person, Statement
from tests.report.disclosure.study import Shape, rows_of, tree_of

from fourfold.report.disclosure import hide
from fourfold.report.disclosure.audit import audit
from fourfold.results import tree


def random_shape(seed: int) -> Shape:
    """Small studies of every sort: few or many people, rare or common events, gaps or none."""
    rng = random.Random(seed)
    return Shape(
        people=rng.choice([40, 80, 120, 300]),
        levels=rng.choice([(2,), (2, 3), (3, 2), (2, 2, 2), (2, 2), (2, 4)]),
        quantities=0,
        missing=rng.choice([0, 0.005, 0.02, 0.05]),
        event=rng.choice([0.1, 0.25, 0.5]),
        design=rng.choice(["cohort", "case-control"]),
        excluded=rng.choice([0, 2, 9]),
        limit=rng.choice([3, 5, 5, 10]),
        hide_zero=rng.random() < 0.1,
    )


def study(seed: int) -> tuple[Shape, tree.Results]:
    shape = random_shape(seed)
    return shape, replace(tree_of(shape, rows_of(shape, seed)), risk_distribution=[])


def kinds(shape: Shape) -> list[Person]:
    """Every kind of person there could be."""
    axes = [["yes", "no", None]]
    for count in shape.levels:
        axes.append([*(["yes", "no"] if count == 2 else [f"l{k}" for k in range(count)]), None])
    names = ["outcome", *(f"c{place}" for place in range(len(shape.levels)))]
    return [dict(zip(names, values, strict=True)) for values in itertools.product(*axes)]


def leaks(seed: int) -> list[str]:
    """What the attacker finds out about small counts, in words; nothing if all is well."""
    shape, truth = study(seed)
    hidden = hide(truth)
    attack = Attack(hidden, truth, kinds(shape))
    least = 0 if shape.hide_zero else 1
    found = []
    for one, true, row in attack.hidden():
        if not least <= true < shape.limit:
            continue
        low, high = attack.range_of(row)
        if not safe(one, low, high, least, shape.limit):
            found.append(f"seed {seed}: {one.where} is {true}, found to lie in {low} to {high}")
    return found


def safe(one: Statement, low: float, high: float, least: int, limit: int) -> bool:
    """Could a small count still be any small count?

    One that is not marked small, because it is the sum of several that are, is at least their
    number; it must then be open as far as the limit and beyond.
    """
    if low <= least and high >= limit - 1:
        return True
    return one.reason != "small" and high >= limit and high - low >= limit - 2


@pytest.mark.parametrize("first", range(0, 60, 10))
def test_no_small_count_can_be_worked_out(first: int) -> None:
    assert [leak for seed in range(first, first + 10) for leak in leaks(seed)] == []


@pytest.mark.campaign
@pytest.mark.parametrize("first", range(1000, 1800, 50))
def test_no_small_count_can_be_worked_out_in_many_studies(first: int) -> None:
    assert [leak for seed in range(first, first + 50) for leak in leaks(seed)] == []


def test_counts_hidden_for_others_stay_open_over_the_limit() -> None:
    for seed in range(25):
        shape, truth = study(seed)
        attack = Attack(hide(truth), truth, kinds(shape), marks=False)
        for one, true, row in attack.hidden():
            if one.reason == "subtraction" and true >= shape.limit:
                low, high = attack.range_of(row)
                assert high > low, (seed, one.where, true)


def test_no_small_count_is_shown_anywhere() -> None:
    for seed in range(100):
        shape, truth = study(seed)
        least = 0 if shape.hide_zero else 1
        attack = Attack(hide(truth), truth, kinds(shape)[:1])
        shown = [one for one in attack.found if one.value is not None]
        assert not [one.where for one in shown if least <= (one.value or 0) < shape.limit], seed


def test_hiding_again_changes_nothing() -> None:
    for seed in range(40):
        _, truth = study(seed)
        once = hide(truth)
        assert hide(once) == once, seed


def test_the_same_people_are_hidden_everywhere_or_nowhere() -> None:
    for seed in range(40):
        shape, truth = study(seed)
        attack = Attack(hide(truth), truth, kinds(shape))
        by_people: dict[bytes, set[bool]] = {}
        for one, row in zip(attack.found, attack.matrix, strict=True):
            by_people.setdefault(row.tobytes(), set()).add(one.value is None)
        # A count of nobody is a zero whoever was looked for: shown unless zeros are hidden.
        mixed = [key for key, hidden in by_people.items() if len(hidden) > 1]
        assert not mixed, seed


def test_the_auditor_agrees_and_sees_what_is_given_away() -> None:
    given_away = 0
    for seed in range(25):
        _, truth = study(seed)
        hidden = hide(truth)
        assert not [leak for leak in audit(hidden, truth) if leak.small], seed
        flow = hidden.participants
        if flow.hidden.get("incomplete") == "small" and "eligible" in flow.hidden:
            shown = replace(
                flow,
                eligible=truth.participants.eligible,
                analysed=truth.participants.analysed,
                hidden={key: why for key, why in flow.hidden.items() if key not in ("eligible", "analysed")},
            )
            found = audit(replace(hidden, participants=shown), truth)
            assert any(leak.key == ("flow", "incomplete") for leak in found), seed
            given_away += 1
    assert given_away > 2
