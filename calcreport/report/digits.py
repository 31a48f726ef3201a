"""Printed figures such that a pocket calculator confirms every line, each value in one form wherever it stands.

Lines (a callable, the values it takes, the value it gives) in; the decimals of every value out. Starts from four
digits; where a line misses, its result drops to three, then the inputs that matter most gain digits.
"""

from __future__ import annotations

import math
from collections.abc import Callable, Hashable
from dataclasses import dataclass, field
from typing import TypeAlias

Id: TypeAlias = Hashable

#: significant digits a value starts with, the fewest after a drop, and the most ever printed
USUAL, FEWEST, MOST = 4, 3, 15
_HALF_SLACK = 4e-15


@dataclass(slots=True)
class Figure:
    """A value as it will be printed: number times 10^-exponent with `places` decimals."""

    #: unrounded, in the unit it is printed in
    number: float
    #: power of ten taken out of very large and very small numbers, else 0
    exponent: int
    places: int
    #: the printed digits are the whole value; more would be zeros
    exact: bool
    #: base units in one printed unit, times 10^exponent
    size: float
    dropped: bool = False
    settled: bool = False
    #: the printed digits, and the decimals they were found for: asked for far more often than they change
    _digits: int = 0
    _digits_at: int = -1

    @property
    def printed(self) -> float:
        """The printed number, in base units."""
        return self.mantissa / 10.0**self.places * self.size

    @property
    def mantissa(self) -> int:
        """The printed digits as a whole number."""
        if self._digits_at != self.places:
            self._digits = scaled(self.number / 10.0**self.exponent, self.places)
            self._digits_at = self.places
        return self._digits


def scaled(number: float, places: int) -> int:
    """Return number times 10^places rounded half up; a binary hair below a half counts as the half."""
    large = abs(number) * 10.0**places
    whole = math.floor(large + 0.5 + large * _HALF_SLACK + 1e-12)
    return -whole if number < 0 else whole


def rounded(number: float, places: int) -> float:
    """Return a number rounded half up to `places` decimals."""
    return scaled(number, places) / 10.0**places


def make_figure(number: float, size: float, *, least: int = 0, exact_places: int | None = None) -> Figure:
    """Return the form a value starts in: exact if short, else four significant digits.

    `least` is the fewest decimals, `exact_places` the decimals of a value given in decimal text.
    """
    exponent = _exponent(number)
    mantissa = number / 10.0**exponent
    if exact_places is not None and exponent == 0:
        return Figure(number, 0, max(exact_places, least), True, size)
    for places in range(0, _places(mantissa, USUAL) + 1):
        if abs(rounded(mantissa, places) - mantissa) <= 1e-13 * abs(mantissa):
            return Figure(number, exponent, max(places, least), True, size * 10.0**exponent)
    return Figure(number, exponent, max(_places(mantissa, USUAL), least), False, size * 10.0**exponent)


