"""A difference of a quantity after "per": never "per 1 days"."""

from __future__ import annotations

import pytest

from fourfold.report.words import step_of


@pytest.mark.parametrize(
    ("step", "unit", "said"),
    [
        ("10", "years", "10 years"),
        ("1", "years", "year"),
        ("1", "admissions", "admission"),
        ("1", "classes", "class"),
        ("1", "pregnancies", "pregnancy"),
        ("1", "kg/m²", "kg/m²"),
        ("1", "degrees Celsius", "degrees Celsius"),
        ("1", None, "unit"),
        ("5", None, "5"),
        ("0.1", "mmol/L", "0.1 mmol/L"),
    ],
)
def test_step(step, unit, said):
    assert step_of("en", step, unit) == said
