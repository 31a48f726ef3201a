"""Works a plan once more, line by line, in quantities with units.

A plan and the given values as typed in, values with units and verdicts out. An interpreter of its own: no closure,
no base unit and no tie rule of the first path.
Kept in one though long: one interpreter, a method for each node and line.
"""

from __future__ import annotations

from collections.abc import Callable
from typing import Any

from calcreport.core.expression import (
    Attach,
    Binary,
    Call,
    Compare,
    Condition,
    Expression,
    Is,
    IsGiven,
    Logic,
    Name,
    Negate,
    Not,
    Number,
    Over,
    Strip,
)
from calcreport.core.methods import METHODS
from calcreport.plan.model import (
    BoundInput,
    Plan,
    PlannedBranches,
    PlannedCheck,
    PlannedEach,
    PlannedGives,
    PlannedLine,
    PlannedMethod,
    PlannedPart,
    PlannedRequire,
    PlannedRows,
    PlannedUnknown,
)
from calcreport.second.closing import Found, NotClosed
from calcreport.second.closures import CLOSURES
from calcreport.second.quantities import Quantities

Key = tuple[int, ...]
#: how closely both sides of an equation must agree at a root found in double precision
RESIDUAL = 1e-9


class Stopped(Exception):
    """The second path cannot go on: a requirement fails, or a formula has no value."""


