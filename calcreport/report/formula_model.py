"""Formulas as trees, and running text with formulas in it. Nothing here knows fonts or points."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Literal, TypeAlias

# ---------------------------------------------------------------- formulas


@dataclass(frozen=True, slots=True)
class Letters:
    """A run of characters of one style: a symbol's letters, a number, a unit, a word."""

    text: str
    #: 'italic' one-letter variables; 'upright' digits, units, function names and word subscripts
    style: Literal["italic", "upright"] = "upright"


@dataclass(frozen=True, slots=True)
class Operator:
    """A sign that takes its spacing from its kind, as in TeX: + = ( , and so on."""

    text: str
    kind: Literal["binary", "relation", "open", "close", "punctuation", "prefix"]


@dataclass(frozen=True, slots=True)
class Space:
    """A gap: 'unit' between number and unit, 'thin' inside a product."""

    kind: Literal["unit", "thin"]


@dataclass(frozen=True, slots=True)
class Row:
    """Items side by side on one baseline."""

    items: tuple[Formula, ...]


@dataclass(frozen=True, slots=True)
class Fraction:
    """One thing over another with a rule between."""

    above: Formula
    below: Formula


@dataclass(frozen=True, slots=True)
class Root:
    """A square root (no index) or an n-th root."""

    body: Formula
    index: Formula | None = None


@dataclass(frozen=True, slots=True)
class Script:
    """A base with a subscript, a superscript, or both stacked (f'c has the prime above the c)."""

    base: Formula
    below: Formula | None = None
    above: Formula | None = None


@dataclass(frozen=True, slots=True)
class Accent:
    """A letter with a mark over it: a bar, a hat, a tilde, a dot, each the combining character of Unicode."""

    base: Letters
    mark: str


@dataclass(frozen=True, slots=True)
class Fence:
    """A body between delimiters that grow with it; either may be '' (the open side of a brace)."""

    opening: str
    body: Formula
    closing: str


@dataclass(frozen=True, slots=True)
class Stack:
    """Rows under one another, left aligned: arguments of a long max or min, cases after a brace."""

    rows: tuple[Formula, ...]


@dataclass(frozen=True, slots=True)
class Big:
    """A large operator with what stands below and above it: a sum over a set, a maximum."""

    sign: Formula
    below: Formula | None = None
    above: Formula | None = None


Formula: TypeAlias = Letters | Operator | Space | Row | Fraction | Root | Script | Accent | Fence | Stack | Big


# ---------------------------------------------------------------- words


@dataclass(frozen=True, slots=True)
class Strong:
    """Words in the heavier face."""

    text: str


@dataclass(frozen=True, slots=True)
class Reference:
    """Words that lead to an anchor elsewhere in the package, such as '14' to 'B1.14'."""

    text: str
    target: str


#: Running text: plain words, heavier words, inline formulas and references, in order.
Words: TypeAlias = "tuple[str | Strong | Reference | Formula, ...]"
