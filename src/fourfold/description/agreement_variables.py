"""Whether the keys of each variable agree with its kind and with each other."""

from __future__ import annotations

from collections.abc import Iterator

from fourfold.description.legible import Legible, Part
from fourfold.description.model import SplineShape, Variable
from fourfold.description.node import Positions
from fourfold.description.wording import did_you_mean, listed, quoted
from fourfold.errors import Problem

# Keys that only some kinds of variable have; "bands" are those cut from a quantity.
_ONLY_FOR: dict[str, tuple[str, ...]] = {
    "present": ("binary",),
    "unit": ("quantity",),
    "per": ("quantity",),
    "plausible": ("quantity",),
    "shape": ("quantity",),
    "compare": ("quantity",),
    "levels": ("category", "ordered", "binary"),
    "reference": ("category", "ordered", "quantity", "bands"),
    "expected": ("quantity", "category", "ordered", "binary", "bands"),
    "column": ("quantity", "category", "ordered", "binary", "date"),
    "missing": ("quantity", "category", "ordered", "binary", "date"),
}
_INSTEAD = {
    ("reference", "binary"): "The other value than `present:` is the reference.",
    ("levels", "quantity"): "To compare groups of a quantity, describe bands by `from:` and `cut:`.",
    ("levels", "bands"): "The bands follow from `cut:`.",
    ("present", "category"): "If the column holds two values, write `kind: binary`.",
    ("missing", "bands"): "Write it at the quantity that the bands are cut from.",
    ("column", "bands"): "`from:` names the quantity; bands have no column of their own.",
}


def kind_of(part: Part[Variable] | None) -> str | None:
    """quantity, category, ordered, binary, date or bands; None where it cannot be told."""
    if part is None or "kind" in part.wrong:
        return None
    if part.given("from_", "cut"):
        return "bands"
    return part.section.kind


def names_of(parts: Legible, *kinds: str) -> list[str]:
    """The described variables of these kinds."""
    return [name for name, part in (parts.variables or {}).items() if kind_of(part) in kinds]


def check_variables(parts: Legible, positions: Positions) -> Iterator[Problem]:
    """Problems inside single variables."""
    everywhere = parts.data.section.missing if parts.data and "missing" not in parts.data.wrong else []
    codes = frozenset(code for code in everywhere if code)
    for name, part in (parts.variables or {}).items():
        if name == "(intercept)":
            yield Problem(
                f"A variable may not be called {quoted(name)}; the model's constant is.",
                "Choose another name and give the column by `column:`.",
                positions.key("variables", name),
            )
        if part is not None:
            yield from _kind(name, part, positions)
            yield from _bands(name, part, parts, positions)
            yield from _values(name, part, codes, positions)
            yield from _dated(name, part, parts, positions)


def _kind(name: str, part: Part[Variable], positions: Positions) -> Iterator[Problem]:
    variable, kind = part.section, kind_of(part)
    shown = quoted(name)
    if kind is None and "kind" not in part.wrong:
        yield Problem(
            f"Variable {shown} has no `kind:`.",
            "Write kind: quantity, category, ordered, binary or date; or cut bands by `from:` and `cut:`.",
            positions.find("variables", name),
        )
    if kind is None:
        return
    if kind == "binary" and not part.given("present"):
        yield Problem(
            f"Binary variable {shown} has no `present:`, so that nobody knows which value means yes.",
            'Write the value as it stands in the data, as in present: "yes".',
            positions.find("variables", name),
        )
    levels = variable.levels
    if kind == "binary" and levels and len(levels) != 2:
        yield Problem(
            f"Binary variable {shown} lists {len(levels)} levels; a binary variable has two.",
            "Write kind: category, or name the values that mean 'not recorded' under `missing:`.",
            positions.find("variables", name, "levels"),
        )
    elif kind == "binary" and levels and variable.present is not None and variable.present not in levels:
        yield Problem(
            f"`present` is {quoted(variable.present)}, which is not among the levels of {shown}.",
            did_you_mean(variable.present, levels) or f"Write {quoted(levels[0])} or {quoted(levels[1])}.",
            positions.find("variables", name, "present"),
        )
    for key, kinds in _ONLY_FOR.items():
        if part.given(key) and kind not in kinds:
            what = f"`{key}` does not go with " + ("bands" if kind == "bands" else f"kind: {kind}")
            yield Problem(
                f"{what} (variable {shown}); it belongs to {listed(kinds)}.",
                _INSTEAD.get((key, kind), "Remove it, or correct `kind:`."),
                positions.key("variables", name, key),
            )
    shape = variable.shape
    if kind == "quantity" and "per" in variable.model_fields_set and not part.wrong & {"per", "shape"}:
        advice = {
            "log2": "An odds ratio of a log2 quantity is per doubling.",
            "quadratic": "A curve has no one odds ratio per step; name pairs of values by `compare:`.",
        }
        named = "spline" if isinstance(shape, SplineShape) else shape
        if named != "linear":
            yield Problem(
                f"`per` does not go with shape: {named} (variable {shown}).",
                f"{advice.get(named, advice['quadratic'])} Remove `per:`.",
                positions.key("variables", name, "per"),
            )


