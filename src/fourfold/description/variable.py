"""A variable: one column of the data, or bands cut from one, and how it enters the analysis."""

from __future__ import annotations

from itertools import pairwise
from typing import Annotated, Any, Literal

from pydantic import Discriminator, PlainValidator, Tag, ValidationInfo, field_validator

from fourfold.description.scalars import (
    Code,
    Level,
    Number,
    Pair,
    Scalar,
    Text,
    Whole,
    expected,
    level,
    number,
    refusal,
)
from fourfold.description.section import Section, key
from fourfold.description.wording import quoted

FEWEST_KNOTS, MOST_KNOTS = 3, 7


def _increasing(values: list[float]) -> None:
    for before, after in pairwise(values):
        if after <= before:
            raise refusal(
                f"must increase from left to right; {after:g} follows {before:g}.", "Put them in order."
            )


class Spline(Section):
    """A restricted cubic spline."""

    knots: Annotated[
        Annotated[Whole, Tag("(how many)")] | Annotated[list[Number], Tag("(where)")],
        Discriminator(lambda value: "(where)" if isinstance(value, list | tuple) else "(how many)"),
    ] = key(
        "How many knots (3 to 7, placed at fixed quantiles of the analysis set), or a list of the values at "
        "which they stand.",
        example="variables:\n  bmi: {label: Body-mass index, kind: quantity, shape: {spline: {knots: 4}}}",
        default=4,
        otherwise="4.",
    )

    @field_validator("knots", mode="after")
    @classmethod
    def _possible(cls, knots: int | list[float]) -> int | list[float]:
        n = len(knots) if isinstance(knots, list) else knots
        if not FEWEST_KNOTS <= n <= MOST_KNOTS:
            raise refusal(
                f"must be {FEWEST_KNOTS} to {MOST_KNOTS}; found {n}.",
                "4 serve most quantities; 3 where there are few events.",
            )
        if isinstance(knots, list):
            _increasing(knots)
        return knots


class SplineShape(Section):
    """A curve that is smooth and straight at both ends."""

    spline: Spline = key(
        "A restricted cubic spline: a smooth curve that is straight below the first and above the last knot.",
        example="variables:\n  bmi: {label: Body-mass index, kind: quantity, shape: {spline: {knots: 4}}}",
    )


Shape = Annotated[
    Annotated[Literal["linear", "quadratic", "log2"], Tag("(word)")] | Annotated[SplineShape, Tag("(curve)")],
    Discriminator(
        lambda value: "(curve)" if isinstance(value, dict | SplineShape) else "(word)",
    ),
]


# As written; of a quantity it becomes a number.
Reference = Annotated[str | int | float, PlainValidator(level, json_schema_input_type=Scalar)]


