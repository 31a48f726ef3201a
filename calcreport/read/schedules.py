"""Member schedules: every row of a table becomes a calculation, as if it had been written out.

Entries of `schedules` in, mappings of calculations out, whose texts have their places in the table. Which values a
template takes, and how marks are spelled, is held where all calculations are read.
"""

from __future__ import annotations

from collections.abc import Iterator

from calcreport.core.problems import Problems
from calcreport.core.record import record, state
from calcreport.core.units import NONE
from calcreport.read.columns import Table, Use, is_use, read_use, take, text_use
from calcreport.read.editions import Editions
from calcreport.read.fields import Fields
from calcreport.read.filled import Filled, fill, prepare, prepare_use, schedule_columns, uses
from calcreport.read.gathering import MOST_CALCULATIONS, Gathered
from calcreport.read.library import Library
from calcreport.read.model import SYSTEMS, Given, System, Template
from calcreport.read.nodes import Mapping, Node, Scalar, Sequence, Told
from calcreport.read.roles import roles_of
from calcreport.read.sheets import SheetRow
from calcreport.read.tables import TABLE_KEYS, Choice, Tables

KEYS = (
    *TABLE_KEYS,
    "template",
    "mark",
    "title",
    "member",
    "units",
    "columns",
    "given",
    "choose",
    "pinned",
    "together",
    "table",
)


@record
class _Plan:
    """What one schedule makes of a row."""

    table: Table
    mark: Use
    title: Use | Scalar
    #: keys of a calculation with what stands under them
    entries: tuple[tuple[Scalar, Node | Use | Filled], ...]
    choice: Choice


