"""Rounding and number wording: every number a reader sees is made here, once, at the end.

Numbers are rounded half to even on the exact value of the double, so that the printed digits do
not depend on how a platform formats. The tree holds full precision; nothing is rounded twice.

Rules, after SAMPL (Lang & Altman 2013) and common practice:

=============== ================================================================================
P               two decimals; three from .001 to .01 and where two would read 0.05; below .001
                ``<0.001``; a P short of 1 that would read 1.00 is ``>0.99``
ratios          two decimals; one from 10; whole from 100; three significant figures under 0.1;
                ``<0.001`` and ``>1,000,000`` beyond what can be read
limits          the decimals of their estimate; more, up to four, where a limit that is not 1
                would read as 1, or would read as 0: a limit never hides on which side of 1 it lies
percentages     whole under 100 people, else one decimal; none under 20; what is neither nobody
                nor everybody never reads 0% or 100%
means           one decimal more than recorded, the standard deviation the same; no more than three
                significant digits of the standard deviation
other numbers   the decimals asked for; more, up to three, where a value that is not 0 would read
                as 0; exact zero is ``0``
=============== ================================================================================
"""

from __future__ import annotations

import math
from collections.abc import Callable, Mapping, Sequence
from dataclasses import dataclass
from decimal import ROUND_HALF_EVEN, Decimal, localcontext
from typing import Any

MINUS = "\N{MINUS SIGN}"
ABSENT = "\N{EM DASH}"

LEAST_FOR_PERCENT = 20
LEAST_FOR_DECIMAL = 100
LARGEST_RATIO = 1_000_000
SMALLEST_RATIO = Decimal("0.001")
LARGEST_PLAIN = Decimal("1e9")
SMALLEST_PLAIN = Decimal("1e-5")
MOST_LIMIT_DECIMALS = 4
MORE_DECIMALS = 3


@dataclass(frozen=True, slots=True)
class Withheld:
    """Stands for a hidden value where words are made from it: ``reason`` as in a ``hidden`` mapping.

    It is neither less nor more than any number, so that a text which asks says neither.
    """

    reason: str

    def __lt__(self, other: object) -> bool:
        return False

    __gt__ = __le__ = __ge__ = __lt__


Printable = float | Withheld | None


