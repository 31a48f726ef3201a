"""Binds every name of a template to a slot, keeping page order, row sets and the arms a name is given in.

`Template` in, `Plan` out, problems beside. One name space a template; a part has its own. Looks at no value
and at no dimension (`plan.dimensions` does).
"""

from __future__ import annotations

from dataclasses import replace
from fractions import Fraction

from calcreport.core.expression import Name, Number
from calcreport.core.problems import Problems
from calcreport.plan.below import given_below
from calcreport.plan.checks import CheckNames
from calcreport.plan.equations import balanced
from calcreport.plan.figures import plan_figure
from calcreport.plan.made import plan_rows
from calcreport.plan.methods import plan_method, plan_twin
from calcreport.plan.model import (
    Given,
    Plan,
    PlannedArm,
    PlannedBranchArm,
    PlannedBranches,
    PlannedCheck,
    PlannedEach,
    PlannedGiven,
    PlannedGives,
    PlannedLine,
    PlannedPart,
    PlannedRequire,
    PlannedText,
    PlannedUnknown,
    RowSet,
    Slot,
    Template,
)
from calcreport.plan.names import Names, assured
from calcreport.plan.parts import PartHander
from calcreport.plan.placing import needs_paper, once_only
from calcreport.plan.promised import hold_gives, least_slot
from calcreport.plan.space import Context, Known, Maker, Space
from calcreport.read.model import (
    EVERY,
    Branches,
    Broken,
    Check,
    Drawing,
    Each,
    Gives,
    Line,
    Method,
    PartUse,
    Require,
    Rows,
    Text,
    Twin,
    Unknown,
)

#: lines of one plan, those of its parts counted wherever they are used
MOST_LINES = 20_000


def link(template: Template, problems: Problems) -> Plan:
    """Bind a template; where problems were added the plan serves to find more of them, and no calculation."""
    linker = _Linker(problems)
    body = template.body
    space = Space({}, frozenset(given_below(body.lines)), told=set(body.told))
    givens = tuple(linker.given(given, space, ()) for given in body.given)
    lines = linker.lines(body.lines, space, Context())
    hold_gives(body, space, problems)
    covers = tuple(dict.fromkeys([*body.covers, *linker.covers]))
    leaves = tuple(dict.fromkeys([*template.excludes, *linker.leaves]))
    slots, sets = tuple(linker.maker.slots), tuple(linker.maker.sets)
    least = least_slot(body, space, problems)
    # a name that stands here goes before one inside a part, which nobody sees
    known = {name: found.index for name, found in (space.partial | space.names).items() if isinstance(found, Slot)}
    paths = {slot.path: slot.index for slot in slots} | known
    return Plan(template, slots, sets, givens, lines, covers, leaves, paths, least)


