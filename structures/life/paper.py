"""What a paper is: the question it answers, who may make it, and its fields."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Literal

from structures.life.people import whom

Kind = Literal["text", "long text", "number", "whole", "date", "yes no", "choice", "rows"]
FOUND: tuple[str, ...] = ("found", "none", "not known")
YES_NO_UNKNOWN: tuple[str, ...] = ("yes", "no", "not known")


@dataclass(frozen=True, slots=True)
class PaperField:
    """One field of a paper.

    Outside `low` to `high` a number is refused; outside `usual` it is kept and asked about. `rule`
    and `blank_says` (what, remedy) are told where a required field is blank. Rows have `columns`,
    fields without rows of their own, and `least` of them.
    """

    name: str
    label: str
    kind: Kind = "text"
    required: bool = False
    unit: str = ""
    low: float | None = None
    high: float | None = None
    usual: tuple[float, float] | None = None
    choices: tuple[str, ...] = ()
    columns: tuple[PaperField, ...] = ()
    least: int = 0
    help: str = ""
    rule: str = ""
    blank_says: tuple[str, str] | None = None

    def __post_init__(self) -> None:
        if (self.kind == "choice") != bool(self.choices):
            raise ValueError(f"{self.name}: choices belong to a choice")
        if (self.kind == "rows") != bool(self.columns):
            raise ValueError(f"{self.name}: columns belong to rows")
        if any(column.kind == "rows" for column in self.columns):
            raise ValueError(f"{self.name}: rows hold no rows")
        if self.least and not self.columns:
            raise ValueError(f"{self.name}: only rows are counted")


@dataclass(frozen=True, slots=True)
class Paper:
    """One kind of paper.

    `makers` are the roles that may make it. `photo` says what must be photographed for it, "" for
    nothing; `signed` that the photo is one of the signed sheet. A paper without fields is made
    elsewhere in the program; a move knows it by its digest alone.
    """

    kind: str
    title: str
    question: str
    makers: tuple[str, ...]
    fields: tuple[PaperField, ...] = ()
    photo: str = ""
    signed: bool = False
    signers: str = ""

    def __post_init__(self) -> None:
        names = [field.name for field in self.fields]
        if len(set(names)) != len(names):
            raise ValueError(f"{self.kind}: a field stands twice")
        if self.signed and not (self.photo and self.signers):
            raise ValueError(f"{self.kind}: a signed sheet has signers and a photo")

    def who(self) -> str:
        """Name who can supply the paper: its makers, and who signs besides."""
        signs = f"; {self.signers} sign" if self.signers else ""
        return f"{whom(self.makers)}{signs}"

    def field(self, name: str) -> PaperField:
        """Give a field by its name.

        Raises
        ------
        KeyError
            If the paper has no such field.
        """
        for field in self.fields:
            if field.name == name:
                return field
        raise KeyError(f"{self.kind} has no field {name!r}")