class Rework:
    """One calculation worked again; `values` are quantities, words or None by slot and key."""

    def __init__(
        self,
        plan: Plan,
        make: Quantities,
        names: Callable[[int], list[tuple[Key, tuple[str, ...]]]],
        root: Callable[[int, Key], float],
        result: Callable[[PlannedMethod, tuple[tuple[int, int], ...]], Found],
    ) -> None:
        self.plan, self.make = plan, make
        #: returns a root of the first path in its declared unit: roots are confirmed, not found again
        self.root = root
        #: returns what a method of the first path came to, in base units: it is confirmed, not run again
        self.result = result
        self.values: dict[tuple[int, Key], Any] = {}
        self.names: dict[tuple[int, Key], tuple[str, ...]] = {}
        for rows in plan.sets:
            for key, found in names(rows.index):
                self.names[rows.index, key] = found
        self.open: dict[int, int] = {}
        self.verdicts: list[tuple[str, bool]] = []
        #: two sides closer than this, relative, are one value in thirty digits
        self.equal = make.mp.mpf(10) ** -25

    # -------------------------------------------------------- lines

    def run(self) -> None:
        """Work every line; raises `Stopped`."""
        for line in self.plan.lines:
            self.line(line)

    def line(self, line: PlannedLine) -> None:
        """Work one line."""
        match line:
            case PlannedGives():
                self.gives(line)
            case PlannedBranches(arms):
                arm = next(a for a in arms if a.when is None or self.holds(a.when))
                for inner in arm.lines:
                    self.line(inner)
            case PlannedPart(_, _, lines):
                for inner in lines:
                    self.line(inner)
            case PlannedEach(rows, lines):
                for row in range(len(self.row_names(rows))):
                    self.open[rows] = row
                    for inner in lines:
                        self.line(inner)
                self.open.pop(rows, None)
            case PlannedUnknown():
                self.unknown(line)
            case PlannedRows():
                self.rows(line)
            case PlannedMethod():
                self.method(line)
            case PlannedCheck(name, holds):
                self.verdicts.append((name, self.holds(holds)))
            case PlannedRequire(condition, says):
                if not self.holds(condition):
                    raise Stopped(says)
            case _:
                pass

    def gives(self, line: PlannedGives) -> None:
        formula = next(a.formula for a in line.arms if a.when is None or self.holds(a.when))
        self.store(line.slot, formula)

    def store(self, slot: int, formula: Expression) -> None:
        """Work a formula into a slot: a word, or a quantity; a bare zero takes the slot's unit."""
        if self.plan.slots[slot].symbol.kind == "word":
            assert isinstance(formula, Name)
            other = formula.slot
            self.values[slot, self.key(slot)] = formula.name if other < 0 else self.values[other, self.key(other)]
            return
        unit = self.plan.slots[slot].symbol.unit
        value = self.work(formula)
        one = self.make.unit(unit.factors) if unit is not None else self.make.pure(1)
        self.values[slot, self.key(slot)] = self.alike(value, one)[0]

    def unknown(self, line: PlannedUnknown) -> None:
        """Take the root the first path found, work the lines there, and hold both sides against one another."""
        unit = self.plan.slots[line.slot].symbol.unit
        assert unit is not None
        key = self.key(line.slot)
        self.values[line.slot, key] = self.make.unit(unit.factors) * self.make.mp.mpf(self.root(line.slot, key))
        for inner in line.lines:
            self.line(inner)
        left, right = self.alike(self.work(line.left), self.work(line.right))
        other = right.to(left.units).magnitude
        gap, largest = abs(left.magnitude - other), max(abs(left.magnitude), abs(other))
        if gap > RESIDUAL * largest:
            raise Stopped(f"the two sides differ by {float(gap / largest):.1e} at the root")

    def method(self, line: PlannedMethod) -> None:
        """Take what the first path's method came to, and hold it against what it was handed by its closures."""
        takes, sets = METHODS[line.kind].takes, {given.name: given.rows for given in line.inputs if given.rows >= 0}
        handed: dict[str, Any] = {}
        for given in line.inputs:
            wanted = takes[given.name]
            if given.rows >= 0:
                handed[given.name] = self.row_names(given.rows)
            else:
                rows = [sets[name] for name in wanted.rows]
                handed[given.name] = self.by_row(given, rows, self.make.base(wanted.dimension))
        found = self.result(line, tuple(sorted(self.open.items())))
        try:
            CLOSURES[line.kind](handed, found, self.make.mp)
        except NotClosed as error:
            raise Stopped(f"{line.kind}: {error}") from error
        self.take(line, found)

    def by_row(self, given: BoundInput, rows: list[int], one: Any) -> Any:
        """Return a number in base units or a word; for every row of the first of `rows` a list of what is inside."""
        if rows:
            found = []
            for row in range(len(self.row_names(rows[0]))):
                self.open[rows[0]] = row
                found.append(self.by_row(given, rows[1:], one))
            self.open.pop(rows[0], None)
            return found
        if given.formula is not None:
            return self.number(given.formula, one)
        return given.word or self.values[given.slot, self.key(given.slot)]

    def number(self, formula: Expression, one: Any) -> Any:
        """Return a formula as a number in base units."""
        return (self.alike(self.work(formula), one)[0] / one).to("").magnitude

    def take(self, line: PlannedMethod, found: Found) -> None:
        """Store the outputs a line takes."""
        for index, name in line.sets:
            outer = self.plan.sets[index].outer
            for key, names in found.sets[name].items():
                around = tuple(self.open[other] for other in outer[: len(outer) - len(key)])
                self.names[index, (*around, *key)] = names
        for slot, name in line.outputs:
            unit = self.plan.slots[slot].symbol.unit
            assert unit is not None
            one, sets = self.make.base(unit.dimension), self.plan.slots[slot].sets
            for key, value in found.by_row[name].items() if name in found.by_row else (((), found.outputs[name]),):
                around = tuple(self.open[index] for index in sets[: len(sets) - len(key)])
                self.values[slot, (*around, *key)] = one * self.make.mp.mpf(value)

    def rows(self, line: PlannedRows) -> None:
        """Make a set: every entry, every pairing that fits."""
        outer = tuple(self.open[index] for index in self.plan.sets[line.rows].outer)
        names: list[str] = []
        for entry in line.entries:
            over = next((column.over for column in line.columns if column.over >= 0), -1)
            for pairing in self.pairings(entry.pairing, over):
                self.open[line.rows] = len(names)
                if entry.when is not None and not self.holds(entry.when):
                    continue
                name = entry.name or str(len(names) + 1)
                for variable, row in pairing.items():
                    name = name.replace("{" + variable + "}", row)
                names.append(name)
                for column, cell in zip(line.columns, entry.cells, strict=True):
                    if isinstance(cell, tuple):
                        chosen = {pairing.get(row, row): node for row, node in cell}
                        for place, row in enumerate(self.row_names(column.over)):
                            self.open[column.over] = place
                            node = chosen.get(row, column.other)
                            assert node is not None
                            self.store(column.slot, node)
                        self.open.pop(column.over, None)
                    else:
                        self.store(column.slot, cell)
        self.open.pop(line.rows, None)
        self.names[line.rows, outer] = tuple(names)

    def pairings(self, wanted: tuple[tuple[str, tuple[str, ...]], ...], over: int) -> list[dict[str, str]]:
        found: list[dict[str, str]] = [{}]
        listed = self.plan.sets[over].row_names if over >= 0 else ()
        for variable, patterns in wanted:
            fits = []
            for name in self.row_names(over):
                stems = [p[:-1] for p in patterns if p.endswith("*")]
                if name in patterns or (name not in listed and any(name.startswith(stem) for stem in stems)):
                    fits.append(name)
            found = [{**pairing, variable: name} for pairing in found for name in fits]
        return found

    def key(self, slot: int) -> Key:
        """Return a slot's key in the open rows."""
        return tuple(self.open[index] for index in self.plan.slots[slot].sets)

    def row_names(self, index: int) -> tuple[str, ...]:
        """Return a set's row names where its outer rows are open."""
        return self.names.get((index, tuple(self.open[outer] for outer in self.plan.sets[index].outer)), ())

    # -------------------------------------------------------- formulas

    def work(self, node: Expression) -> Any:
        """Return the value of a formula."""
        match node:
            case Number(_, text, unit):
                number = self.make.number(text)
                return self.make.pure(number) if unit is None else self.make.unit(unit.factors) * number
            case Name(_, _, slot):
                return self.values[slot, self.key(slot)]
            case Negate(body):
                return -self.work(body)
            case Binary(op, left, right):
                return self.binary(op, self.work(left), self.work(right))
            case Call(function, arguments):
                return self.call(function, [self.work(argument) for argument in arguments])
            case Strip(body, unit):
                return (self.work(body) / self.make.unit(unit.factors)).to("")
            case Attach(body, unit):
                return self.work(body).to("") * self.make.unit(unit.factors)
            case Over():
                return self.over(node)

    def binary(self, op: str, left: Any, right: Any) -> Any:
        match op:
            case "+" | "-":
                left, right = self.alike(left, right)
                return left + right if op == "+" else left - right
            case "*":
                return left * right
            case "/":
                if right.magnitude == 0:
                    raise Stopped("division by zero")
                return left / right
            case _:
                return self.power(left, right.to("").magnitude)

    def power(self, base: Any, exponent: Any) -> Any:
        """Raise a quantity; its unit takes the exponent as a nearby fraction."""
        if base.magnitude < 0 and exponent != int(exponent):
            raise Stopped("root of a negative value")
        plain = base.to_root_units() if not base.dimensionless else base.to("")
        number = self.make.mp.power(plain.magnitude, exponent)
        if base.dimensionless:
            return self.make.pure(number)
        return self.make.registry.Quantity(self.make.mp.mpf(1), plain.units) ** float(exponent) * number

    def alike(self, left: Any, right: Any) -> tuple[Any, Any]:
        """Give a bare zero the unit of its neighbour."""
        if left.dimensionless and left.magnitude == 0 and not right.dimensionless:
            return 0 * right, right
        if right.dimensionless and right.magnitude == 0 and not left.dimensionless:
            return left, 0 * left
        return left, right

    def difference(self, left: Any, right: Any) -> Any:
        """Return left minus right as a number, zero where they agree to twenty-five digits."""
        left, right = self.alike(left, right)
        other = right.to(left.units)
        gap = left.magnitude - other.magnitude
        largest = max(abs(left.magnitude), abs(other.magnitude))
        return self.make.mp.mpf(0) if abs(gap) <= self.equal * largest else gap

    def call(self, function: str, values: list[Any]) -> Any:
        mp = self.make.mp
        match function:
            case "min" | "max":
                measured = next((v for v in values if not v.dimensionless), values[0])
                values = [self.alike(v, measured)[0] for v in values]
                best = values[0]
                for value in values[1:]:
                    gap = self.difference(value, best)
                    best = value if (gap < 0 if function == "min" else gap > 0) else best
                return best
            case "abs":
                return -values[0] if values[0].magnitude < 0 else values[0]
            case "sqrt":
                return self.power(values[0], mp.mpf(1) / 2)
            case "roundup" | "rounddown":
                return self.rounded(function, values[0], values[1])
            case _:
                number = values[0].to("").magnitude
                if function == "ln" and number <= 0:
                    raise Stopped("logarithm of a value that is not positive")
                return self.make.pure(getattr(mp, function)(number))

    def rounded(self, function: str, value: Any, step: Any) -> Any:
        mp = self.make.mp
        steps = (value / step).to("").magnitude
        near = mp.nint(steps)
        if abs(steps - near) <= self.equal * max(abs(steps), 1):
            return step * near
        return step * (mp.ceil(steps) if function == "roundup" else mp.floor(steps))

    def over(self, node: Over) -> Any:
        """Work over the rows of a set."""
        kept: list[Any] = []
        points: list[tuple[Any, Any]] = []
        linear = node.function == "linear"
        at = self.work(node.where.right) if linear and isinstance(node.where, Compare) else None
        before = self.open.get(node.bound)
        for row in range(len(self.row_names(node.bound))):
            self.open[node.bound] = row
            if linear and isinstance(node.where, Compare):
                points.append((self.work(node.where.left), self.work(node.body)))
            elif node.where is None or self.holds(node.where):
                kept.append(self.work(node.body))
        self.open.pop(node.bound, None)
        if before is not None:
            self.open[node.bound] = before
        if linear:
            return self.between(points, at, node)
        if node.function == "sum":
            total = self.make.pure(0)
            for value in kept:
                total = self.binary("+", total, value)
            return total
        if not kept:
            if node.otherwise is None:
                raise Stopped(f"no row of `{node.rows}` fits")
            return self.work(node.otherwise)
        return kept[0] if node.function == "pick" else self.call(node.function, kept) if len(kept) > 1 else kept[0]

    def between(self, points: list[tuple[Any, Any]], at: Any, node: Over) -> Any:
        """Read on the straight line between two rows around a place: the last row before it, the first after."""
        lower = [p for p in points if self.difference(p[0], at) <= 0]
        upper = [p for p in points if self.difference(p[0], at) >= 0]
        if not lower or not upper:
            if node.otherwise is None:
                raise Stopped(f"outside the rows of `{node.rows}`")
            return self.work(node.otherwise)
        (x1, y1), (x2, y2) = max(reversed(lower), key=lambda p: p[0]), min(upper, key=lambda p: p[0])
        if self.difference(x1, x2) == 0:
            return y2
        return y1 + (y2 - y1) * ((at - x1) / (x2 - x1)).to("").magnitude

    # -------------------------------------------------------- conditions

    def holds(self, node: Condition) -> bool:
        """Tell whether a condition holds."""
        match node:
            case Compare(op, left, right):
                gap = self.difference(self.work(left), self.work(right))
                return bool(
                    {"<": gap < 0, "<=": gap <= 0, ">": gap > 0, ">=": gap >= 0, "=": gap == 0, "!=": gap != 0}[op]
                )
            case Logic("and", left, right):
                return self.holds(left) and self.holds(right)
            case Logic(_, left, right):
                return self.holds(left) or self.holds(right)
            case Not(body):
                return not self.holds(body)
            case Is(name, word, _, bound):
                if bound >= 0:
                    return self.row_names(bound)[self.open[bound]] == word
                return bool(self.values[name.slot, self.key(name.slot)] == word)
            case IsGiven(name):
                return self.values.get((name.slot, self.key(name.slot))) is not None