class Variable(Section):
    """One column and how it enters the analysis."""

    kind: Literal["quantity", "category", "ordered", "binary", "date"] | None = key(
        "What the column holds: quantity (a number), category (names without order), ordered (names with "
        "an order), binary (two values) or date. Bands (`from:` and `cut:`) need none.",
        example="variables:\n  age: {label: Age, kind: quantity, unit: years}",
        default=None,
        otherwise="Required, but for bands.",
    )
    label: Text | None = key(
        "What the reader of the report sees.",
        example="variables:\n  age: {label: Age at operation, kind: quantity}",
        default=None,
        otherwise="The variable's name.",
    )
    column: Text | None = key(
        "The column's name in the data file, where it differs from the variable's.",
        example="variables:\n  age: {column: AGE_YRS, label: Age, kind: quantity}",
        default=None,
        otherwise="The variable's name.",
    )
    present: Level | None = key(
        "Of a binary variable: the value in the data that means yes (coded 1). The other is coded 0. Of the "
        "outcome it is the event.",
        example='variables:\n  smoker: {label: Current smoker, kind: binary, present: "yes"}',
        default=None,
        otherwise="Required for a binary variable.",
    )
    unit: Text | None = key(
        "The unit of a quantity, as printed.",
        example="variables:\n  bmi: {label: Body-mass index, kind: quantity, unit: kg/m2}",
        default=None,
        otherwise="No unit is printed, and a finding says so.",
    )
    per: Number | None = key(
        "The difference, in units of the quantity, that its odds ratio stands for.",
        example="variables:\n  age: {label: Age, kind: quantity, unit: years, per: 10}",
        default=None,
        otherwise="1 unit.",
    )
    plausible: Pair | None = key(
        "Lowest and highest value that can be true; values outside are counted and reported, not removed.",
        example="variables:\n  age: {label: Age, kind: quantity, plausible: [18, 105]}",
        default=None,
        otherwise="No value is held to be implausible.",
    )
    missing: list[Code] = key(
        "Values that mean 'not recorded' in this column, beside those under `data:`.",
        example="variables:\n  bmi: {label: Body-mass index, kind: quantity, missing: [99.9]}",
        factory=list,
        otherwise="Only those under `data:`.",
    )
    levels: list[Level] = key(
        "The values of a category, ordered or binary variable, exactly as they stand in the data; for an "
        "ordered one from lowest to highest. A value in the data that is not listed is an error.",
        example="variables:\n  ward: {label: Ward, kind: category, levels: [North, South, East]}",
        factory=list,
        otherwise="The values found in the data; those of an ordered variable must then be numbers.",
    )
    reference: Reference | None = key(
        "The level that the others are compared with; of a quantity with a curve, the value that the curve "
        "is compared with.",
        example="variables:\n  ward: {label: Ward, kind: category, levels: [North, South, East], "
        "reference: North}",
        default=None,
        otherwise="The most frequent level in the analysis set (of a curve, the median); the report says so.",
    )
    shape: Shape = key(
        "How the log odds change with a quantity: linear, quadratic, log2 (per doubling) or a spline.",
        example="variables:\n  bmi: {label: Body-mass index, kind: quantity, shape: {spline: {knots: 4}}}",
        default="linear",
        otherwise="linear; whether a straight line fits is then not tested, and a remark says so.",
    )
    from_: Text | None = key(
        "The quantity that these bands are cut from.",
        example="variables:\n  age: {label: Age, kind: quantity, unit: years}\n"
        "  age_band: {label: Age band, from: age, cut: [50, 65, 80]}",
        default=None,
        alias="from",
        otherwise="The variable is a column of its own.",
    )
    cut: list[Number] = key(
        "Where the bands are cut: each value begins a new band, so that [50, 65, 80] makes four bands: "
        "under 50, 50 to under 65, 65 to under 80, and 80 or more.",
        example="variables:\n  age: {label: Age, kind: quantity, unit: years}\n"
        "  age_band: {label: Age band, from: age, cut: [50, 65, 80]}",
        factory=list,
        otherwise="Required with `from:`.",
    )
    cut_chosen: Literal["beforehand", "from the data", "from the outcome"] | None = key(
        "How the cuts were chosen; cuts chosen by looking at the outcome make estimates too large.",
        example="variables:\n  age: {label: Age, kind: quantity, unit: years}\n"
        "  age_band: {label: Age band, from: age, cut: [50, 65, 80], cut_chosen: beforehand}",
        default=None,
        otherwise="The report says that it is not stated.",
    )
    compare: list[Pair] = key(
        "Of a quantity with a curve: pairs of values, the first the reference, whose odds ratio is "
        "tabulated.",
        example="variables:\n  bmi: {label: Body-mass index, kind: quantity, shape: {spline: {knots: 4}}, "
        "compare: [[25, 30], [25, 35]]}",
        factory=list,
        otherwise="The upper quartile is compared with the lower.",
    )
    expected: Literal["raises", "lowers"] | None = key(
        "Whether earlier knowledge says that the variable raises or lowers the odds; if every estimate is "
        "the other way round, the outcome's coding may be reversed.",
        example='variables:\n  smoker: {label: Current smoker, kind: binary, present: "yes", '
        "expected: raises}",
        default=None,
        otherwise="No direction is held against the estimates.",
    )

    dated_by: Text | None = key(
        "A described date that says when this variable was measured (of the outcome: when it happened). What "
        "is dated after the outcome is counted, and a finding says so.",
        example="variables:\n  bmi: {label: Body-mass index, kind: quantity, dated_by: weighed_on}\n"
        "  weighed_on: {label: Date of weighing, kind: date}",
        default=None,
        otherwise="The order in time is not looked at.",
    )

    @field_validator("per", mode="after")
    @classmethod
    def _positive(cls, per: float | None) -> float | None:
        if per is not None and per <= 0:
            raise refusal(f"must be above 0; found {per:g}.", "Write the size of the difference, as in 10.")
        return per

    @field_validator("plausible", mode="after")
    @classmethod
    def _low_high(cls, plausible: tuple[float, float] | None) -> tuple[float, float] | None:
        if plausible is not None and plausible[0] >= plausible[1]:
            low, high = plausible
            raise refusal(
                f"must give the lowest value first; found {low:g} and {high:g}.", "Write [lowest, highest]."
            )
        return plausible

    @field_validator("levels", mode="after")
    @classmethod
    def _different(cls, levels: list[str]) -> list[str]:
        seen = set[str]()
        for value in levels:
            if value in seen:
                raise refusal(f"lists {quoted(value)} twice.", "List each level once.")
            seen.add(value)
        if len(levels) == 1:
            raise refusal(
                f"lists one level only ({quoted(levels[0])}); a variable needs two or more to compare.",
                "List every value that occurs in the data.",
            )
        return levels

    @field_validator("reference", mode="after")
    @classmethod
    def _of_its_kind(cls, reference: Any, info: ValidationInfo) -> Any:
        if info.data.get("kind") != "quantity" or reference is None:
            return reference
        value = number(reference)
        return int(value) if value.is_integer() and abs(value) < 1e15 else value

    @field_validator("cut", mode="after")
    @classmethod
    def _in_order(cls, cut: list[float]) -> list[float]:
        _increasing(cut)
        return cut

    @field_validator("compare", mode="after")
    @classmethod
    def _two_values(cls, compare: list[tuple[float, float]]) -> list[tuple[float, float]]:
        for low, high in compare:
            if low == high:
                raise expected("pairs of two different values", f"[{low:g}, {high:g}]")
        return compare
