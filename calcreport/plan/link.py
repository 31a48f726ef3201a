"""Binds every name of a template to a slot, keeping page order, row sets and the arms a name is given in.

`Template` in, `Plan` out, problems beside. One name space a template; a part has its own. Looks at no value
and at no dimension (`plan.dimensions` does).
"""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass, field, replace

from calcreport.core.expression import Condition, Expression, Is, IsGiven, Logic, Name, Node, Over, children
from calcreport.core.expression import rebuilt_condition, rebuilt_expression
from calcreport.core.problems import Problems, nearest
from calcreport.core.source import Citation, Span
from calcreport.plan.model import (
    FigureInput,
    Plan,
    PlannedArm,
    PlannedBranchArm,
    PlannedBranches,
    PlannedCheck,
    PlannedColumn,
    PlannedEach,
    PlannedEntry,
    PlannedFigure,
    PlannedGiven,
    PlannedGives,
    PlannedLine,
    PlannedPart,
    PlannedRequire,
    PlannedRows,
    PlannedText,
    RowSet,
    Slot,
)
from calcreport.read.model import (
    Branches,
    Check,
    Drawing,
    Each,
    Entry,
    Given,
    Gives,
    Line,
    PartBody,
    PartUse,
    Require,
    Rows,
    Symbol,
    Template,
    Text,
)

#: what a figure may be handed is held by the figure itself; here only names are bound


@dataclass(slots=True)
class _Space:
    """One name space: what is visible now, and what exists somewhere below."""

    names: dict[str, Slot | RowSet]
    #: names some line further down gives
    later: frozenset[str]
    #: slots given in an arm that is not open now, for tables and for sibling arms
    partial: dict[str, Slot] = field(default_factory=dict)
    #: path prefix of a part with `as`
    stem: str = ""


@dataclass(frozen=True, slots=True)
class _Context:
    """Where a line stands: open sets, and symbols known to be given."""

    open: tuple[int, ...] = ()
    assured: frozenset[int] = frozenset()


def link(template: Template, problems: Problems) -> Plan | None:
    """Bind a template; None after adding problems."""
    before = len(problems)
    linker = _Linker(problems)
    body = template.body
    space = _Space({}, frozenset(_given_below(body.lines)))
    givens = linker.givens(body.given, space)
    lines = linker.lines(body.lines, space, _Context())
    if len(problems) > before:
        return None
    covers = tuple(dict.fromkeys([*body.covers, *linker.covers]))
    paths = {slot.path: slot.index for slot in linker.slots}
    return Plan(template, tuple(linker.slots), tuple(linker.sets), givens, lines, covers, paths)


def _given_below(lines: tuple[Line, ...]) -> Iterator[str]:
    """Yield every name that lines of this name space give, at any depth."""
    for line in lines:
        match line:
            case Gives(symbol):
                yield symbol.name
            case Branches(arms):
                for arm in arms:
                    yield from _given_below(arm.lines)
            case Each(_, inner):
                yield from _given_below(inner)
            case Rows(name, columns):
                yield name
                yield from (column.symbol.name for column in columns)


