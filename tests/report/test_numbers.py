"""Rounding and number wording.

The rules are those of SAMPL (Lang & Altman 2013) where it has one, else common practice; each
expected text here is worked out by hand from the rule, or by exact fractions.
"""

from __future__ import annotations

import re
from fractions import Fraction

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from fourfold.report.numbers import ABSENT, MINUS, Numbers, Withheld, filters, join_words

say = Numbers(5)
ratios = st.floats(min_value=1e-6, max_value=1e7, allow_nan=False)
chances = st.floats(min_value=0, max_value=1)


def value(text: str) -> Fraction:
    """The number that a printed text stands for."""
    return Fraction(text.replace(",", "").replace(MINUS, "-"))


def decimals(text: str) -> int:
    return len(text.partition(".")[2])


def nearest(exact: Fraction, places: int) -> Fraction:
    """Half to even, by fractions: Python rounds a Fraction exactly."""
    return Fraction(round(exact * 10**places), 10**places)


@pytest.mark.parametrize(
    ("p", "printed", "phrase"),
    [
        (0.0, "<0.001", "P < 0.001"),
        (0.00099999, "<0.001", "P < 0.001"),
        (0.001, "0.001", "P = 0.001"),
        (0.0049, "0.005", "P = 0.005"),
        (0.00996, "0.010", "P = 0.010"),
        (0.0123, "0.01", "P = 0.01"),
        (0.0449, "0.04", "P = 0.04"),
        (0.0463, "0.046", "P = 0.046"),
        (0.0499, "0.050", "P = 0.050"),
        (0.0537, "0.054", "P = 0.054"),
        (0.0551, "0.06", "P = 0.06"),
        (0.0999, "0.10", "P = 0.10"),
        (0.125, "0.12", "P = 0.12"),
        (0.375, "0.38", "P = 0.38"),
        (0.9949, "0.99", "P = 0.99"),
        (0.9999, ">0.99", "P > 0.99"),
        (1.0, "1.00", "P = 1.00"),
    ],
)
def test_p_values(p: float, printed: str, phrase: str) -> None:
    assert say.p_value(p) == printed
    assert say.p_phrase(p) == phrase


@given(chances)
def test_a_p_value_never_reads_as_zero_and_never_crosses_a_twentieth(p: float) -> None:
    text = say.p_value(p)
    assert value(text.lstrip("<>")) > 0
    assert text != "0.05"
    if text[0].isdigit():
        assert value(text) == nearest(Fraction(p), decimals(text))
        # What is clearly on one side of 0.05 is printed there.
        assert (value(text) < Fraction(5, 100)) <= (p < 0.05)
        assert (value(text) > Fraction(5, 100)) <= (p > 0.05)


@given(chances, chances)
def test_p_values_keep_their_order(p: float, q: float) -> None:
    def key(text: str) -> Fraction:
        step = {"<": -1, ">": 1}.get(text[0], 0)
        return value(text.lstrip("<>")) + Fraction(step, 10_000)

    low, high = sorted((p, q))
    assert key(say.p_value(low)) <= key(say.p_value(high))


@pytest.mark.parametrize("p", [-0.1, 1.01])
def test_what_is_no_probability_is_refused(p: float) -> None:
    with pytest.raises(ValueError, match="between 0 and 1"):
        say.p_value(p)


@pytest.mark.parametrize(
    ("ratio", "printed"),
    [
        (0.0, "0.00"),
        (0.0000004, "<0.001"),
        (0.00123456, "0.00123"),
        (0.04567, "0.0457"),
        (0.09996, "0.10"),
        (0.1, "0.10"),
        (0.125, "0.12"),
        (1.0, "1.00"),
        (1.005, "1.00"),
        (2.519, "2.52"),
        (9.994, "9.99"),
        (9.996, "10.0"),
        (12.34, "12.3"),
        (99.96, "100"),
        (123.5, "124"),
        (1234.5, "1,234"),
        (1_000_000.0, "1,000,000"),
        (1_000_001.0, ">1,000,000"),
    ],
)
def test_odds_ratios(ratio: float, printed: str) -> None:
    assert say.odds_ratio(ratio) == printed


@given(ratios)
def test_an_odds_ratio_is_the_nearest_number_with_the_decimals_of_its_size(ratio: float) -> None:
    text = say.odds_ratio(ratio)
    if text[0] in "<>":
        assert ratio < 0.001 or ratio > 1_000_000
        return
    assert value(text) == nearest(Fraction(ratio), decimals(text))
    size = value(text)
    if size >= 100:
        assert decimals(text) == 0
    elif size >= 10:
        assert decimals(text) == 1
    elif size >= Fraction(1, 10):
        assert decimals(text) == 2
    else:
        assert len(text.lstrip("0.")) == 3


