"""What every form of a pack becomes before it is judged: values that know where they stood."""

from __future__ import annotations

import json
from dataclasses import dataclass, field
from itertools import islice
from typing import TYPE_CHECKING, Final

from structures.errors import Finding
from structures.intake.fields import TEXT_MOST
from structures.intake.pack import Note

if TYPE_CHECKING:
    from structures.errors import Level

SHOWN_MOST: Final = 40  # characters of a wrong value that a message repeats (project choice)


def shown(value: object) -> str:
    """Give a value as a message repeats it: short, printable, never the whole of a large one."""
    if isinstance(value, dict):
        return "an object"
    if isinstance(value, list):
        return "a list"
    if value is None or isinstance(value, bool):
        return {None: "nothing", True: "true", False: "false"}[value]
    whole = str(value)
    text = "".join(
        sign if sign.isprintable() else "\N{REPLACEMENT CHARACTER}" for sign in whole[:SHOWN_MOST]
    )
    text += "..." if len(whole) > SHOWN_MOST else ""
    return f'"{text}"' if isinstance(value, str) else text


@dataclass(frozen=True, slots=True)
class Node:
    """A value, the place where it stood and its field as the pack names it.

    `value` is a scalar, a dict or a list, whose members are raw (JSON) or nodes (tables);
    `tabular` says that numbers and yes/no may come as text.
    """

    value: object
    where: str
    field: str = ""
    tabular: bool = False

    @property
    def blank(self) -> bool:
        """Whether nothing was given: null, or an empty cell of a table."""
        return self.value is None or (self.tabular and self.value == "")

    def members(self) -> dict[str, Node]:
        """Give the members of an object, one level down.

        Raises
        ------
        TypeError
            If the value is no object.
        """
        if not isinstance(self.value, dict):
            raise TypeError(f"{self.where} holds no object")
        return {key: self._member(key, child) for key, child in self.value.items()}

    def elements(self) -> list[Node]:
        """Give the elements of a list, one level down.

        Raises
        ------
        TypeError
            If the value is no list.
        """
        if not isinstance(self.value, list):
            raise TypeError(f"{self.where} holds no list")
        return [
            child if isinstance(child, Node) else Node(child, f"{self.where}[{place}]", self.field)
            for place, child in enumerate(self.value)
        ]

    def named(self, key: str) -> Node:
        """Give the member of that name, or this place under its name where it is missing."""
        if isinstance(self.value, dict) and key in self.value:
            return self._member(key, self.value[key])
        return Node(None, self.where, self._path(key), self.tabular)

    def _path(self, key: str) -> str:
        return f"{self.field}.{key}" if self.field else key

    def _member(self, key: str, child: object) -> Node:
        if isinstance(child, Node):
            return child
        printable = shown(key)[1:-1]
        nested = isinstance(child, dict | list)
        where = f"{self.where}.{printable}" if nested else self.where
        return Node(child, where, self._path(printable))


@dataclass(slots=True)
class Ledger:
    """Findings and notes in the order in which they were met.

    `blocks` counts the findings that forbid keeping what was handed in; `told` names what
    is told of once a column; `unread` names tables that are there and cannot
    be read, so that they are not called missing as well.
    """

    findings: list[Finding] = field(default_factory=list)
    notes: list[Note] = field(default_factory=list)
    blocks: int = 0
    told: set[str] = field(default_factory=set)
    unread: set[str] = field(default_factory=set)

    def add(
        self, node: Node, what: str, remedy: str, *, level: Level = "block", rule: str = ""
    ) -> None:
        """Write down what was found at a node."""
        self.findings.append(Finding(node.where, node.field, what, remedy, level, rule))
        self.blocks += level == "block"

    def keep(self, node: Node) -> None:
        """Keep what a pack has no place for as a note."""
        text = node.value
        if not isinstance(text, str):
            chunks = json.JSONEncoder(default=str).iterencode(text)  # as much as is kept, no more
            text = "".join(islice(chunks, TEXT_MOST))
        self.notes.append(Note(node.where, node.field, text[:TEXT_MOST]))