def _bands(name: str, part: Part[Variable], parts: Legible, positions: Positions) -> Iterator[Problem]:
    variable = part.section
    shown = quoted(name)
    if not part.given("from_", "cut"):
        if part.given("cut_chosen"):
            yield Problem(
                f"`cut_chosen` stands without `cut:` (variable {shown}).",
                "Remove it, or describe bands by `from:` and `cut:`.",
                positions.key("variables", name, "cut_chosen"),
            )
        return
    if not part.given("from_"):
        yield Problem(
            f"`cut` stands without `from:` (variable {shown}), so that nobody knows which quantity is cut.",
            "Write from: and the name of a described quantity.",
            positions.key("variables", name, "cut"),
        )
    if "cut" not in part.wrong and not variable.cut:
        yield Problem(
            f"Bands {shown} need the values at which they are cut.",
            "Write them as in cut: [50, 65, 80].",
            positions.find("variables", name, "cut"),
        )
    if variable.kind in ("quantity", "binary", "date"):
        yield Problem(
            f"Bands {shown} cannot be of kind: {variable.kind}.",
            "Remove `kind:`; bands are ordered by their cuts.",
            positions.find("variables", name, "kind"),
        )
    source = variable.from_
    if source is None or parts.variables is None:
        return
    where = positions.find("variables", name, "from")
    if source not in parts.variables:
        yield Problem(
            f"`from` names {quoted(source)}, which is not a described variable.",
            did_you_mean(source, names_of(parts, "quantity"))
            or "Describe it under `variables:` as a quantity.",
            where,
        )
        return
    kind = kind_of(parts.variables[source])
    if kind not in (None, "quantity"):
        found = "is cut into bands itself" if kind == "bands" else f"is of kind: {kind}"
        yield Problem(
            f"Bands are cut from a quantity; {quoted(source)} {found}.",
            "Name a quantity, or describe this variable by its levels.",
            where,
        )


def _dated(name: str, part: Part[Variable], parts: Legible, positions: Positions) -> Iterator[Problem]:
    date = part.section.dated_by
    if date is None or parts.variables is None:
        return
    if date not in parts.variables:
        what = f"`dated_by` names {quoted(date)}, which is not a described variable."
    elif kind_of(parts.variables[date]) not in (None, "date"):
        what = f"`dated_by` names {quoted(date)}, which is no date (variable {quoted(name)})."
    else:
        return
    yield Problem(
        what,
        did_you_mean(date, names_of(parts, "date")) or "Name a variable that is described with kind: date.",
        positions.find("variables", name, "dated_by"),
    )


def _values(
    name: str, part: Part[Variable], everywhere: frozenset[str], positions: Positions
) -> Iterator[Problem]:
    variable, kind = part.section, kind_of(part)
    levels, reference = variable.levels, variable.reference
    if kind in ("category", "ordered") and levels and reference is not None and reference not in levels:
        yield Problem(
            f"`reference` is {quoted(str(reference))}, which is not among the levels of {quoted(name)}.",
            did_you_mean(str(reference), levels)
            or f"Levels: {', '.join(quoted(x)[1:-1] for x in levels[:20])}.",
            positions.find("variables", name, "reference"),
        )
    plausible = variable.plausible
    if kind == "quantity" and plausible is not None and isinstance(reference, int | float):
        low, high = plausible
        if not low <= reference <= high:
            yield Problem(
                f"`reference` ({reference:g}) lies outside `plausible` ({low:g} to {high:g}).",
                "Correct the one that is wrong.",
                positions.find("variables", name, "reference"),
            )
    own = set(variable.missing)
    for key, values in (("levels", levels), ("present", [variable.present])):
        for place, value in enumerate(values):
            if value in own or value in everywhere:
                place_of_code = "the variable's `missing:`" if value in own else "`missing:` under `data:`"
                yield Problem(
                    f"{quoted(str(value))} is under `{key}:` of {quoted(name)} and is also a code for "
                    "'not recorded'.",
                    f"If it is a real value, write {place_of_code} without it; otherwise remove it here.",
                    positions.find("variables", name, key, place),
                )
