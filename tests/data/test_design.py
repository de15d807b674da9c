"""The design: shapes of quantities, indicator columns, blocks."""

from __future__ import annotations

from dataclasses import replace
from typing import Any

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from fourfold.data import design
from fourfold.data.columns import Column, Rows
from fourfold.data.quantiles import PLACES, quantile, spline_knots
from fourfold.data.shapes import restricted_cubic_spline
from fourfold.errors import DataError
from fourfold.results import tree

N = 301
RANDOM = np.random.default_rng(11)
X = RANDOM.gamma(3, 8, N).round(1) + 0.1
WARD = RANDOM.integers(0, 3, N).astype(float)
SMOKER = RANDOM.integers(0, 2, N).astype(float)


def rows() -> Rows:
    columns = {
        "x": Column("x", "x", "quantity", X),
        "ward": Column("ward", "Ward", "category", WARD, ("North", "South", "East", "Closed")),
        "smoker": Column("smoker", "Smoker", "binary", SMOKER, ("no", "yes")),
    }
    return Rows(columns, None, np.arange(N))


def variable(name: str, kind: str, **keys: Any) -> tree.Variable:
    return replace(tree.Variable(name=name, label=name, role="covariate", kind=kind), **keys)


WARDS = variable("ward", "category", reference="South")
SMOKES = variable("smoker", "binary", reference="no", present="yes")
SPLINE = variable("x", "quantity", shape="spline", knots=[10.0, 20.0, 40.0, 60.0], unit="mg")


def test_spline_columns_against_worked_values() -> None:
    # Computed independently for knots 10 20 40 60; the cubic terms scaled by (60 - 10)^2.
    found = restricted_cubic_spline(np.array([50.0, 70.0, 80.0]), [10, 20, 40, 60])
    assert found == pytest.approx(np.array([[50, 24.6, 10.0], [70, 60.0, 28.8], [80, 78.0, 38.4]]), rel=1e-12)


def test_spline_columns_equal_those_of_natural_cubic_interpolation() -> None:
    """Harrell's columns span the natural cubic splines: SciPy's interpolant is reproduced exactly."""
    from scipy.interpolate import CubicSpline

    knots = np.array([3.0, 8.0, 13.0, 30.0, 41.0])
    natural = CubicSpline(knots, RANDOM.normal(size=5), bc_type="natural")
    at = np.linspace(3, 41, 200)
    X = np.column_stack([np.ones(200), restricted_cubic_spline(at, knots)])
    coefficients = np.linalg.lstsq(X, natural(at), rcond=None)[0]
    assert X @ coefficients == pytest.approx(natural(at), abs=1e-9)


@given(
    st.lists(st.integers(0, 3), min_size=1, max_size=60).filter(any), st.lists(st.floats(0, 1), min_size=1)
)
def test_quantiles_with_counts_are_those_of_the_rows_written_out(
    counts: list[int], places: list[float]
) -> None:
    values = np.random.default_rng(3).normal(size=len(counts))
    weighted = quantile(values, places, np.array(counts))
    # Type 7, NumPy's own; interpolation may differ in the last bit.
    assert weighted == pytest.approx(np.quantile(np.repeat(values, counts), places), rel=1e-9, abs=1e-12)


@pytest.mark.parametrize("number", PLACES)
def test_knots_stand_at_the_stated_quantiles(number: int) -> None:
    assert spline_knots("x", X, number) == pytest.approx(np.quantile(X, PLACES[number]))


def test_outer_knots_of_few_people_are_the_fifth_from_each_end() -> None:
    few = np.sort(np.random.default_rng(5).normal(size=60))
    knots = spline_knots("x", few, 4)
    assert (knots[0], knots[-1]) == pytest.approx((few[4], few[-5]))
    assert knots[1:3] == pytest.approx(np.quantile(few, [0.35, 0.65]))


def test_knots_that_fall_together_are_refused() -> None:
    with pytest.raises(DataError, match="needs more different values"):
        spline_knots("x", np.repeat([1.0, 2.0], 200), 3)


@pytest.mark.parametrize("width", [1, 7, 100, 301, 4096])
def test_blocks_hold_the_matrix_and_zeros_beyond_it(width: int) -> None:
    built = design.build(rows(), [SPLINE, WARDS, SMOKES], width)
    spline = restricted_cubic_spline(X, SPLINE.knots)
    # By hand: South is the reference; Closed has no row and no column.
    expected = np.column_stack([np.ones(N), spline, WARD == 0, WARD == 2, SMOKER])
    assert built.blocks.shape == (-(-N // width), 7, width)
    assert np.array_equal(built.matrix(), expected)
    flat = built.blocks.transpose(1, 0, 2).reshape(7, -1)
    assert np.array_equal(flat[:, :N], expected.T)
    assert not flat[:, N:].any()


def test_names_terms_and_words_of_the_columns() -> None:
    built = design.build(rows(), [SPLINE, WARDS, SMOKES])
    names = ("(intercept)", "x", "x (spline 2)", "x (spline 3)", "ward: North", "ward: East", "smoker")
    assert built.parameters == names
    assert len(built.coding) == len(built.parameters)
    assert [term.columns for term in built.terms] == [(1, 2, 3), (4, 5), (6,)]
    assert built.terms[1].levels == ("North", "East")
    assert built.terms[0].knots == (10, 20, 40, 60)
    assert built.coding[4] == "1 for North, 0 otherwise; reference South"
    assert built.coding[6] == "1 for yes, 0 for no"


@pytest.mark.parametrize(
    ("shape", "reference", "expected"),
    [
        ("linear", None, [X]),
        ("log2", "20", [np.log2(X)]),
        ("quadratic", "20.5", [X - 20.5, (X - 20.5) ** 2]),
    ],
)
def test_shapes_of_a_quantity(shape: str, reference: str | None, expected: list[np.ndarray]) -> None:
    built = design.build(rows(), [variable("x", "quantity", shape=shape, reference=reference)])
    assert np.array_equal(built.matrix()[:, 1:], np.column_stack(expected))


def test_basis_gives_the_columns_of_the_design() -> None:
    quadratic = variable("x", "quantity", shape="quadratic", reference="30")
    for chosen, values in ((SPLINE, X), (quadratic, X), (WARDS, WARD), (SMOKES, SMOKER)):
        built = design.build(rows(), [SMOKES, chosen] if chosen is not SMOKES else [chosen])
        term = built.terms[-1]
        assert np.array_equal(built.basis(term, values), built.matrix()[:, list(term.columns)])


def test_a_subset_keeps_intercept_and_its_terms() -> None:
    built = design.build(rows(), [SPLINE, WARDS, SMOKES], 64)
    part = built.subset(["smoker", "x"])
    assert part.parameters == ("(intercept)", "x", "x (spline 2)", "x (spline 3)", "smoker")
    assert np.array_equal(part.matrix(), built.matrix()[:, [0, 1, 2, 3, 6]])
    assert [term.columns for term in part.terms] == [(1, 2, 3), (4,)]
    assert np.array_equal(part.basis(part.terms[0], X), built.matrix()[:, 1:4])


def test_a_single_level_becomes_a_column_of_ones() -> None:
    """Rank detection then names it: it can be computed from the intercept."""
    only = Rows({"ward": Column("ward", "Ward", "category", np.zeros(9), ("North",))}, None, np.arange(9))
    built = design.build(only, [variable("ward", "category", reference="North")])
    assert np.array_equal(built.matrix(), np.ones((9, 2)))