def make_coarse_figure(number: float, size: float) -> Figure:
    """Return a form of four digits whatever the size: a large number takes a power of ten at once."""
    power = math.floor(math.log10(abs(number)) + 1e-12) if number else 0
    exponent = 3 * (power // 3) if power >= 4 else 0
    places = _places(number / 10.0**exponent, USUAL)
    return Figure(number, exponent, places, False, size * 10.0**exponent)


def _exponent(number: float) -> int:
    if number == 0 or not math.isfinite(number):
        return 0
    power = math.floor(math.log10(abs(number)) + 1e-12)
    if power >= 6 or power <= -5:
        return 3 * (power // 3)
    return 0


def _places(number: float, digits: int) -> int:
    """Return the decimals that show so many significant digits; never left of the decimal point."""
    if number == 0:
        return 0
    power = math.floor(math.log10(abs(number)) + 1e-12)
    if scaled(number, max(0, digits - 1 - power)) >= 10 ** (digits + max(0, power - digits + 1)):
        power += 1
    return max(0, digits - 1 - power)


@dataclass(slots=True)
class Sum:
    """One line to be confirmed: `work(printed)` must round to the result's printed digits."""

    work: Callable[[Callable[[Id], float]], float | None]
    inputs: tuple[Id, ...]
    result: Id


@dataclass(slots=True)
class Order:
    """A printed comparison that must hold between the printed figures too."""

    left: Id
    right: Id
    sign: str


@dataclass(slots=True)
class Digits:
    """Finds the printed form of every value."""

    figures: dict[Id, Figure] = field(default_factory=dict)
    _sums: list[Sum] = field(default_factory=list)
    _orders: list[Order] = field(default_factory=list)
    _same: dict[Id, Id] = field(default_factory=dict)
    _users: dict[Id, list[int]] = field(default_factory=dict)

    def add(self, name: Id, figure: Figure) -> None:
        """Keep the first figure of a value."""
        self.figures.setdefault(name, figure)

    def join(self, name: Id, other: Id) -> None:
        """Let a value that is another one, chosen or copied, share its printed form."""
        target = self.root(other)
        if target != name:
            self._same[name] = target

    def root(self, name: Id) -> Id:
        """Return the value whose printed form this one shares."""
        while name in self._same:
            name = self._same[name]
        return name

    def figure(self, name: Id) -> Figure:
        """Return the figure of a value."""
        return self.figures[self.root(name)]

    def need(self, line: Sum) -> None:
        """Add a line to confirm."""
        self._sums.append(line)

    def need_order(self, order: Order) -> None:
        """Add a printed comparison to hold."""
        self._orders.append(order)

    # -------------------------------------------------------- solving

    def solve(self) -> None:
        """Settle every figure; each pass only adds digits, so it ends. The lines confirmed are let go."""
        for place, line in enumerate(self._sums):
            for name in {*(self.root(i) for i in line.inputs), self.root(line.result)}:
                self._users.setdefault(name, []).append(place)
        waiting = list(range(len(self._sums) - 1, -1, -1))
        queued = set(waiting)
        while True:
            while waiting:
                place = waiting.pop()
                queued.discard(place)
                for name in self._settle(self._sums[place]):
                    for user in self._users.get(name, ()):
                        if user != place and user not in queued:
                            queued.add(user)
                            waiting.append(user)
            for order in self._orders:
                for name in self._settle_order(order):
                    for user in self._users.get(name, ()):
                        if user not in queued:
                            queued.add(user)
                            waiting.append(user)
            if not waiting:
                break
        self._sums.clear()
        self._orders.clear()
        self._users.clear()

    def _printed(self, name: Id) -> float:
        return self.figure(name).printed

    def _confirmed(self, line: Sum) -> bool:
        figure = self.figure(line.result)
        found = line.work(self._printed)
        return found is not None and scaled(found / figure.size, figure.places) == figure.mantissa

    def _settle(self, line: Sum) -> list[Id]:
        """Confirm one line; returns the values whose form changed."""
        if self._confirmed(line):
            self.figure(line.result).settled = True
            return []
        changed: list[Id] = []
        result = self.figure(line.result)
        if not (result.exact or result.settled or result.dropped):
            fewer = _places(result.number / 10.0**result.exponent, FEWEST)
            if fewer < result.places:
                result.places, result.dropped = fewer, True
                changed.append(self.root(line.result))
                if self._confirmed(line):
                    result.settled = True
                    return changed
        gained: list[Id] = []
        result.settled = True
        while not self._confirmed(line):
            name = self.root(line.result) if _halfway(result) else self._most_telling(line)
            if name is None:
                for name in gained:  # digits that confirm nothing are digits for nothing
                    self.figures[name].places -= 1
                return changed
            self._gain(name)
            gained.append(name)
        return changed + gained

    def _most_telling(self, line: Sum) -> Id | None:
        """Return the input whose rounding moves the line most; None where all are printed in full."""
        open_names = {self.root(name) for name in line.inputs if not self._full(self.figure(name))}
        if len(open_names) <= 1:
            return next(iter(open_names), None)
        before = line.work(self._printed)
        best, most = None, -1.0
        for name in sorted(open_names, key=repr):
            figure = self.figures[name]

            def true(other: Id, name: Id = name, figure: Figure = figure) -> float:
                return (
                    figure.number * figure.size / 10.0**figure.exponent
                    if self.root(other) == name
                    else self._printed(other)
                )

            after = line.work(true)
            moved = math.inf if before is None or after is None else abs(after - before)
            if moved > most:
                best, most = name, moved
        return best

    def _full(self, figure: Figure) -> bool:
        return figure.exact or figure.places >= _places(figure.number / 10.0**figure.exponent, MOST)

    def _gain(self, name: Id) -> None:
        """Add a digit; digits that are zeros to the end make the value exact."""
        figure = self.figures[name]
        figure.places += 1
        mantissa = figure.number / 10.0**figure.exponent
        figure.exact = abs(rounded(mantissa, figure.places) - mantissa) <= 1e-14 * abs(mantissa)

    def _settle_order(self, order: Order) -> list[Id]:
        """Make a true comparison read true in print."""
        changed: list[Id] = []
        left, right = self.figure(order.left), self.figure(order.right)
        while not _reads(left.printed, right.printed, order.sign):
            open_names = [n for n in (order.left, order.right) if not self._full(self.figure(n))]
            if not open_names:
                break
            # the coarser one first: 30.4 beside 30.36 becomes 30.36
            fewest = min(self.figure(name).places for name in open_names)
            for name in (name for name in open_names if self.figure(name).places == fewest):
                self._gain(self.root(name))
                changed.append(self.root(name))
        return changed


def _halfway(figure: Figure) -> bool:
    """Tell whether a value lies in the middle between two printed ones: no digits of the inputs tell which."""
    large = abs(figure.number) / 10.0 ** (figure.exponent - figure.places)
    return not figure.exact and abs(large % 1.0 - 0.5) <= 1e-9 * max(large, 1.0)


def _reads(left: float, right: float, sign: str) -> bool:
    near = abs(left - right) <= 1e-12 * max(abs(left), abs(right))
    if sign in ("<", ">"):
        return not near and (left < right) == (sign == "<")
    if sign in ("<=", ">="):
        return near or (left < right) == (sign == "<=")
    return sign != "!=" or not near


def number_text(figure: Figure, *, unsigned: bool = False) -> str:
    """Return the printed digits of a figure's mantissa, thousands parted by commas."""
    digits = str(abs(figure.mantissa)).rjust(figure.places + 1, "0")
    whole = digits[: len(digits) - figure.places] if figure.places else digits
    rest = digits[len(digits) - figure.places :] if figure.places else ""
    grouped = f"{int(whole):,}"
    sign = "−" if figure.mantissa < 0 and not unsigned else ""
    return sign + grouped + (f".{rest}" if rest else "")
