"""Hand-built inputs of the figures: ordinary ones and extreme ones. All numbers are invented."""

from __future__ import annotations

import math

from fourfold.report.figures.figure import Setting
from fourfold.report.numbers import Numbers
from fourfold.report.words import Words
from fourfold.results import tree

HOSTILE = "<script>alert('&\"')</script>\x00\x1b[31m\u202eabc"


def setting(design: str = "cohort", confidence: float = 95.0) -> Setting:
    return Setting(Words("en", Numbers(5), {}), design, confidence, "Wound infection within 30 days")


def table(
    a: int | None = 45,
    b: int | None = 147,
    c: int | None = 61,
    d: int | None = 420,
    *,
    label: str = "Current smoker",
    exposed: str = "Current smoker",
    unexposed: str = "Not a current smoker",
    risks: bool = True,
    hidden: dict[str, str] | None = None,
) -> tree.FourfoldTable:
    risk = tree.Interval(estimate=0.1, lower=0.05, upper=0.2, method="Wilson") if risks else None
    return tree.FourfoldTable(
        exposure="smoker",
        label=label,
        exposed_label=exposed,
        unexposed_label=unexposed,
        a=a,
        b=b,
        c=c,
        d=d,
        risk_exposed=risk,
        risk_unexposed=risk,
        odds_ratio=None,
        risk_ratio=None,
        risk_difference=None,
        chi_squared=None,
        chi_squared_p=None,
        fisher_p=None,
        smallest_expected=None,
        hidden=hidden or {},
    )


def estimate(
    term: str,
    label: str,
    odds_ratio: float | None,
    lower: float | None,
    upper: float | None,
    *,
    role: str = "covariate",
    level: str | None = None,
    reference: str | None = None,
    per: float | None = None,
    unit: str | None = None,
    contrast: list[float] | None = None,
    note: str | None = None,
) -> tree.Estimate:
    return tree.Estimate(
        term=term,
        label=label,
        role=role,
        level=level,
        reference=reference,
        per=per,
        unit=unit,
        events=None,
        total=None,
        log_odds_ratio=math.log(odds_ratio) if odds_ratio else None,
        standard_error=None,
        odds_ratio=odds_ratio,
        lower=lower,
        upper=upper,
        p_value=None,
        interval="profile likelihood",
        test="likelihood ratio",
        contrast=contrast,
        note=note,
    )


def estimates() -> tree.Estimates:
    adjusted = [
        estimate("smoker", "Current smoker", 1.84, 1.17, 2.86, role="exposure"),
        estimate("age", "Age", 1.21, 1.02, 1.44, per=10, unit="years"),
        estimate("bmi", "Body-mass index", 0.92, 0.75, 1.13, unit="kg/m2", contrast=[22.0, 27.0]),
        estimate("bmi", "Body-mass index", 1.65, 1.16, 2.37, unit="kg/m2", contrast=[27.0, 33.0]),
        estimate("asa", "ASA class", 1.31, 0.72, 2.49, level="2", reference="1"),
        estimate("asa", "ASA class", 2.44, 1.28, 4.83, level="3", reference="1"),
        estimate("asa", "ASA class", 4.02, 0.91, 15.2, level="4", reference="1"),
    ]
    crude = [
        estimate("smoker", "Current smoker", 2.11, 1.37, 3.21, role="exposure"),
        estimate("age", "Age", 1.28, 1.09, 1.51, per=10, unit="years"),
        estimate("asa", "ASA class", 1.44, 0.8, 2.69, level="2", reference="1"),
        estimate("asa", "ASA class", 2.97, 1.61, 5.71, level="3", reference="1"),
        estimate("asa", "ASA class", 5.33, 1.25, 19.4, level="4", reference="1"),
    ]
    return tree.Estimates(crude=crude, adjusted=adjusted)


def extreme_estimates() -> tree.Estimates:
    """Twenty terms: separated ones, unbounded and very wide intervals, hostile and long labels."""
    adjusted = [
        estimate("shellfish", "Ate the shellfish", None, 3.4, None, role="exposure", note="separated upward"),
        estimate("vaccine", "Vaccinated", None, None, 0.31, role="exposure", note="separated downward"),
        estimate("x", HOSTILE, 1.1, 0.9, 1.3, role="exposure"),
        estimate("secret", "With a hidden count", None, None, None, note="hidden"),
        estimate("wide", "Very wide interval", 2.0, 0.0004, 9000.0),
        estimate("open", "Unbounded above", 3.1, 0.8, None),
        estimate("infinite", "Unbounded, as infinity", 2.6, 0.7, math.inf),
        estimate("long", "A label that goes on and on about the district of residence " * 3, 0.7, 0.4, 1.2),
        estimate("unbroken", "Pneumonoultramicroscopicsilicovolcanoconiosis" * 2, 1.4, 0.9, 2.2),
    ]
    adjusted += [
        estimate(f"term{i}", f"Term number {i}", 0.6 + 0.11 * i, 0.4 + 0.08 * i, 1.0 + 0.2 * i)
        for i in range(11)
    ]
    return tree.Estimates(adjusted=adjusted)


def participants(hidden: bool = False) -> tree.Participants:
    return tree.Participants(
        read=812,
        exclusions=[
            tree.Exclusion(reason="Emergency operation", count=74, remaining=738),
            tree.Exclusion(
                reason="Under 18",
                count=None if hidden else 9,
                remaining=None if hidden else 729,
                hidden={"count": "small"} if hidden else {},
            ),
            tree.Exclusion(
                reason="Second operation of the same patient in the period", count=12, remaining=717
            ),
        ],
        eligible=None if hidden else 717,
        incomplete=44,
        analysed=673,
        events=106,
        non_events=567,
        hidden={"eligible": "subtraction"} if hidden else {},
    )


