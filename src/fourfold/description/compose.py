"""From text to nodes: safe YAML only, with limits, and every refusal at its position.

The events of PyYAML's safe loader are composed here rather than by PyYAML, so that aliases
are never expanded, nesting and number of values are bounded before memory is spent, and
duplicate keys are seen.
"""

from __future__ import annotations

from collections.abc import Iterator

import yaml

from fourfold.description.node import Node, Written
from fourfold.description.syntax import syntax_problem
from fourfold.description.wording import quoted
from fourfold.errors import DescriptionError, Position, Problem

DEEPEST = 40
MOST_VALUES = 20_000
STANDARD_TAG = "tag:yaml.org,2002:"
QUOTE_IT = "If it is part of a text, put the text in quotation marks."


def compose(text: str, file: str) -> tuple[Node, list[Problem]]:
    """The nodes of a description and what is wrong with how they are put together.

    Raises
    ------
    DescriptionError
        Where nothing can be composed: broken YAML, an empty file, a second document, too deep
        or too many values.
    """
    try:
        return _Composer(text, file).document()
    except yaml.MarkedYAMLError as error:
        raise DescriptionError(syntax_problem(error, text, file)) from None
    except yaml.YAMLError as error:
        raise DescriptionError(
            Problem(f"This cannot be read as YAML: {error}.", "", Position(file))
        ) from None


class _Composer:
    def __init__(self, text: str, file: str) -> None:
        self.events: Iterator[yaml.Event] = yaml.parse(text, Loader=yaml.SafeLoader)
        self.ahead: yaml.Event | None = None
        self.file = file
        self.values = 0
        self.problems: list[Problem] = []

    def document(self) -> tuple[Node, list[Problem]]:
        self.take()  # start of the stream
        if isinstance(self.peek(), yaml.StreamEndEvent):
            raise self._empty()
        self.take()  # start of the document
        root = self.node(1)
        self.take()  # end of the document
        event = self.peek()
        if not isinstance(event, yaml.StreamEndEvent):
            raise self._stop(
                event,
                "A second document (`---`) begins here; a description is one document.",
                "Remove the line `---`, or put the second description in a file of its own.",
            )
        if isinstance(root.value, Written) and not root.value and not root.refused:
            raise self._empty()
        return root, self.problems

    def peek(self) -> yaml.Event:
        """The next event, which stays next."""
        if self.ahead is None:
            self.ahead = next(self.events)
        return self.ahead

    def take(self) -> yaml.Event:
        """The next event."""
        event = self.peek()
        self.ahead = None
        return event

    def node(self, depth: int) -> Node:
        """The next value, with all below it."""
        event = self.take()
        self.values += 1
        if self.values > MOST_VALUES:
            raise self._stop(
                event,
                f"The description holds more than {MOST_VALUES:,} values.",
                "A description names variables and choices; the data belong in a file of their own.",
            )
        if depth > DEEPEST:
            raise self._stop(
                event,
                f"Brackets or indentation are nested more than {DEEPEST} deep.",
                "No key of a description needs more than a few levels; check the brackets.",
            )
        if isinstance(event, yaml.AliasEvent):
            self._note(
                event,
                f"`*{event.anchor}` repeats another part of the file; a description may not use aliases.",
                f"Write the value out. {QUOTE_IT}",
            )
            return self._refused(event)
        here = Node(Written("", plain=True), *_place(event))
        if isinstance(event, yaml.ScalarEvent):
            here.value = Written(event.value, plain=event.style is None)
        elif isinstance(event, yaml.SequenceStartEvent):
            here.value, here.flow = [], bool(event.flow_style)
            while not isinstance(self.peek(), yaml.SequenceEndEvent):
                here.value.append(self.node(depth + 1))
            self.take()
        elif isinstance(event, yaml.MappingStartEvent):
            here.value, here.flow = {}, bool(event.flow_style)
            while not isinstance(self.peek(), yaml.MappingEndEvent):
                self._pair(here, here.value, depth)
            self.take()
        tag = getattr(event, "tag", None)
        if tag is not None:
            shown = quoted(tag.replace(STANDARD_TAG, "!!"))
            self._note(
                event,
                f"The tag {shown} stands here; a description may not use tags (`!`).",
                f"Remove it; what a value means follows from its key. {QUOTE_IT}",
            )
            return self._refused(event)
        return here

    def _pair(self, mapping: Node, pairs: dict[str, Node], depth: int) -> None:
        event = self.peek()
        key = self.node(depth + 1)
        value = self.node(depth + 1)
        if key.refused:
            return
        if not isinstance(key.value, Written):
            self._note(
                event,
                "A list or mapping stands where a key belongs.",
                "Write `key: value`. A text that begins with a bracket or brace needs quotation marks.",
            )
        elif not key.value:
            self._note(event, "A key is missing before the colon.", "Write `key: value`.")
        elif key.value == "<<" and key.value.plain:
            self._note(
                event,
                "A merge key (`<<`) stands here; a description may not use it.",
                "Write the keys out.",
            )
        elif str(key.value) in mapping.keys:
            line = mapping.keys[str(key.value)][0]
            self._note(
                event,
                f"The key {quoted(key.value)} is already given in line {line}; each may be given once.",
                "Remove one of them, or rename it.",
            )
        else:
            mapping.keys[str(key.value)] = (key.line, key.column)
            pairs[str(key.value)] = value

    def _refused(self, event: yaml.Event) -> Node:
        return Node(Written("", plain=True, refused=True), *_place(event), refused=True)

    def _position(self, event: yaml.Event) -> Position:
        return Position(self.file, *_place(event))

    def _note(self, event: yaml.Event, what: str, advice: str) -> None:
        self.problems.append(Problem(what, advice, self._position(event)))

    def _stop(self, event: yaml.Event, what: str, advice: str) -> DescriptionError:
        return DescriptionError([*self.problems, Problem(what, advice, self._position(event))])

    def _empty(self) -> DescriptionError:
        return DescriptionError(
            Problem(
                "The description is empty.",
                "It begins with `study:`. `fourfold draft DATA` writes a first one from a data file, and "
                "`fourfold keys` lists what it may hold.",
                Position(self.file, 1, 1),
            )
        )


def _place(event: yaml.Event) -> tuple[int, int]:
    mark = event.start_mark
    return (mark.line + 1, mark.column + 1) if mark is not None else (1, 1)
