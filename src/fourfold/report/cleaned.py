"""Characters that could deceive a reader are made visible before anything is rendered.

Labels, levels and the description come from strangers. Direction overrides can turn a number
round on the screen, control characters break PDF and XML; both are printed as their code point.
"""

from __future__ import annotations

import dataclasses
import re
from typing import Any, TypeVar

Tree = TypeVar("Tree")

# C0 and C1 controls but tab and line feed, direction controls, private use, non-characters,
# and lone surrogates, which no encoding can write.
_DECEPTIVE = re.compile(
    "[\x00-\x08\x0b-\x1f\x7f-\x9f\u061c\u200e\u200f\u2028-\u202e\u2066-\u2069\ue000-\uf8ff"
    "\ufdd0-\ufdef\ufeff\ufff9-\uffff\ud800-\udfff]"
)


def visible(text: str) -> str:
    """``text`` with each deceptive character replaced by its code point in angle brackets."""
    return _DECEPTIVE.sub(lambda found: f"⟨U+{ord(found.group()):04X}⟩", text.replace("\r\n", "\n"))


def cleaned(tree: Tree) -> Tree:
    """A results tree whose every string is safe to show; numbers are untouched."""
    answer: Tree = _clean(tree)
    return answer


def _clean(value: Any) -> Any:
    if isinstance(value, str):
        return visible(value)
    if isinstance(value, list):
        return [_clean(item) for item in value]
    if isinstance(value, tuple):
        return tuple(_clean(item) for item in value)
    if isinstance(value, dict):
        return {_clean(key): _clean(item) for key, item in value.items()}
    if dataclasses.is_dataclass(value) and not isinstance(value, type):
        changed = {field.name: _clean(getattr(value, field.name)) for field in dataclasses.fields(value)}
        return dataclasses.replace(value, **changed)
    return value