def discrimination(points: int = 120) -> tree.Discrimination:
    curve = [
        tree.RocPoint(specificity=1 - t, sensitivity=t**0.42)
        for t in (i / (points - 1) for i in range(points))
    ]
    return tree.Discrimination(
        auc=0.7042, standard_error=0.02, lower=0.6511, upper=0.7523, method="DeLong, logit", curve=curve
    )


def calibration(scale: float = 1.0, basis: str = "fitting data", hide: int | None = None) -> tree.Calibration:
    groups = []
    for index, (risk, seen) in enumerate(
        [
            (0.03, 2),
            (0.05, 4),
            (0.07, 3),
            (0.09, 8),
            (0.11, 6),
            (0.14, 11),
            (0.17, 9),
            (0.22, 17),
            (0.29, 18),
            (0.44, 30),
        ]
    ):
        n = round(67 / scale)
        p = seen / 67
        half = 1.96 * math.sqrt(p * (1 - p) / 67)
        gone = index == hide
        groups.append(
            tree.CalibrationGroup(
                n=n,
                expected=None if gone else n * risk * scale,
                observed=None if gone else seen,
                mean_risk=risk * scale,
                proportion=None if gone else p * scale,
                lower=None if gone else max(0.0, p - half) * scale,
                upper=None if gone else min(1.0, p + half) * scale,
                lowest=None,
                highest=None,
                hidden={"observed": "small", "proportion": "derived"} if gone else {},
            )
        )
    xs = [0.02 + 0.0035 * i for i in range(160)]
    curve = [
        tree.CurvePoint(
            x=x * scale,
            y=(x * 0.98 + 0.02 * math.sin(9 * x)) * scale,
            lower=max(0.0, x * 0.98 + 0.02 * math.sin(9 * x) - 0.02 - 0.15 * x * x) * scale,
            upper=(x * 0.98 + 0.02 * math.sin(9 * x) + 0.02 + 0.25 * x * x) * scale,
        )
        for x in xs
    ]
    return tree.Calibration(
        basis=basis,
        brier=0.12,
        scaled_brier=0.1,
        spiegelhalter_z=None,
        spiegelhalter_p=None,
        in_the_large=None,
        slope=None,
        groups=groups,
        hosmer_lemeshow=None,
        curve=curve,
        curve_method="lowess",
    )


def risk_bins(scale: float = 1.0, hide: bool = False) -> list[tree.RiskBin]:
    bins = []
    for i in range(24):
        lower, upper = i * 0.025 * scale, (i + 1) * 0.025 * scale
        others = round(120 * math.exp(-(((i - 4) / 3.5) ** 2)) + 20 * math.exp(-i / 9))
        events: int | None = round(16 * math.exp(-(((i - 9) / 6) ** 2)))
        small = hide and events is not None and 0 < events < 5
        bins.append(
            tree.RiskBin(
                lower=lower,
                upper=upper,
                events=None if small else events,
                non_events=others,
                hidden={"events": "small"} if small else {},
            )
        )
    return bins


def odds_ratio_curve(steep: float = 0.004, n: int = 100) -> tree.OddsRatioCurve:
    curve = []
    for i in range(n):
        x = 18 + i * 72 / max(n - 1, 1)
        y = math.exp(steep * (x - 55) + 0.0009 * (x - 55) ** 2)
        width = 0.012 * abs(x - 55)
        curve.append(tree.CurvePoint(x=x, y=y, lower=y * math.exp(-width), upper=y * math.exp(width)))
    return tree.OddsRatioCurve(
        term="age",
        label="Age",
        unit="years",
        shape="spline",
        reference=55.0,
        knots=[32.5, 48, 61, 79],
        curve=curve,
    )


def outcome_by_quantity(people: int = 0, hide: bool = False) -> tree.OutcomeByQuantity:
    curve = []
    for i in range(100):
        x = 18 + i * 72 / 99
        y = 1 / (1 + math.exp(4.2 - 0.045 * x))
        curve.append(tree.CurvePoint(x=x, y=y, lower=y * 0.75, upper=min(1.0, y * 1.3)))
    bins = []
    for i in range(8):
        x = 22.5 + 9 * i
        y = 1 / (1 + math.exp(4.2 - 0.045 * x)) * (1.1 if i % 2 else 0.88)
        gone = hide and i == 0
        bins.append(
            tree.QuantityBin(
                lower=x - 4.5,
                upper=x + 4.5,
                mean=x,
                events=None if gone else round(80 * y),
                total=80,
                proportion=None if gone else y,
                proportion_lower=None if gone else y * 0.6,
                proportion_upper=None if gone else y * 1.5,
                hidden={"events": "small"} if gone else {},
            )
        )
    groups = ("North", "South", "East", "West", "Isle")
    points = []
    for i in range(people):
        event = i % 6 == 0
        x = 18 + (i * 37 % 719) / 10
        points.append(
            tree.JitteredPoint(
                x=x,
                y=(0.97 if event else 0.03) + ((i * 13 % 41) - 20) / 900,
                event=event,
                group=groups[i % 4],
            )
        )
    return tree.OutcomeByQuantity(
        term="age",
        label="Age",
        unit="years",
        curve=curve,
        bins=bins,
        points=points,
        group_label="Ward" if people else None,
    )
