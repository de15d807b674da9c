"""All figures of one report, drawn from its results."""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import dataclass, field

from fourfold.report.figures import (
    calibration,
    flow,
    forest,
    odds_ratio_curve,
    outcome_by_quantity,
    risk_distribution,
    roc,
    tile,
)
from fourfold.report.figures.figure import Figure, Setting
from fourfold.report.words import Words
from fourfold.results import tree


@dataclass(frozen=True, slots=True)
class Plates:
    """Figures by what they show; None, or absent from a mapping, where there is nothing to show.

    Attributes
    ----------
    mark : str
        The wordless tile of the heading, an SVG element.
    flow : Figure
    tiles : dict
        Exposure -> its fourfold tile.
    forest : Figure or None
    roc, calibration, risk_distribution : Figure or None
    odds_ratio_curves : dict
        Term -> the curve of its odds ratio.
    outcome_by_quantity : dict
        Term -> the outcome along it.
    """

    mark: str
    flow: Figure
    tiles: dict[str, Figure] = field(default_factory=dict)
    forest: Figure | None = None
    roc: Figure | None = None
    calibration: Figure | None = None
    risk_distribution: Figure | None = None
    odds_ratio_curves: dict[str, Figure] = field(default_factory=dict)
    outcome_by_quantity: dict[str, Figure] = field(default_factory=dict)


def draw(results: tree.Results, words: Words) -> Plates:
    """Draw every figure that the results (after the hiding pass) have something for."""
    setting = Setting.of(results, words)
    found = results.discrimination
    calibrated = results.calibration
    return Plates(
        mark=tile.mark(results.tables[0] if results.tables else None),
        flow=flow.draw(results.participants, setting),
        tiles=_named((table.exposure, tile.draw(table, setting)) for table in results.tables),
        forest=forest.draw(results.estimates, setting),
        roc=roc.draw(found, setting) if found is not None else None,
        calibration=calibration.draw(calibrated, results.risk_distribution, setting)
        if calibrated is not None
        else None,
        risk_distribution=risk_distribution.draw(results.risk_distribution, setting),
        odds_ratio_curves=_named((one.term, odds_ratio_curve.draw(one, setting)) for one in results.curves),
        outcome_by_quantity=_named(
            (one.term, outcome_by_quantity.draw(one, setting)) for one in results.outcome_by_quantity
        ),
    )


def _named(drawn: Iterable[tuple[str, Figure | None]]) -> dict[str, Figure]:
    return {name: figure for name, figure in drawn if figure is not None}