def test_limits_have_the_decimals_of_their_estimate() -> None:
    assert say.interval(1.1580495, 5.6443, like=2.5168) == "1.16 to 5.64"
    assert say.interval(4.51, 33.7, like=12.3) == "4.5 to 33.7"
    assert say.interval(15.3, 962.8, like=120) == "15 to 963"
    assert say.interval(0.0123, 0.169, like=0.0456) == "0.0123 to 0.1690"
    assert say.interval(0.2, 31.06, like=2.5) == "0.20 to 31.06"


def test_a_limit_that_is_not_one_does_not_read_as_one() -> None:
    assert say.interval(1.003, 1.56, like=1.25) == "1.003 to 1.56"
    assert say.interval(0.71, 0.9996, like=0.84) == "0.71 to 0.9996"
    assert say.interval(1.0, 1.56, like=1.25) == "1.00 to 1.56"
    # Nearer than four decimals tell: the estimate's decimals, as for any other limit.
    assert say.interval(1.00001, 1.56, like=1.25) == "1.00 to 1.56"


def test_a_limit_that_is_not_zero_does_not_read_as_zero() -> None:
    assert say.interval(0.4, 9600.0, like=120.0) == "0.4 to 9,600"
    assert say.interval(0.0004, 2.0, like=0.5) == "<0.001 to 2.00"


@given(ratios, ratios)
def test_a_printed_limit_lies_on_the_side_of_one_where_it_is(limit: float, estimate: float) -> None:
    text = say.limit(limit, like=estimate)
    if text[0].isdigit() and abs(limit - 1) > 1e-4:
        assert (value(text) > 1) == (limit > 1)
        assert value(text) > 0


@pytest.mark.parametrize(
    ("share", "n", "printed"),
    [
        (50.0, 19, ""),
        (50.0, 20, "50%"),
        (12.5, 99, "12%"),
        (37.5, 99, "38%"),
        (12.345, 100, "12.3%"),
        (0.0, 1000, "0.0%"),
        (100.0, 1000, "100.0%"),
        (0.01, 10_000, "<0.1%"),
        (99.99, 10_000, ">99.9%"),
        (0.3, 50, "<1%"),
        (37.2, None, "37%"),
        (3.72, None, "3.7%"),
        (97.26, None, "97.3%"),
        (0.0, None, "0%"),
        (0.004, None, "<0.1%"),
    ],
)
def test_percentages(share: float, n: int | None, printed: str) -> None:
    assert say.percent(share, n) == printed
    assert say.risk(share / 100, n) in (printed, say.percent(100 * (share / 100), n))


@given(st.integers(20, 10**6).flatmap(lambda n: st.tuples(st.integers(0, n), st.just(n))))
def test_nobody_and_everybody_are_not_rounded_to(count: tuple[int, int]) -> None:
    k, n = count
    text = say.percent(100 * k / n, n)
    assert (text.rstrip("%") in ("0", "0.0")) == (k == 0)
    assert (text.rstrip("%") in ("100", "100.0")) == (k == n)


def test_counts_have_separators() -> None:
    assert [say.count(n) for n in (0, 7, 999, 1000, 1234567)] == ["0", "7", "999", "1,000", "1,234,567"]


def test_hidden_and_absent_values_are_told_apart() -> None:
    assert say.count(None) == ABSENT
    assert say.count(None, "small") == "fewer than 5"
    assert Numbers(11).count(None, "small") == "fewer than 11"
    assert say.count(None, "subtraction") == say.count(None, "derived") == "hidden"
    assert say.odds_ratio(None) == say.p_value(None) == say.number(None, 1) == ABSENT
    assert say.odds_ratio(None, "derived") == say.percent(None, 50, "derived") == "hidden"
    assert say.interval(None, None) == ABSENT
    assert say.interval(None, None, hidden="derived") == "hidden"
    assert say.mean_sd(None, None, 1, "derived") == "hidden"
    assert say.p_phrase(None) == ABSENT


def test_withheld_values_print_as_hidden_and_compare_as_neither() -> None:
    withheld = Withheld("small")
    assert say.count(withheld) == "fewer than 5"
    assert say.count(Withheld("subtraction")) == "hidden"
    assert say.odds_ratio(withheld) == say.p_phrase(withheld) == say.risk(withheld) == "hidden"
    assert say.interval(withheld, withheld) == "hidden"
    assert [withheld < 1, withheld > 1, withheld <= 1, withheld >= 1] == [False] * 4


