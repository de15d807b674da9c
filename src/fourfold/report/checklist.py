"""The reporting checklist: each item answered where, stated by whom, or still to write.

Never a score: an item that only the author can write is no fault of the analysis.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from typing import Any

from fourfold.report.writer import Writer


@dataclass(frozen=True, slots=True)
class Place:
    """A section of the report that answers an item.

    ``note`` says in what way; ``statement`` is the whole answer where nothing was done.
    """

    section: str
    note: str | None
    statement: str | None = None


@dataclass(frozen=True, slots=True)
class Item:
    """One item. ``answered``, ``stated`` and ``to_write`` may hold together, in part each."""

    item: str
    asks: str
    answered: Sequence[Place]
    stated: Sequence[str]
    to_write: str | None


@dataclass(frozen=True, slots=True)
class Checklist:
    """All items of a reporting standard for a study."""

    name: str
    items: Sequence[Item]


def checklist(writer: Writer) -> Checklist:
    """TRIPOD+AI for prediction, STROBE by design for association."""
    content = writer.words.entry("checklist-tripod" if writer.prediction else "checklist-strobe")
    facts = _facts(writer)
    items = []
    for entry in content["items"]:
        asks = _asks(entry, writer.results.study.design)
        if asks is not None:
            items.append(_item(writer, entry, asks, facts))
    return Checklist(name=str(content["name"]), items=items)


def _asks(entry: Mapping[str, Any], design: str) -> str | None:
    """What an item asks of this design; None where it does not concern the design."""
    asks = entry["asks"]
    if isinstance(asks, str):
        return asks
    # A survey is a cross-sectional study for the standard.
    found = asks.get("cross-sectional" if design == "survey" else design)
    return None if found is None else str(found)


def _item(writer: Writer, entry: Mapping[str, Any], asks: str, facts: Mapping[str, bool]) -> Item:
    number = str(entry["item"])
    stated = [writer.results.study.stated[number]] if number in writer.results.study.stated else []
    by_author = bool(stated)
    told = [text for text in (_told(writer, fact) for fact in entry.get("told", [])) if text]
    stated += told
    answered = [
        Place(place["section"], place.get("note"))
        for place in entry.get("run", [])
        if facts[place.get("when", "always")]
    ]
    if not answered and "none" in entry and not stated and facts[entry["none"].get("when", "always")]:
        answered = [Place(entry["none"]["section"], None, entry["none"]["text"])]
    to_write = None if by_author else entry.get("author")
    if entry.get("author_unless") and facts[entry["author_unless"]]:
        to_write = None
    # What the description tells answers the item whole where every fact asked for was told.
    complete = bool(told) and len(told) == len(entry.get("told", [])) and "run" not in entry
    if complete and number != "1a":
        to_write = None
    if not answered and not stated and to_write is None:
        to_write = writer.say("labels.checklist.write")
    return Item(number, asks, answered, stated, to_write)


def _told(writer: Writer, fact: str) -> str | None:
    study, analysis, say = writer.results.study, writer.results.analysis, writer.say
    if fact == "design":
        return say("labels.checklist.design", design=say(f"methods.designs.{study.design}"))
    if fact == "purpose":
        return say(f"labels.checklist.purpose.{study.purpose}")
    if fact == "setting":
        return study.setting
    if fact == "period":
        return period(writer)
    if fact == "follow_up":
        return writer.words.listed(analysis.follow_up) if analysis.follow_up else None
    raise KeyError(f"a checklist asks for {fact}, which the description does not know")


def period(writer: Writer) -> str | None:
    """``2021-01-01 to 2023-12-31``, or the side that is known."""
    study = writer.results.study
    if study.period_from is None and study.period_to is None:
        return None
    return writer.say("labels.heading.period", start=study.period_from, end=study.period_to)


def _facts(writer: Writer) -> dict[str, bool]:
    """What `when` and `author_unless` of the checklists may ask about."""
    results = writer.results
    analysis = results.analysis
    covariates = writer.of_role("covariate")
    return {
        "always": True,
        "exclusions": bool(results.participants.exclusions),
        "matched": bool(analysis.matched_on),
        "clusters": bool(analysis.clusters_stated),
        "sampling_stated": bool(analysis.matched_on or analysis.weights_stated or analysis.follow_up),
        "sample_size": results.sample_size is not None,
        "reasons": bool(covariates) and all(variable.reason for variable in covariates),
        "bands": any(variable.cuts for variable in results.variables),
        "absolute": writer.share != "none" and bool(results.tables),
        "case_control": writer.case_control,
        "selection": analysis.selection is not None,
        "equation": results.model.withheld is None and not writer.case_control,
    }