class _Linker:
    def __init__(self, problems: Problems) -> None:
        self.problems = problems
        self.maker = Maker(problems)
        self.names = Names(self.maker.sets, problems)
        self.parts = PartHander(self.names, self.maker, problems)
        self.checks = CheckNames(problems)
        self.covers: list[str] = []
        self.leaves: list[str] = []
        self.count = 0

    # -------------------------------------------------------- givens

    def given(self, given: Given, space: Space, sets: tuple[int, ...]) -> PlannedGiven:
        if given.kind == "rows":
            rows = self.maker.row_set(given.name, space, sets, given.row_names, given.span)
            columns = tuple(self.given(column, space, (*sets, rows.index)) for column in given.columns)
            return PlannedGiven(given, -1, rows.index, columns, (), ())
        over = tuple(self.names.set_named(name.name, name.span, space) for name in given.over)
        assert given.symbol is not None
        absent = given.if_none == "absent"
        slot = self.maker.slot(given.symbol, space, sets + over, given.span, absent=absent)
        outputs = tuple(
            self.maker.slot(symbol, space, sets, given.span, absent=absent).index for symbol, _ in given.gives
        )
        return PlannedGiven(given, slot.index, -1, (), outputs, over)

    # -------------------------------------------------------- lines

    def lines(self, lines: tuple[Line, ...], space: Space, at: Context) -> tuple[PlannedLine, ...]:
        found: list[PlannedLine] = []
        for line in lines:
            self.count += 1
            if self.count > MOST_LINES:
                self.problems.add(
                    "file-too-large",
                    line.span.part(0, 1),
                    "the template holds too many lines, parts included",
                    expected=f"{MOST_LINES:,} at most",
                    found="more",
                )
                break
            planned = self.line(line, space, at)
            if planned is not None:
                found.append(planned)
        return tuple(found)

    def line(self, line: Line, space: Space, at: Context) -> PlannedLine | None:
        names = self.names
        match line:
            case Text(kind, pieces, cite, span, leaves):
                self.leaves.extend(leaves)
                return PlannedText(kind, tuple(self.piece(p, space, at) for p in pieces), cite, span, leaves)
            case Gives():
                return self.gives(line, space, at)
            case Branches():
                return self.branches(line, space, at)
            case Rows():
                return plan_rows(line, names, self.maker, space, at)
            case Each():
                return self.each(line, space, at)
            case Unknown():
                return self.unknown(line, space, at)
            case PartUse():
                return self.part(line, space, at)
            case Check(name, holds, says, cite, span):
                self.checks.take(space.stem + name, span)
                return PlannedCheck(space.stem + name, names.condition(holds, space, at), says, cite, span)
            case Require(condition, says, cite, quiet, span):
                return PlannedRequire(names.condition(condition, space, at), says, cite, span, quiet=quiet)
            case Drawing():
                return plan_figure(line, names, space, at)
            case Broken(lost, inner, span):
                space.told.update(lost)
                return PlannedPart("", "", self.lines(inner, space, at), span)
            case Method():
                return plan_method(line, names, self.maker, space, at)
            case Twin():
                return plan_twin(line, names, self.maker, space, at, self.checks)

    def piece(self, piece: str | Name, space: Space, at: Context) -> str | int:
        if isinstance(piece, str):
            return piece
        self.names.look_name(piece, space, at)
        found = space.names.get(piece.name)
        return found.index if isinstance(found, Slot) else ""

    def gives(self, line: Gives, space: Space, at: Context) -> PlannedLine:
        arms: list[PlannedArm] = []
        for arm in line.arms:
            when = None if arm.when is None else self.names.condition(arm.when, space, at)
            more = frozenset() if arm.when is None else assured(arm.when, space)
            inner = replace(at, assured=at.assured | more)
            lost = Number(Fraction(0), "0", None, line.span)
            formula = self.names.value(arm.formula, line.symbol, space, inner) if arm.formula is not None else lost
            arms.append(PlannedArm(when, formula))
        slot = self.maker.slot(line.symbol, space, at.open, line.name_span)
        cited = None
        if line.as_cited is not None:
            left, right = line.as_cited
            cited = self.names.expression(left, space, at), self.names.expression(right, space, at)
        return PlannedGives(slot.index, tuple(arms), line.cite, cited, False, line.span)

    def branches(self, line: Branches, space: Space, at: Context) -> PlannedLine:
        before, partial, siblings = dict(space.names), dict(space.partial), space.siblings
        arms: list[PlannedBranchArm] = []
        given: list[dict[str, Known]] = []
        somewhere: dict[str, Known] = {}
        checks, taken = dict(self.checks.taken), dict(self.checks.taken)
        for arm in line.arms:
            self.checks.taken = dict(checks)
            space.siblings = {**siblings, **somewhere}
            when = None if arm.when is None else self.names.condition(arm.when, space, at)
            more = frozenset() if arm.when is None else assured(arm.when, space)
            lines = self.lines(arm.lines, space, replace(at, assured=at.assured | more))
            arms.append(PlannedBranchArm(when, lines, arm.says))
            given.append({name: value for name, value in space.names.items() if name not in before})
            somewhere |= {name: value for name, value in space.partial.items() if name not in partial}
            somewhere |= given[-1]
            space.names, space.partial = dict(before), dict(partial)
            taken |= self.checks.taken
        space.siblings, self.checks.taken = siblings, taken
        everywhere = set.intersection(*(set(new) for new in given)) if given else set()
        for name, value in somewhere.items():
            (space.names if name in everywhere else space.partial)[name] = value
        return PlannedBranches(tuple(arms), line.span)

    def each(self, line: Each, space: Space, at: Context) -> PlannedLine:
        name = line.rows
        index = self.names.set_named(name.name, name.span, space)
        if index >= 0:
            self.names.hold_open(self.maker.sets[index].outer, name.name, name.span, at)
        if index >= 0 and index in at.open:
            self.problems.add(
                "row-leak",
                name.span,
                f"the rows of `{name.name}` are open here already",
                expected="another set, or sum(… over SET) and its kin",
                found=f"`each: {name.name}` inside itself",
            )
        inner = replace(at, open=(*at.open, index))
        for unseen in needs_paper(line.lines) if line.show == "figure" else ():
            self.problems.add(
                "not-in-figure",
                unseen.span.part(0, 1),
                "this line would stand on no sheet",
                expected="lines that a figure rests on",
                found=f"a `{unseen.kind}` line"
                if isinstance(unseen, Text)
                else "a method, whose proof must be read"
                if isinstance(unseen, Method)
                else "a check",
                hint="leave out `show: figure`, or put the line after the block",
            )
        # what is not known inside may be a column of a set that could not be made out
        columns = {EVERY} - space.told if index < 0 else set()
        space.told |= columns
        lines = self.lines(line.lines, space, inner)
        table = tuple(self.table_column(column, space, inner) for column in line.table)
        space.told -= columns
        return PlannedEach(index, lines, table, line.show, line.span)

    def unknown(self, line: Unknown, space: Space, at: Context) -> PlannedLine:
        low, high = self.names.expression(line.low, space, at), self.names.expression(line.high, space, at)
        slot = self.maker.slot(line.symbol, space, at.open, line.name_span)
        for inner in once_only(line.lines):
            self.problems.add(
                "not-in-unknown",
                inner.span.part(0, 1),
                "this line cannot stand among the lines of an `unknown`",
                expected="lines that are worked once a trial",
                found="a check, a figure or a method",
                hint="put it after the `unknown`",
            )
        lines = self.lines(line.lines, space, at)
        sides = balanced(self.names.expression(line.left, space, at), self.names.expression(line.right, space, at))
        return PlannedUnknown(slot.index, low, high, *sides, lines, line.span)

    def table_column(self, name: Name, space: Space, at: Context) -> int:
        """Bind a column of a table, where a name given in some branches only may stand too."""
        found = space.names.get(name.name) or space.partial.get(name.name)
        if isinstance(found, Slot):
            self.names.hold_open(found.sets, name.name, name.span, at)
            return found.index
        if isinstance(found, RowSet):
            self.names.look_name(name, space, at)
        else:
            self.names.say_unknown(name, space)
        return -1

    def part(self, line: PartUse, space: Space, at: Context) -> PlannedLine | None:
        body = line.body
        if body is None:
            space.told.add(f"{line.stem}.{EVERY}" if line.stem else EVERY)
            return None
        self.covers.extend(body.covers)
        inner = self.parts.inner_space(line, body, space, frozenset(given_below(body.lines)))
        seen = set(inner.names)
        handed = self.parts.hand_over(line, body, space, inner, at)
        with self.checks.part(line.name.name, line.name.span):
            lines = handed + self.lines(body.lines, inner, at)
        hold_gives(body, inner, self.problems)
        own = seen | {name.name for name in line.same} | {name.name for name, _ in line.handed}
        self.parts.publish(line, body, inner, space, own)
        return PlannedPart(body.title, line.stem, lines, line.span)