@state
class ScheduleReader:
    """Reads the schedules of one project."""

    library: Library
    system: System
    editions: Editions
    gathered: Gathered
    tables: Tables
    problems: Problems

    def read(self) -> None:
        """Add a calculation for every row, after those written out, and the tables to the files read."""
        calculations = self.gathered.calculations
        for node in self.gathered.schedules:
            for calculation in self.schedule(node):
                if len(calculations) >= MOST_CALCULATIONS:
                    self.problems.add("file-too-large", node.span.part(0, 1), "the project holds too many calculations",
                                      expected=f"{MOST_CALCULATIONS:,} at most", found="more")  # fmt: skip
                    return
                calculations.append(calculation)

    def schedule(self, node: Mapping) -> Iterator[Mapping]:
        """Return the calculations of one schedule."""
        template = self.template(node)
        roles = roles_of(template.body.given) if template else _others(node)
        fields = Fields(node, (*KEYS, *roles), "a schedule", self.problems)
        fields.scalar("template", required=True)
        table = self.tables.table(fields, self.label(fields))
        plan = self.plan(fields, table, template, roles) if table is not None else None
        # a column that could not be found takes its value away and no row; not so where rows are chosen by it
        if table is None or plan is None or not _is_whole(plan.choice, fields):
            return
        taken = uses((plan.mark, plan.title, *(value for _, value in plan.entries)))
        self.tables.hold_shown(fields, plan.choice, taken)
        if template is not None and not self.hold_units(node, template, plan):
            return
        met = self.problems.met
        rows = list(self.tables.rows(plan.choice))
        if fields.has("together") and rows:
            shared = self.together(fields, rows, plan)
            yield from (shared,) if shared is not None else ()
        else:
            found = (self.calculation(node, row, plan) for row in rows)
            yield from (calculation for calculation in found if calculation is not None)
        if not rows and self.problems.met == met:
            self.tables.say_no_rows(fields, table)

    def template(self, node: Mapping) -> Template | None:
        own, name = node.get("units"), node.get("template")
        system = next((s for s in SYSTEMS if isinstance(own, Scalar) and own.text == s), self.system)
        if not isinstance(name, Scalar) or not name.text:
            return None
        return self.library.template(name.text, system, self.editions, name.span)

    def label(self, fields: Fields) -> str:
        """Return what parts a table from the others of the project in print, '' where it is the only one."""
        file, sheet = fields.text("file"), fields.text("sheet")
        others = {(_text(node.get("file")), _text(node.get("sheet"))) for node in self.gathered.schedules}
        if len(others) == 1:
            return ""
        return f"{file} {sheet}".strip() if len({name for name, _ in others}) < len(others) else file

    def plan(self, fields: Fields, table: Table, template: Template | None, roles: tuple[str, ...]) -> _Plan | None:
        mark, title = fields.scalar("mark", required=True), fields.scalar("title")
        marked = text_use(mark, table, self.problems) if mark is not None else None
        if mark is None or marked is None:
            return None
        titled: Use | Scalar | None = Scalar(template.title if template else "", mark.span, True)
        if title is not None:
            titled = text_use(title, table, self.problems) if "{" in title.text else title
        entries: list[tuple[Scalar, Node | Use | Filled]] = []
        for key, value in fields.node.entries:
            if key.text in ("template", "member", "units", "choose", "pinned", "table", *roles):
                entries.append((key, prepare(value, table, self.problems)))
        entries.append((Scalar("given", fields.span, False), self.given(fields, table)))
        choice = self.tables.choice(fields, table)
        return _Plan(table, marked, titled, tuple(entries), choice) if titled is not None else None

    def given(self, fields: Fields, table: Table) -> Filled:
        """Return the given values: those common to all rows, and those of columns."""
        common, columns = fields.mapping("given"), fields.mapping("columns")
        found = [(key, prepare(value, table, self.problems)) for key, value in (common.entries if common else ())]
        stood = {key.text: key.span for key, _ in found}
        for key, value in columns.entries if columns else ():
            if key.text in stood:
                self.problems.add("given-twice", key.span, f"`{key.text[:40]}` is given twice", expected="one place",
                                  found="a column and a common value",
                                  related=((stood[key.text], "the common value"),))  # fmt: skip
            elif isinstance(value, Scalar) or is_use(value):
                found.append((key, prepare_use(value, table, self.problems)))
            else:
                if not isinstance(value, Told):
                    self.problems.add("wrong-shape", value.span.part(0, 1), f"`{key.text[:40]}` is not given a column",
                                      expected="a heading, or {column: …, unit: …, if empty: …}",
                                      found="a list" if isinstance(value, Sequence) else "a mapping",
                                      hint="rows of a set stand under `given`")  # fmt: skip
                found.append((key, Told(value.span)))
        span = (common or columns or fields.node).span
        node = Mapping(tuple((key, Told(key.span)) for key, _ in found), span)
        return Filled(node, tuple(inner for _, inner in found))

    def hold_units(self, node: Mapping, template: Template, plan: _Plan) -> bool:
        """Tell whether every column of bare numbers says their unit where one is needed; told once, at the heading."""
        good = True
        for path, said in schedule_columns(node).items():
            given = _declared(path, template.body.given)
            named = given is not None and (isinstance(said, Scalar) or is_use(said))
            use = read_use(said, plan.table, self.problems) if named else None
            if given is not None and use is not None:
                before = self.problems.met
                self.tables.hold_unit(given, use, plan.choice)
                good = good and self.problems.met == before
        return good

    def together(self, fields: Fields, rows: list[SheetRow], plan: _Plan) -> Mapping | None:
        """Return the one calculation of all rows: what is taken from columns a member, the rest in common."""
        mark = fields.scalar("together", required=True)
        if not isinstance(plan.title, Scalar):
            self.problems.add("wrong-shape", plan.title.span, "the title is taken from a column",
                              expected="one title for all, as they share one calculation", found="a column",
                              hint="give each row a calculation of its own, or write the title out")  # fmt: skip
        if mark is None or not isinstance(plan.title, Scalar):
            return None
        common: list[tuple[Scalar, Node]] = [(Scalar("mark", mark.span, False), mark)]
        common.append((Scalar("title", mark.span, False), plan.title))
        own: list[tuple[Scalar, Use | Filled]] = []
        for key, value in plan.entries:
            if key.text == "given" and isinstance(value, Filled) and isinstance(value.node, Mapping):
                pairs = [(name, one) for (name, _), one in zip(value.node.entries, value.inner, strict=True)]
                own += [(name, one) for name, one in pairs if isinstance(one, Use | Filled)]
                rest = tuple((name, one) for name, one in pairs if not isinstance(one, Use | Filled))
                common.append((key, Mapping(rest, value.node.span)))
            elif isinstance(value, Use | Filled):
                own.append((key, value))
            else:
                common.append((key, value))
        members = [self.member(row, own, plan) for row in rows]
        found = Sequence(tuple(member for member in members if member is not None), fields.span)
        return Mapping((*common, (Scalar("members", mark.span, False), found)), fields.span)

    def member(self, row: SheetRow, own: list[tuple[Scalar, Use | Filled]], plan: _Plan) -> Mapping | None:
        mark = take(plan.mark, row, plan.table, self.problems)
        if not isinstance(mark, Scalar):
            return None
        entries: list[tuple[Scalar, Node]] = [(Scalar("mark", mark.span, False), mark)]
        for key, value in own:
            entries.append((key, fill(value, row, plan.table, self.problems) or Told(key.span)))
        return Mapping(tuple(entries), mark.span)

    def calculation(self, node: Mapping, row: SheetRow, plan: _Plan) -> Mapping | None:
        """Return the calculation of a row, None for one without a mark."""
        mark = take(plan.mark, row, plan.table, self.problems)
        if not isinstance(mark, Scalar):
            return None
        title = take(plan.title, row, plan.table, self.problems) if isinstance(plan.title, Use) else plan.title
        entries: list[tuple[Scalar, Node]] = [
            (Scalar("mark", node.span, False), mark),
            (Scalar("title", node.span, False), title or Told(node.span)),
        ]
        for key, value in plan.entries:
            entries.append((key, fill(value, row, plan.table, self.problems) or Told(key.span)))
        return Mapping(tuple(entries), node.span)


def _declared(path: str, givens: tuple[Given, ...]) -> Given | None:
    """Return the declaration of a quantity with a unit by its name, that of a set's column by its last."""
    name, *rest = path.split(".")
    given = next((one for one in givens if one.name == name), None)
    if given is not None and given.kind == "rows" and rest:
        given = next((one for one in given.columns if one.name == rest[-1]), None)
    unit = given.symbol.unit if given is not None and given.symbol is not None else None
    return given if unit is not None and unit.dimension != NONE else None


def _text(node: Node | None) -> str:
    return node.text if isinstance(node, Scalar) else ""


def _others(node: Mapping) -> tuple[str, ...]:
    """Return the keys that may be material roles, where the template that would tell is not there."""
    return tuple(key.text for key, _ in node.entries if key.text not in KEYS)


def _is_whole(choice: Choice, fields: Fields) -> bool:
    """Tell whether all that chooses rows could be read."""
    where = fields.node_of("where")
    chosen = where is None or (isinstance(where, Mapping) and len(choice.where) == len(where.entries))
    return chosen and bool(choice.hidden or not fields.has("hidden"))
