"""What one input of a figure or of a method takes: its shape, its dimension, the words it knows."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Literal

from calcreport.core.units import NONE, Dimension

#: how a support holds a member
HOLDS = ("pinned", "fixed", "spring", "free")


@dataclass(frozen=True, slots=True)
class InputKind:
    """One input that code declares and a template hands over by name."""

    #: a number; a number or a word for every row, or pair of rows, of the sets handed as `rows` (or one for all of
    #: them); a set; a word
    shape: Literal["number", "row number", "row word", "set", "word"]
    dimension: Dimension = NONE
    #: False for what may be left out; the rows of a set left out are left out with it
    needed: bool = True
    #: its symbol is printed beside it: only a symbol, or 0, may be handed
    named: bool = False
    #: inputs whose sets a row number or row word belongs to, outer first
    rows: tuple[str, ...] = ()
    #: words it knows
    words: tuple[str, ...] = ()
    #: what it is, as the sheet says it, {} for what is handed; a space in front joins it to the one before
    says: str = ""
    #: whole numbers from the first to the second bound only
    count: tuple[int, int] | None = None
    #: (word input, its word): needed there, and taken nowhere else
    where: tuple[str, str] | None = None
