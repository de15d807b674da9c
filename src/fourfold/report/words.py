"""Words of one language, filled with a study's numbers.

Language files are templates that belong to the program; user text enters as values only and is
never itself read as a template. What comes out is plain text: the page escapes it once.
"""

from __future__ import annotations

import re
from collections.abc import Callable, Mapping, Sequence
from functools import cache
from typing import Any

from jinja2 import StrictUndefined, Template
from jinja2.sandbox import ImmutableSandboxedEnvironment

from fourfold.report import assets
from fourfold.report.numbers import Numbers, Withheld, filters

_SPACES = re.compile(r"[ \t\r\n]+")


class Words:
    """Says things in one language with one study's rounding and hiding rules.

    Parameters
    ----------
    language : str
        Folder name under templates/languages.
    numbers : Numbers
    labels : mapping
        Variable name -> label, for the ``label`` filter.
    given : mapping
        Values that every text may use, such as the words that the design allows.
    """

    def __init__(
        self,
        language: str,
        numbers: Numbers,
        labels: Mapping[str, str],
        given: Mapping[str, str] | None = None,
    ) -> None:
        self.language = language
        self.numbers = numbers
        self._labels = labels
        self._environment = _environment(language, numbers, labels)
        self._environment.globals.update(given or {})
        self._compiled: dict[str, Template] = {}

    def say(self, key: str, /, **values: Any) -> str:
        """The text at ``key`` (``file.section.name``) with its placeholders filled.

        Raises
        ------
        KeyError
            If the language file has no such text.
        jinja2.UndefinedError
            If the text needs a value that was not given.
        """
        found = self.entry(key)
        if not isinstance(found, str):
            raise KeyError(f"{key} is not a text of the language {self.language}")
        return self.fill(found, **values)

    def has(self, key: str) -> bool:
        """Does the language have a text, or a section of texts, at ``key``?"""
        try:
            self.entry(key)
        except KeyError:
            return False
        return True

    def entry(self, key: str) -> Any:
        """What stands at ``key``: a text, or a mapping or list of them."""
        file, *path = key.split(".")
        found: Any = assets.language_file(self.language, file)
        for part in path:
            if not isinstance(found, Mapping) or part not in found:
                raise KeyError(f"{key} is missing from the language {self.language}")
            found = found[part]
        return found

    def fill(self, template: str, /, **values: Any) -> str:
        """Fill a text of a language file; runs of white space become one space."""
        if "{" not in template:
            return _single_spaced(template)
        if template not in self._compiled:
            self._compiled[template] = self._environment.from_string(template)
        return _single_spaced(self._compiled[template].render(**values))

    def inline(self, label: str) -> str:
        """A label, or a stated reason, as it stands inside a sentence."""
        return in_sentence(self.language, label)

    def listed(self, items: Sequence[str], joiner: str = "and") -> str:
        """``a``; ``a and b``; ``a, b and c``."""
        return listed(self.language, items, joiner)


def listed(language: str, items: Sequence[str], joiner: str = "and") -> str:
    """Join items as a sentence of the language does."""
    joining = assets.language_file(language, "labels")["joining"]
    if len(items) <= 1:
        return "".join(items)
    last = str(joining["last_" + joiner])
    return str(joining["between"]).join(items[:-1]) + last + items[-1]


def _environment(language: str, numbers: Numbers, labels: Mapping[str, str]) -> ImmutableSandboxedEnvironment:
    # No autoescape here: the result is text, which the page escapes when it is printed.
    environment = ImmutableSandboxedEnvironment(
        undefined=StrictUndefined, autoescape=False, trim_blocks=True, lstrip_blocks=True
    )
    environment.filters.update(filters(numbers, labels))
    environment.filters["label"] = lambda name: in_sentence(language, labels.get(name, name))
    environment.filters["labels"] = lambda names: listed(
        language, [in_sentence(language, labels.get(name, name)) for name in names]
    )
    environment.filters["listed"] = lambda items, joiner="and": listed(language, list(items), joiner)
    environment.filters["inline"] = lambda label: in_sentence(language, label)
    environment.filters["step_of"] = lambda step, unit: step_of(language, step, unit)
    environment.filters["counted"] = _counting(language, numbers)
    environment.filters["compared"] = _comparing(language, environment)
    environment.filters["capital"] = capital
    environment.globals["cite"] = cite
    return environment


def step_of(language: str, step: str, unit: str | None) -> str:
    """A difference of a quantity after "per": ``10 years``, ``year`` for a step of 1, ``unit``."""
    if step != "1":
        return f"{step} {unit}" if unit else step
    joining = assets.language_file(language, "labels")["joining"]
    if not unit:
        return str(joining["one_unit"])
    for pattern, one in joining["singular"]:
        if re.search(pattern, unit):
            return re.sub(pattern, one, unit)
    return unit


def _counting(language: str, numbers: Numbers) -> Callable[[Any, str, str], str]:
    """``1 row``, ``14 rows``, ``fewer than 5 rows``, ``a hidden number of rows``."""

    def counted(n: Any, one: str, many: str) -> str:
        if isinstance(n, int | float):
            return f"{numbers.count(n)} {one if n == 1 else many}"
        if isinstance(n, Withheld) and n.reason == "small":
            return f"{numbers.count(n)} {many}"
        hidden = assets.language_file(language, "labels")["hidden"]["number_of"]
        return str(hidden).format(things=many)

    return counted


def _comparing(language: str, environment: ImmutableSandboxedEnvironment) -> Callable[[Any], str]:
    """The comparison that an odds ratio makes: its variable with level or pair of values."""
    compiled: list[Template] = []

    def compared(item: Mapping[str, Any]) -> str:
        if not compiled:
            joining = assets.language_file(language, "labels")["joining"]
            compiled.append(environment.from_string(joining["compared"]))
        fields = {name: item.get(name) for name in ("variable", "level", "contrast")}
        return _single_spaced(compiled[0].render(**fields))

    return compared


CITE_OPEN, CITE_CLOSE = "\ue000", "\ue001"
"""Around the keys of a citation; cleaned text never holds these characters."""


def cite(*keys: str) -> str:
    """Mark a citation; `fourfold.report.citations` numbers it once the whole text is known."""
    return CITE_OPEN + ",".join(keys) + CITE_CLOSE


def _single_spaced(text: str) -> str:
    # Not str.split(): a no-break space is there on purpose.
    return _SPACES.sub(" ", text).strip(" ")


@cache
def in_sentence(language: str, label: str) -> str:
    """A label as it stands inside a sentence: its capital goes where it only began the label.

    Abbreviations (``ASA class``, ``BMI``), names with an apostrophe (``Crohn's disease``, but not
    ``Mother's age``) and a lone letter keep it. The language file says whether its sentences lower
    a first letter at all, and which words (``Mother``) are no names.
    """
    rules = assets.language_file(language, "labels")["in_sentence"]
    if not rules["lower_first"]:
        return label
    first = label.split(maxsplit=1)[0] if label.strip() else ""
    ordinary = len(first) > 1 and first[1:].replace("-", "").islower()
    owner = first.replace("’", "'").removesuffix("'s")
    named = owner != first and owner.lower() not in rules["owners"]
    if not (ordinary or owner != first) or named or label != label.lstrip():
        return label
    return label[0].lower() + label[1:]


def capital(text: str) -> str:
    """``text`` with a capital, to begin a sentence."""
    return text[:1].upper() + text[1:]
