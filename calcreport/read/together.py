"""Like members on one calculation: the template's lines once a member, what differs between them in columns.

The `members` of a calculation in, their rows and the template made over them out. Nothing about a rule changes: the
template becomes the block of an `each` over the set of members.
"""

from __future__ import annotations

from collections.abc import Callable, Iterable, Iterator
from dataclasses import replace

from calcreport.core.expression import Name
from calcreport.core.record import made, record, state
from calcreport.core.rows import MOST_ROWS
from calcreport.core.source import Span
from calcreport.read.fields import Fields, as_mapping
from calcreport.read.model import (
    MEMBER,
    Branches,
    Each,
    Given,
    GivenRows,
    GivenValue,
    Line,
    Template,
    Text,
    ValueOrigin,
)
from calcreport.read.nodes import Mapping, Scalar, Told
from calcreport.read.roles import RoleReader
from calcreport.read.single_values import FILE
from calcreport.read.values import ValueReader

#: the key under which a member has its mark
MARK = "mark"


@record
class Shared:
    """What like members have of their own."""

    marks: tuple[str, ...]
    #: names of the values that stand in columns, in the template's order
    names: tuple[str, ...]
    #: the mappings of the members with their marks taken out
    rows: tuple[Mapping, ...]
    #: materials each member names for itself, by role
    roles: tuple[str, ...]
    span: Span


@state
class Gatherings:
    """Templates made over members; calculations that share one have it once."""

    _made: dict[tuple[int, tuple[str, ...], tuple[str, ...]], tuple[Template, Template]] = made(factory=dict)

    def template(self, template: Template, shared: Shared, table: tuple[Name, ...]) -> Template:
        """Return a template whose lines stand once a member; `table` names what their table shows."""
        key = id(template), shared.names, tuple(name.name for name in table)
        found = self._made.get(key)
        if found is None:
            # the template is kept beside what was made of it, so that nothing else takes its identity
            found = self._made[key] = template, _over_members(template, shared, table)
        return found[1]


def read_members(
    fields: Fields, givens: tuple[Given, ...], roles: tuple[str, ...], keep: Callable[[Scalar], bool]
) -> Shared | None:
    """Read the `members` of a calculation; `keep` holds their marks against the others. None without any."""
    items = fields.items("members")
    if not items:
        return None
    problems = fields.problems
    node = fields.node_of("members")
    assert node is not None
    if len(items) > MOST_ROWS:
        problems.add("row-count", node.span.part(0, 1), f"{len(items)} members share one calculation",
                     expected=f"{MOST_ROWS:,} at most", found=f"{len(items)}",
                     hint="part them with `where`, each part on a calculation of its own")  # fmt: skip
        return None
    known = {given.name: given for given in givens}
    marks: list[str] = []
    rows: list[Mapping] = []
    told: dict[str, Span] = {}
    for item in items:
        mapping = as_mapping(item, "a member", problems)
        if mapping is None:
            continue
        entry = Fields(mapping, (MARK, *known, *roles), "a member", problems)
        mark = entry.scalar(MARK, required=True)
        kept = mark is not None and keep(mark)
        told |= {key.text: key.span for key, _ in mapping.entries if key.text != MARK}
        # a name that was misspelled is told, and not missing besides
        meant = [(Scalar(name, mapping.span, False), Told(mapping.span)) for name in entry.mistaken if name in known]
        told |= {key.text: key.span for key, _ in meant}
        if mark is not None and kept:
            marks.append(mark.text)
            own = (one for one in mapping.entries if one[0].text in known or one[0].text in roles)
            rows.append(Mapping((*own, *meant), mapping.span))
    for name in told:
        if name in known and known[name].kind == "pairs":
            problems.add("wrong-shape", told[name], f"`{name}` has a value for pairs of rows",
                         expected="the same for all members, under `given`", found="one a member",
                         hint="give these members calculations of their own")  # fmt: skip
    own_roles = tuple(role for role in roles if role in told)
    names = tuple(g.name for g in givens if (g.name in told and g.kind != "pairs") or g.material in own_roles)
    return Shared(tuple(marks), names, tuple(rows), own_roles, node.span)


def read_rows(
    shared: Shared,
    template: Template,
    reader: ValueReader,
    materials: RoleReader,
) -> GivenRows:
    """Return the rows of the set of members, typed as the template declares them."""
    columns = _columns(template, shared)
    cells: list[tuple[GivenValue | GivenRows, ...]] = []
    for mark, row in zip(shared.marks, shared.rows, strict=True):
        own = Mapping(tuple(entry for entry in row.entries if entry[0].text not in shared.roles), row.span)
        roles = Mapping(tuple(entry for entry in row.entries if entry[0].text in shared.roles), row.span)
        fields = Fields(roles, shared.roles, "a member", reader.problems)
        named = materials.named(fields, shared.roles, template.body.given)
        member = replace(reader, materials={**reader.materials, **named}, home=row.span)
        found = member.read(columns, own, mark)
        cells.append(tuple(value for value in found if isinstance(value, GivenValue | GivenRows)))
    origin = _origin([cell.origin for row in cells for cell in row if cell.origin.kind == "schedule"])
    given = next(given for given in _given(template, shared) if given.name == MEMBER)
    return GivenRows(given, shared.marks, tuple(cells), origin, shared.span)


def _origin(origins: list[ValueOrigin]) -> ValueOrigin:
    """Return where the rows of members stand: 'schedule rows 2 to 13', or the project file."""
    if not origins or origins[0] == origins[-1]:
        return origins[0] if origins else FILE
    words = origins[0].words.replace("row ", "rows ", 1)
    return ValueOrigin("schedule", f"{words} to {origins[-1].words.rpartition(' ')[2]}")


def _columns(template: Template, shared: Shared) -> tuple[Given, ...]:
    return tuple(given for given in template.body.given if given.name in shared.names)


def _given(template: Template, shared: Shared) -> tuple[Given, ...]:
    """Return what is given in common, then the set of members with what each has for itself."""
    common = tuple(given for given in template.body.given if given.name not in shared.names)
    member = Given(MEMBER, "rows", None, "like members, a row each", None, None, "", "", None,
                   _columns(template, shared), (), 1, MOST_ROWS, (), (), shared.span)  # fmt: skip
    return (*common, member)


def _over_members(template: Template, shared: Shared, table: tuple[Name, ...]) -> Template:
    shown = table or tuple(_results(template.body.lines, {given.name for given in template.body.given}))
    each = Each(Name(MEMBER, shared.span), template.body.lines, shown, "", shared.span)
    return replace(
        template, body=replace(template.body, given=_given(template, shared), lines=(each,), gives=(), least=None)
    )


def _results(lines: Iterable[Line], given: set[str]) -> Iterator[Name]:
    """Return the symbols of the result lines that are not given: what a table of like members shows."""
    for line in lines:
        match line:
            case Text("use", pieces):
                for piece in pieces:
                    if isinstance(piece, Name) and piece.name not in given:
                        given = given | {piece.name}
                        yield piece
            case Branches(arms):
                for arm in arms:
                    yield from _results(arm.lines, given)
            case _:
                pass