@pytest.mark.parametrize(
    ("x", "digits", "printed"),
    [
        (-2.345, 1, f"{MINUS}2.3"),
        (-1234.5, 0, f"{MINUS}1,234"),
        (0.0, 3, "0"),
        (-0.0, 1, "0"),
        (0.0003, 3, "0.0003"),
        (-0.04, 1, f"{MINUS}0.04"),
        (1e-12, 3, "<0.001"),
        (-1e-12, 3, f">{MINUS}0.001"),
        (10.0, None, "10"),
        (22.5, None, "22.5"),
        (27.333333333333332, None, "27.3333"),
        (0.000123456, None, "0.0001235"),
        (1_234_567, None, "1,234,567"),
        (2.5e17, 1, "2.5 × 10^17"),
        (9.97e12, 1, "1.0 × 10^13"),
        (1e-7, None, f"1.0 × 10^{MINUS}7"),
    ],
)
def test_other_numbers(x: float, digits: int | None, printed: str) -> None:
    assert say.number(x, digits) == printed


def test_means_have_one_decimal_more_than_was_recorded() -> None:
    assert say.mean_sd(54.25, 12.04, 0) == "54.2 (12.0)"
    assert say.mean_sd(3.14159, 0.5, 1) == "3.14 (0.50)"
    assert say.mean_sd(7.0, None, 0) == f"7.0 ({ABSENT})"


def test_computed_columns_are_not_printed_finer_than_their_spread() -> None:
    assert say.recorded(6, 3.18) == 1
    assert say.recorded(1, 0.042) == 1
    assert say.recorded(6, 0.0421) == 3
    assert say.recorded(2, 1192.7) == 0
    assert say.recorded(0, 12.0) == 0
    assert say.recorded(3, None) == 3


@given(st.floats(-1e8, 1e8), st.integers(0, 6))
def test_rounding_is_half_to_even_on_the_exact_double(x: float, digits: int) -> None:
    text = say.number(x, digits)
    if text[0] in "<>" or x == 0:
        assert abs(Fraction(x)) < Fraction(1, 10**digits)
        return
    assert value(text) == nearest(Fraction(x), decimals(text))
    assert decimals(text) >= digits or digits == 0


@given(st.floats(allow_nan=False, allow_infinity=False), st.integers(0, 4))
def test_nothing_prints_as_a_row_of_zeros_or_with_a_hyphen(x: float, digits: int) -> None:
    text = say.number(x, digits)
    assert "-" not in text
    assert not re.fullmatch(rf"{MINUS}?0\.0+", text)


@pytest.mark.parametrize("x", [float("nan"), float("inf"), -float("inf")])
def test_what_is_not_finite_is_refused(x: float) -> None:
    for said in (say.count, say.odds_ratio, say.number, say.percent, say.p_value):
        with pytest.raises(ValueError, match="no digits"):
            said(x)


def test_a_negative_ratio_is_refused() -> None:
    with pytest.raises(ValueError, match="never negative"):
        say.odds_ratio(-0.5)


def test_numbers_of_arrays_print_alike() -> None:
    assert say.count(np.int64(1200)) == "1,200"
    assert say.odds_ratio(np.float64(2.5168)) == "2.52"


def test_words_of_a_language_are_taken_from_it() -> None:
    there = Numbers(10, fewer_than="weniger als {limit}", hidden_word="verborgen", between=" bis ")
    assert there.count(None, "small") == "weniger als 10"
    assert there.odds_ratio(None, "derived") == "verborgen"
    assert there.interval(1.2, 3.4, like=2.0) == "1.20 bis 3.40"


def test_filters_print_as_the_numbers_do() -> None:
    by_name = filters(say, {"bmi": "Body-mass index"})
    assert set(by_name) == {
        "count", "percent", "odds", "interval", "p", "p_phrase", "number", "label", "join_words",
    }  # fmt: skip
    assert by_name["interval"]([1.16, 5.64], 2.5) == "1.16 to 5.64"
    assert by_name["p_phrase"](0.0004) == "P < 0.001"
    assert by_name["label"]("bmi") == "Body-mass index"
    assert by_name["label"]("unknown") == "unknown"


def test_words_are_joined() -> None:
    assert [join_words(words) for words in ([], ["a"], ["a", "b"], ["a", "b", "c"])] == [
        "", "a", "a and b", "a, b and c",
    ]  # fmt: skip