class _Linker:
    def __init__(self, problems: Problems) -> None:
        self.problems = problems
        self.slots: list[Slot] = []
        self.sets: list[RowSet] = []
        self.covers: list[str] = []

    # -------------------------------------------------------- making names

    def slot(self, symbol: Symbol, space: _Space, sets: tuple[int, ...], span: Span, absent: bool = False) -> Slot:
        """Make a slot, or reuse the one a sibling arm made under this name."""
        sibling = space.partial.get(symbol.name)
        if sibling is not None and symbol.name not in space.names:
            self.hold_alike(sibling, symbol, sets, span)
            space.names[symbol.name] = sibling
            return sibling
        made = Slot(len(self.slots), symbol, space.stem + symbol.name, sets, absent, span)
        if self.is_free(symbol.name, space, span):
            self.slots.append(made)
            space.names[symbol.name] = made
        else:
            self.slots.append(made)
        return made

    def hold_alike(self, sibling: Slot, symbol: Symbol, sets: tuple[int, ...], span: Span) -> None:
        one, other = sibling.symbol, symbol
        alike = (one.unit.dimension if one.unit else None) == (other.unit.dimension if other.unit else None)
        if not alike or sibling.sets != sets:
            self.problems.add("arms-differ", span, f"`{symbol.name}` is another thing in another arm",
                              expected="the same dimension and sets in every arm", found="they differ",
                              related=((sibling.span, "given here"),))  # fmt: skip

    def is_free(self, name: str, space: _Space, span: Span) -> bool:
        taken = space.names.get(name)
        if taken is None:
            return True
        self.problems.add("given-twice", span, f"`{name}` is given twice", expected="a name given once",
                          found=name, related=((taken.span, "first here"),))  # fmt: skip
        return False

    def row_set(self, name: str, space: _Space, outer: tuple[int, ...], row_names: tuple[str, ...], span: Span) -> RowSet:
        made = RowSet(len(self.sets), name, outer, row_names, span)
        self.sets.append(made)
        if self.is_free(name, space, span):
            space.names[name] = made
        return made

    # -------------------------------------------------------- givens

    def givens(self, givens: tuple[Given, ...], space: _Space) -> tuple[PlannedGiven, ...]:
        return tuple(self.given(given, space, ()) for given in givens)

    def given(self, given: Given, space: _Space, sets: tuple[int, ...]) -> PlannedGiven:
        if given.kind == "rows":
            rows = self.row_set(given.name, space, (), given.row_names, given.span)
            columns = tuple(self.given(column, space, (rows.index,)) for column in given.columns)
            return PlannedGiven(given, -1, rows.index, columns, (), ())
        over = tuple(self.set_named(name, given.span, space) for name in given.over)
        assert given.symbol is not None
        absent = given.if_none == "absent"
        slot = self.slot(given.symbol, space, sets + over, given.span, absent)
        outputs = tuple(self.slot(symbol, space, sets, given.span, absent).index for symbol, _ in given.gives)
        return PlannedGiven(given, slot.index, -1, (), outputs, over)

    def set_named(self, name: str, span: Span, space: _Space) -> int:
        found = space.names.get(name)
        if isinstance(found, RowSet):
            return found.index
        sets = [key for key, value in space.names.items() if isinstance(value, RowSet)]
        self.problems.add("unknown-name", span, f"there is no set `{name[:40]}` here",
                          expected="a set given or made above", found=name[:40], hint=nearest(name, sets))  # fmt: skip
        return -1

    # -------------------------------------------------------- formulas

    def expression(self, node: Expression, space: _Space, at: _Context) -> Expression:
        self.look(node, space, at)
        return rebuilt_expression(node, lambda n: self.bound(n, space))

    def condition(self, node: Condition, space: _Space, at: _Context) -> Condition:
        self.look(node, space, at)
        return rebuilt_condition(node, lambda n: self.bound(n, space))

    def bound(self, node: Node, space: _Space) -> Node:
        """Return a node with its name, set or open row bound."""
        found = space.names.get(_key(node))
        if isinstance(node, Name) and isinstance(found, Slot):
            return replace(node, slot=found.index)
        if isinstance(node, Over | Is) and isinstance(found, RowSet):
            return replace(node, bound=found.index)
        return node

    def look(self, node: Node, space: _Space, at: _Context) -> None:
        """Report unknown names, rows that leak out of their set, and values that may be absent."""
        match node:
            case Name():
                self.look_name(node, space, at)
            case IsGiven(name):
                self.look_name(name, space, replace(at, assured=at.assured | self.slot_of(name, space)))
            case Is(name, word):
                self.look_is(node, name, word, space, at)
            case Over(_, body, rows, where, otherwise):
                index = self.set_named(rows, node.span, space)
                if index >= 0:
                    inner = replace(at, open=(*at.open, index))
                    self.hold_open(self.sets[index].outer, rows, node.span, at)
                    self.look(body, space, inner)
                    if where is not None:
                        self.look(where, space, inner)
                if otherwise is not None:
                    self.look(otherwise, space, at)
            case Logic("and", left, right):
                self.look(left, space, at)
                self.look(right, space, replace(at, assured=at.assured | self.assured(left, space)))
            case _:
                for child in children(node):
                    self.look(child, space, at)

    def look_name(self, node: Name, space: _Space, at: _Context) -> None:
        found = space.names.get(node.name)
        if found is None:
            self.say_unknown(node, space)
        elif isinstance(found, RowSet):
            self.problems.add("row-leak", node.span, f"`{node.name}` is a set, not a value",
                              expected="a value, or sum(… over SET)", found=f"the set {node.name}")  # fmt: skip
        else:
            self.hold_open(found.sets, node.name, node.span, at)
            if found.may_be_absent and found.index not in at.assured:
                self.problems.add(
                    "may-be-absent", node.span, f"`{node.name}` may be missing here",
                    expected=f"a branch under `when: given({node.name})`", found="a use without it",
                    related=((found.span, "the project may say none"),),
                )  # fmt: skip

    def say_unknown(self, node: Name, space: _Space) -> None:
        if node.name in space.later or node.name in space.partial:
            words = "given further down" if node.name in space.later else "given only in some branches"
            slug = "used-before-given" if node.name not in space.partial else "arms-differ"
            self.problems.add(slug, node.span, f"`{node.name}` has no value yet: it is {words}",
                              expected="a name given above, in every branch", found=node.name)  # fmt: skip
            return
        self.problems.add("unknown-name", node.span, f"`{node.name[:40]}` is not known here",
                          expected="a name given above", found=node.name[:40],
                          hint=nearest(node.name, space.names))  # fmt: skip

    def hold_open(self, sets: tuple[int, ...], name: str, span: Span, at: _Context) -> None:
        closed = [self.sets[index].name for index in sets if index >= 0 and index not in at.open]
        if closed:
            self.problems.add(
                "row-leak", span, f"`{name}` has a value for every row of `{closed[0]}`",
                expected=f"a use in `each: {closed[0]}` or `… over {closed[0]}`", found="a use outside",
            )  # fmt: skip

    def look_is(self, node: Is, name: Name, word: str, space: _Space, at: _Context) -> None:
        found = space.names.get(name.name)
        if isinstance(found, RowSet):
            self.hold_open((found.index,), name.name, node.span, at)
            fits = not found.row_names or any(word == n or (n.endswith("*") and word.startswith(n[:-1])) for n in found.row_names)  # fmt: skip
            if not fits:
                self.problems.add("not-a-row", node.span, f"`{found.name}` has no row `{word[:40]}`",
                                  expected="one of " + ", ".join(found.row_names), found=word[:40])  # fmt: skip
            return
        self.look_name(name, space, at)
        if isinstance(found, Slot) and word not in found.symbol.words:
            words = found.symbol.words
            self.problems.add("not-a-word", node.span, f"`{word[:40]}` is not a word of `{name.name}`",
                              expected="one of " + ", ".join(words) if words else f"a comparison: {name.name} is a number",
                              found=word[:40], hint=nearest(word, words))  # fmt: skip

    def slot_of(self, name: Name, space: _Space) -> frozenset[int]:
        found = space.names.get(name.name)
        return frozenset({found.index}) if isinstance(found, Slot) else frozenset()

    def assured(self, node: Condition, space: _Space) -> frozenset[int]:
        """Return the slots a condition that holds shows to be given."""
        match node:
            case IsGiven(name):
                return self.slot_of(name, space)
            case Logic("and", left, right):
                return self.assured(left, space) | self.assured(right, space)
            case _:
                return frozenset()

    # -------------------------------------------------------- lines

    def lines(self, lines: tuple[Line, ...], space: _Space, at: _Context) -> tuple[PlannedLine, ...]:
        found = (self.line(line, space, at) for line in lines)
        return tuple(line for line in found if line is not None)

    def line(self, line: Line, space: _Space, at: _Context) -> PlannedLine | None:
        match line:
            case Text():
                return PlannedText(line.kind, tuple(self.piece(p, space, at) for p in line.pieces), line.cite, line.span)
            case Gives():
                return self.gives(line, space, at)
            case Branches():
                return self.branches(line, space, at)
            case Rows():
                return self.rows(line, space, at)
            case Each():
                return self.each(line, space, at)
            case PartUse():
                return self.part(line, space, at)
            case Check(name, holds, says, cite, span):
                return PlannedCheck(space.stem + name, self.condition(holds, space, at), says, cite, span)
            case Require(condition, says, cite, span):
                return PlannedRequire(self.condition(condition, space, at), says, cite, span)
            case Drawing():
                return self.figure(line, space, at)

    def piece(self, piece: str | Name, space: _Space, at: _Context) -> str | int:
        if isinstance(piece, str):
            return piece
        self.look_name(piece, space, at)
        found = space.names.get(piece.name)
        return found.index if isinstance(found, Slot) else ""

    def gives(self, line: Gives, space: _Space, at: _Context) -> PlannedLine:
        arms: list[PlannedArm] = []
        for arm in line.arms:
            when = None if arm.when is None else self.condition(arm.when, space, at)
            more = frozenset() if arm.when is None else self.assured(arm.when, space)
            inner = replace(at, assured=at.assured | more)
            arms.append(PlannedArm(when, self.expression(arm.formula, space, inner)))
        slot = self.slot(line.symbol, space, at.open, line.name_span)
        cited = None
        if line.as_cited is not None:
            left, right = line.as_cited
            cited = self.expression(left, space, at), self.expression(right, space, at)
        return PlannedGives(slot.index, tuple(arms), line.cite, cited, False, line.span)

    def branches(self, line: Branches, space: _Space, at: _Context) -> PlannedLine:
        before = dict(space.names)
        arms: list[PlannedBranchArm] = []
        given: list[dict[str, Slot | RowSet]] = []
        for arm in line.arms:
            when = None if arm.when is None else self.condition(arm.when, space, at)
            more = frozenset() if arm.when is None else self.assured(arm.when, space)
            lines = self.lines(arm.lines, space, replace(at, assured=at.assured | more))
            arms.append(PlannedBranchArm(when, lines))
            new = {name: value for name, value in space.names.items() if name not in before}
            given.append(new)
            space.partial.update({name: value for name, value in new.items() if isinstance(value, Slot)})
            space.names = dict(before)
        everywhere = set.intersection(*(set(new) for new in given)) if given else set()
        for name in everywhere:
            space.names[name] = given[0][name]
            space.partial.pop(name, None)
        return PlannedBranches(tuple(arms), line.span)

    def each(self, line: Each, space: _Space, at: _Context) -> PlannedLine | None:
        index = self.set_named(line.rows.name, line.rows.span, space)
        if index < 0:
            return None
        self.hold_open(self.sets[index].outer, line.rows.name, line.rows.span, at)
        inner = replace(at, open=(*at.open, index))
        lines = self.lines(line.lines, space, inner)
        table = tuple(self.table_column(name, space) for name in line.table)
        return PlannedEach(index, lines, table, line.show, line.span)

    def table_column(self, name: Name, space: _Space) -> int:
        found = space.names.get(name.name) or space.partial.get(name.name)
        if isinstance(found, Slot):
            return found.index
        self.say_unknown(name, space)
        return -1

    def figure(self, line: Drawing, space: _Space, at: _Context) -> PlannedLine:
        inputs: list[FigureInput] = []
        for name, formula in line.inputs:
            found = space.names.get(formula.name) if isinstance(formula, Name) else None
            if isinstance(found, RowSet):
                inputs.append(FigureInput(name.name, rows=found.index))
            elif isinstance(found, Slot):
                inputs.append(FigureInput(name.name, slot=found.index))
            elif isinstance(formula, Name) and formula.name not in space.later:
                inputs.append(FigureInput(name.name, word=formula.name))
            else:
                inputs.append(FigureInput(name.name, formula=self.expression(formula, space, at)))
        return PlannedFigure(line.kind, tuple(inputs), line.span)

    # -------------------------------------------------------- rows made here

    def rows(self, line: Rows, space: _Space, at: _Context) -> PlannedLine:
        rows = self.row_set(line.name, space, at.open, (), line.span)
        entries = []
        columns: list[PlannedColumn] = []
        overs: dict[str, int] = {}
        for column in line.columns:
            over = self.set_named(column.over, column.span, space) if column.over else -1
            overs[column.symbol.name] = over
        for entry in line.entries:
            entries.append(self.entry(entry, overs, space, at))
        for column in line.columns:
            over = overs[column.symbol.name]
            sets = (*at.open, rows.index) + ((over,) if over >= 0 else ())
            other = None if column.other is None else self.expression(column.other, space, at)
            slot = self.slot(column.symbol, space, sets, column.span)
            columns.append(PlannedColumn(slot.index, over, other))
        return PlannedRows(rows.index, tuple(columns), tuple(entries), line.says, line.cite, line.span)

    def entry(self, entry: Entry, overs: dict[str, int], space: _Space, at: _Context) -> PlannedEntry:
        when = None if entry.when is None else self.condition(entry.when, space, at)
        variables = {name for name, _ in entry.pairing}
        cells: list[Expression | tuple[tuple[str, Expression], ...]] = []
        for name, cell in entry.cells:
            if cell.formula is not None:
                cells.append(self.expression(cell.formula, space, at))
                continue
            over = overs.get(name, -1)
            for key, _ in cell.mapped:
                if over >= 0 and key not in variables:
                    self.hold_row(key, self.sets[over], cell.span)
            cells.append(tuple((key, self.expression(f, space, at)) for key, f in cell.mapped))
        return PlannedEntry(entry.name, entry.pairing, tuple(cells), when, entry.span)

    def hold_row(self, name: str, rows: RowSet, span: Span) -> None:
        if rows.row_names and name not in rows.row_names:
            self.problems.add("not-a-row", span, f"`{rows.name}` has no row `{name[:40]}`",
                              expected="one of " + ", ".join(rows.row_names), found=name[:40],
                              hint=nearest(name, rows.row_names))  # fmt: skip

    # -------------------------------------------------------- parts

    def part(self, line: PartUse, space: _Space, at: _Context) -> PlannedLine | None:
        body = line.body
        if body is None:
            return None
        self.covers.extend(body.covers)
        stem = space.stem + (f"{line.stem}." if line.stem else "")
        names = dict(space.names) if body.sees_user else {}
        inner = _Space(names, frozenset(_given_below(body.lines)), stem=stem)
        seen = set(names)
        lines = self.hand_over(line, body, space, inner, at)
        lines += self.lines(body.lines, inner, at)
        handed = {name.name for name in line.same} | {name.name for name, _ in line.handed}
        self.publish(line, body, inner, space, seen | handed)
        return PlannedPart(body.title, line.stem, lines, line.span)

    def hand_over(self, line: PartUse, body: PartBody, space: _Space, inner: _Space, at: _Context) -> tuple[PlannedLine, ...]:
        """Bind the part's givens to what it is handed."""
        wanted = {given.name: given for given in body.given}
        columns = {column.name: given.name for given in body.given for column in given.columns}
        lines: list[PlannedLine] = []
        for name in line.same:
            found = space.names.get(name.name)
            if name.name not in wanted:
                self.say_not_wanted(name, wanted, line)
            elif found is None:
                self.say_unknown(name, space)
            else:
                inner.names[name.name] = found
        for name, formula in line.handed:
            given = wanted.get(name.name)
            if given is None:
                self.say_not_wanted(name, wanted, line)
            else:
                lines.append(self.hand_one(given, name, formula, space, inner, at))
        for column, owner in columns.items():
            if owner in inner.names and column in space.names:
                inner.names[column] = space.names[column]
        missing = [n for n in wanted if n not in inner.names] + [c for c in columns if c not in inner.names]
        if missing:
            self.problems.add(
                "part-not-handed", line.span.part(0, 1), f"the part `{line.name}` is not handed all it needs",
                expected=", ".join(f"`{n}`" for n in missing), found="not under `same` or `with`",
            )  # fmt: skip
        return tuple(lines)

    def hand_one(
        self, given: Given, name: Name, formula: Expression | str, space: _Space, inner: _Space, at: _Context
    ) -> PlannedLine:
        assert given.symbol is not None and not isinstance(formula, str)
        words = given.symbol.words
        if words and isinstance(formula, Name) and formula.name in words:
            bound: Expression = formula
        else:
            bound = self.expression(formula, space, at)
        slot = self.slot(given.symbol, inner, at.open, name.span)
        return PlannedGives(slot.index, (PlannedArm(None, bound),), Citation("", "geometry"), None, True, name.span)

    def say_not_wanted(self, name: Name, wanted: dict[str, Given], line: PartUse) -> None:
        self.problems.add("unknown-given", name.span, f"the part `{line.name}` takes no `{name.name[:40]}`",
                          expected="one of " + ", ".join(wanted), found=name.name[:40],
                          hint=nearest(name.name, wanted))  # fmt: skip

    def publish(self, line: PartUse, body: PartBody, inner: _Space, space: _Space, hidden: set[str]) -> None:
        """Let the user see what the part gives, under its stem if it has one."""
        for name, value in inner.names.items():
            if name in hidden or (body.gives and name not in body.gives):
                continue
            shown = f"{line.stem}.{name}" if line.stem else name
            taken = space.names.get(shown)
            if taken is not None and taken is not value:
                self.problems.add("part-clash", line.span.part(0, 1), f"the part `{line.name}` gives `{name}`, which stands already",
                                  expected="`as: stem`, or another name", found=name,
                                  related=((taken.span, "given here"),))  # fmt: skip
            else:
                space.names[shown] = value
        for name in body.gives:
            if name not in inner.names:
                self.problems.add("unknown-name", body.span.part(0, 1), f"`gives` names `{name[:40]}`, which no line gives",
                                  expected="a name the lines give", found=name[:40])  # fmt: skip


def _key(node: Node) -> str:
    match node:
        case Name(name):
            return name
        case Over(_, _, rows):
            return rows
        case Is(name):
            return name.name
        case _:
            return ""