@dataclass(frozen=True, slots=True)
class Numbers:
    """Numbers of one study in print.

    Parameters
    ----------
    smallest_count : int
        Counts from 1 to one less are hidden; used in the wording of a hidden count only.
    fewer_than, hidden_word, absent, between : str
        How a hidden small count, another hidden value, a value that does not exist and the two
        limits of an interval are written in the language of the report.
    """

    smallest_count: int = 5
    fewer_than: str = "fewer than {limit}"
    hidden_word: str = "hidden"
    absent: str = ABSENT
    between: str = " to "

    def count(self, n: Printable, hidden: str | None = None) -> str:
        """A count of rows or people: ``1,204``, ``fewer than 5``, ``hidden`` or a dash.

        Parameters
        ----------
        n : int or None
        hidden : str or None
            Why ``n`` is None: ``small``, ``subtraction`` or ``derived``.
        """
        if n is None or isinstance(n, Withheld):
            if _reason(n, hidden) == "small":
                return self.fewer_than.format(limit=self.smallest_count)
            return self._missing(n, hidden)
        return _print(n, 0)

    def percent(
        self, share_percent: Printable, denominator: int | None = None, hidden: str | None = None
    ) -> str:
        """A percentage with its sign: ``37%``, ``12.4%``; empty where fewer than 20 people stand under it.

        Parameters
        ----------
        share_percent : float or None
            From 0 to 100.
        denominator : int or None
            People under the percentage. None for what is no share of counted people, such as a
            fitted risk: one decimal under 10% and above 90%, else whole.
        """
        if share_percent is None or isinstance(share_percent, Withheld):
            return self._missing(share_percent, hidden)
        share = _exact(share_percent)
        if denominator is not None:
            if denominator < LEAST_FOR_PERCENT:
                return ""
            decimals = 0 if denominator < LEAST_FOR_DECIMAL else 1
        else:
            decimals = 0 if share in (0, 100) or 10 <= share <= 90 else 1
        rounded = _round(share, decimals)
        step = Decimal(1).scaleb(-decimals)
        if rounded == 0 and share > 0:
            return f"<{_grouped(step)}%"
        if rounded == 100 and share < 100:
            return f">{_grouped(100 - step)}%"
        return f"{_grouped(rounded)}%"

    def risk(self, probability: Printable, denominator: int | None = None) -> str:
        """A probability from 0 to 1 as a percentage."""
        if probability is None or isinstance(probability, Withheld):
            return self._missing(probability, None)
        return self.percent(100 * probability, denominator)

    def odds_ratio(self, ratio: Printable, hidden: str | None = None) -> str:
        """An odds ratio, risk ratio or any other ratio without its interval."""
        if ratio is None or isinstance(ratio, Withheld):
            return self._missing(ratio, hidden)
        exact = _exact_ratio(ratio)
        return _beyond(exact) or _print(exact, _ratio_decimals(exact))

    def limit(self, value: Printable, like: Printable = None) -> str:
        """One limit of a ratio, with the decimals of the ratio it belongs to.

        A limit that is not 1 but would read as 1, or that would read as 0, is given more decimals.
        """
        if value is None or isinstance(value, Withheld):
            return self._missing(value, None)
        exact = _exact_ratio(value)
        beyond = _beyond(exact)
        if beyond:
            return beyond
        estimate = exact if like is None or isinstance(like, Withheld) else _exact_ratio(like)
        decimals = _ratio_decimals(estimate)
        for more in range(decimals, MOST_LIMIT_DECIMALS + 1):
            rounded = _round(exact, more)
            if rounded != 0 and (rounded != 1 or exact == 1):
                return _grouped(rounded)
        # Closer to 1 than four decimals tell: nothing is gained by more, so the estimate's are kept.
        return _print(exact, decimals)

    def interval(
        self, lower: Printable, upper: Printable, like: Printable = None, hidden: str | None = None
    ) -> str:
        """Limits of a ratio: ``1.16 to 5.64``, with the decimals of the estimate ``like``."""
        if not (_printed(lower) or _printed(upper)):
            return self._missing(lower if isinstance(lower, Withheld) else None, hidden)
        return f"{self.limit(lower, like)}{self.between}{self.limit(upper, like)}"

    def p_value(self, p: Printable, hidden: str | None = None) -> str:
        """A P-value alone: ``0.03``, ``0.052``, ``<0.001``, ``>0.99``; never 0.000."""
        sign, text = self._p(p, hidden)
        return f"{sign}{text}"

    def p_phrase(self, p: Printable, hidden: str | None = None) -> str:
        """A P-value in a sentence: ``P = 0.03``, ``P < 0.001``."""
        sign, text = self._p(p, hidden)
        return f"P {sign or '='} {text}" if _printed(p) else text

    def number(self, x: Printable, digits: int | None = None, hidden: str | None = None) -> str:
        """Any other number with ``digits`` decimals; None prints it as it was recorded.

        At most four decimals, or four significant figures under 0.1, are taken as recorded.
        """
        if x is None or isinstance(x, Withheld):
            return self._missing(x, hidden)
        exact = _exact(x)
        if exact == 0:
            return "0"
        if abs(exact) >= LARGEST_PLAIN or (digits is None and abs(exact) < SMALLEST_PLAIN):
            return _scientific(exact)
        if digits is None:
            return _grouped(_as_recorded(x))
        for more in range(digits, digits + MORE_DECIMALS + 1):
            if _round(exact, more) != 0:
                return _print(exact, more)
        step = Decimal(1).scaleb(-digits)
        return f"<{_grouped(step)}" if exact > 0 else f">{_grouped(-step)}"

    def recorded(self, decimals: int, sd: float | None) -> int:
        """Decimals to print values with: as recorded, but no finer than a hundredth of their spread.

        Computed columns carry digits that no one measured; the mean then shows three significant
        digits of the standard deviation (common practice).
        """
        if not sd:
            return decimals
        return max(0, min(decimals, 1 - math.floor(math.log10(sd))))

    def mean_sd(self, mean: Printable, sd: Printable, decimals: int, hidden: str | None = None) -> str:
        """Mean and standard deviation, ``54.3 (12.1)``, of values recorded to ``decimals``."""
        if mean is None or isinstance(mean, Withheld):
            return self._missing(mean, hidden)
        return f"{self.number(mean, decimals + 1)} ({self.number(sd, decimals + 1)})"

    def _p(self, p: Printable, hidden: str | None) -> tuple[str, str]:
        if p is None or isinstance(p, Withheld):
            return "", self._missing(p, hidden)
        exact = _exact(p)
        if not 0 <= exact <= 1:
            raise ValueError(f"a P-value lies between 0 and 1, not {p!r}")
        if exact < Decimal("0.001"):
            return "<", "0.001"
        two = _round(exact, 2)
        if two == 1 and exact < 1:
            return ">", "0.99"
        if exact < Decimal("0.01") or two == Decimal("0.05"):
            return "", _print(exact, 3)
        return "", _grouped(two)

    def _missing(self, value: Withheld | None, hidden: str | None) -> str:
        return self.absent if _reason(value, hidden) is None else self.hidden_word


