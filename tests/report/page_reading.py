"""A page as a reader meets it: its text by section, its tables, its links."""

from __future__ import annotations

import re
from dataclasses import dataclass, field
from html.parser import HTMLParser

VOID = {"meta", "link", "br", "img", "col", "hr", "input"}
BLOCK = {
    "p",
    "h1",
    "h2",
    "h3",
    "h4",
    "li",
    "dt",
    "dd",
    "td",
    "th",
    "tr",
    "caption",
    "figcaption",
    "div",
    "text",
    "title",
}


@dataclass
class Reading(HTMLParser):
    """Collects what a page holds; ``HTMLParser`` decodes character references."""

    ids: list[str] = field(default_factory=list)
    links: list[str] = field(default_factory=list)
    tags: list[str] = field(default_factory=list)
    attributes: list[tuple[str, str, str]] = field(default_factory=list)
    sections: dict[str, str] = field(default_factory=dict)
    tables: dict[str, list[list[str]]] = field(default_factory=dict)
    text: str = ""

    def __post_init__(self) -> None:
        super().__init__(convert_charrefs=True)
        self._open: list[tuple[str, str | None]] = []

    def handle_starttag(self, tag: str, attrs: list[tuple[str, str | None]]) -> None:
        given = {name: value or "" for name, value in attrs}
        self.tags.append(tag)
        self.attributes += [(tag, name, value) for name, value in given.items()]
        if "id" in given:
            self.ids.append(given["id"])
        if tag == "a" and "href" in given:
            self.links.append(given["href"])
        if tag == "section":
            self.sections[given["id"]] = ""
        if tag == "table":
            self.tables[given["id"]] = []
        if tag == "tr":
            self._rows().append([])
        if tag in ("td", "th"):
            self._rows()[-1].append("")
        if tag in BLOCK:
            self._add("\n")
        if tag not in VOID:
            self._open.append((tag, given.get("id")))

    def handle_startendtag(self, tag: str, attrs: list[tuple[str, str | None]]) -> None:
        self.tags.append(tag)
        self.attributes += [(tag, name, value or "") for name, value in attrs]

    def handle_endtag(self, tag: str) -> None:
        while self._open and self._open.pop()[0] != tag:
            continue

    def handle_data(self, data: str) -> None:
        if any(tag == "style" for tag, _ in self._open):
            return
        self._add(data)
        if any(tag in ("td", "th") for tag, _ in self._open):
            self._rows()[-1][-1] += data

    def _rows(self) -> list[list[str]]:
        return self.tables[list(self.tables)[-1]]

    def _add(self, data: str) -> None:
        self.text += data
        for tag, id in self._open:
            if tag == "section" and id is not None:
                self.sections[id] += data


def read(page: bytes) -> Reading:
    reading = Reading()
    reading.feed(page.decode("utf-8"))
    reading.text = tidy(reading.text)
    reading.sections = {id: tidy(text) for id, text in reading.sections.items()}
    reading.tables = {
        id: [[" ".join(cell.split()) for cell in row] for row in rows] for id, rows in reading.tables.items()
    }
    return reading


def tidy(text: str) -> str:
    return re.sub(r"\s*\n\s*", "\n", re.sub(r"[ \t]+", " ", text)).strip()