def join_words(words: Sequence[str], last: str = " and ") -> str:
    """Words as a sentence joins them: ``a``, ``a and b``, ``a, b and c``."""
    if len(words) < 2:
        return "".join(words)
    return ", ".join(words[:-1]) + last + words[-1]


def filters(numbers: Numbers, labels: Mapping[str, str] | None = None) -> dict[str, Callable[..., Any]]:
    """Filters for templates: the same rounding in sentences as in tables.

    Parameters
    ----------
    numbers : Numbers
    labels : mapping or None
        Variable name -> label.
    """
    named = labels or {}
    return {
        "count": numbers.count,
        "percent": numbers.percent,
        "odds": numbers.odds_ratio,
        "interval": lambda pair, like=None: numbers.interval(pair[0], pair[1], like),
        "p": numbers.p_value,
        "p_phrase": numbers.p_phrase,
        "number": numbers.number,
        "label": lambda name: named.get(name, name),
        "join_words": join_words,
    }


def _printed(value: Printable) -> bool:
    return value is not None and not isinstance(value, Withheld)


def _reason(value: Withheld | None, hidden: str | None) -> str | None:
    return value.reason if isinstance(value, Withheld) else hidden


def _exact(x: float) -> Decimal:
    value = float(x) if not isinstance(x, int) else x
    if isinstance(value, float) and not math.isfinite(value):
        raise ValueError(f"{x!r} has no digits to print; what does not exist is None in the results")
    return Decimal(value)


def _exact_ratio(x: float) -> Decimal:
    exact = _exact(x)
    if exact < 0:
        raise ValueError(f"a ratio is never negative, but {x!r} is")
    return exact


def _round(exact: Decimal, decimals: int) -> Decimal:
    with localcontext() as context:
        # Doubles reach 1,075 significant decimal digits; the default precision of 28 would fail.
        context.prec = 1200
        return exact.quantize(Decimal(1).scaleb(-decimals), rounding=ROUND_HALF_EVEN)


def _grouped(rounded: Decimal) -> str:
    text = f"{abs(rounded):,f}"
    return f"{MINUS}{text}" if rounded < 0 else text


def _print(x: float | Decimal, decimals: int) -> str:
    return _grouped(_round(x if isinstance(x, Decimal) else _exact(x), decimals))


def _ratio_decimals(exact: Decimal) -> int:
    if exact == 0:
        return 2
    # The class is that of the rounded value: 9.996 is printed 10.0, not 10.00.
    if _round(exact, 2) >= 10:
        return 1 if _round(exact, 1) < 100 else 0
    if exact >= Decimal("0.1"):
        return 2
    if exact < SMALLEST_RATIO:
        return 3
    figures = 2 - exact.adjusted()
    return figures if _round(exact, figures) < Decimal("0.1") else 2


def _beyond(exact: Decimal) -> str | None:
    if 0 < exact < SMALLEST_RATIO:
        return "<0.001"
    return f">{LARGEST_RATIO:,}" if exact > LARGEST_RATIO else None


def _as_recorded(x: float) -> Decimal:
    shortest = Decimal(repr(float(x))) if not isinstance(x, int) else Decimal(x)
    most = 4 if abs(shortest) >= Decimal("0.1") else 3 - shortest.adjusted()
    exponent = shortest.as_tuple().exponent
    if isinstance(exponent, int) and -exponent > most:
        shortest = _round(_exact(x), most)
    return shortest.normalize()


def _scientific(exact: Decimal) -> str:
    power = exact.adjusted()
    mantissa = _round(exact.scaleb(-power), 1)
    if abs(mantissa) >= 10:
        power, mantissa = power + 1, mantissa / 10
    # A caret, since few fonts have all the raised digits.
    return f"{_grouped(_round(mantissa, 1))} × 10^{_grouped(Decimal(power))}"
