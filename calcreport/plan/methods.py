"""Methods of a template: inputs bound, outputs given slots and sets; a value found by another method, spelled out.

`Method` and `Twin` lines in, planned lines out; what the methods take and give is declared in `core.methods`.
"""

from __future__ import annotations

from dataclasses import replace

from calcreport.core.expression import Expression, Name, Number, literal
from calcreport.core.grammar import read_condition, read_formula
from calcreport.core.inputs import InputKind
from calcreport.core.methods import AGAIN, APART, METHODS, MethodKind, OutputKind, outputs_of, rests_on
from calcreport.core.problems import Problems, listed
from calcreport.core.source import Citation, Source, Span
from calcreport.core.units import ONE
from calcreport.plan.checks import CheckNames
from calcreport.plan.handed import Binder, Inputs
from calcreport.plan.model import (
    BoundInput,
    PlannedArm,
    PlannedCheck,
    PlannedGives,
    PlannedLine,
    PlannedMethod,
    PlannedPart,
    Slot,
    Symbol,
)
from calcreport.plan.names import Names
from calcreport.plan.space import Context, Maker, Space
from calcreport.read.model import Method, Output, Twin

#: two values further apart than this are no twins
WIDEST = 0.1


def _with_stem(line: Method, output: Output) -> str:
    return f"{line.stem}.{output.name.name}" if line.stem else output.name.name


def plan_method(line: Method, names: Names, maker: Maker, space: Space, at: Context) -> PlannedLine | None:
    """Bind a method; what it does not take or give, and what is missing, is a problem."""
    kind = _kind_of(line.method, names.problems)
    if kind is None:
        space.told.update(line.names())
        return None
    inputs = _bind(line.method, kind, line.inputs, names, space, at)
    _hold_sets(inputs, line.inputs, kind, names, at)
    handed = {given.name: given.rows for given in inputs if kind.takes[given.name].shape == "set"}
    sets: dict[str, int] = {}
    for output in line.gives:
        inside = kind.sets.get(output.output.name)
        if inside is not None:
            outer = (*at.open, *(handed.get(name, -1) for name in inside))
            sets[output.output.name] = _make_set(line, output, maker, space, outer)
    outputs: list[tuple[int, str]] = []
    for output in line.gives:
        name, problems = output.output, names.problems
        over = kind.gives[name.name].over if name.name in kind.gives else ()
        owner = next((owner for owner in over if owner in kind.sets and owner not in sets), "")
        if name.name in kind.sets:
            continue
        if name.name not in outputs_of(line.method.name):
            problems.add("unknown-name", name.span, f"the method `{line.method.name}` gives no `{name.name[:40]}`",
                         expected=listed(outputs_of(line.method.name)), found=name.name[:40],
                         hint=problems.near(name.name, outputs_of(line.method.name)))  # fmt: skip
        elif owner:
            problems.add("unknown-name", name.span, f"`{name.name}` is a column of `{owner}`, which is not taken",
                         expected=f"a name of ours for `{owner}` too", found="the column alone")  # fmt: skip
        elif output.symbol is not None:
            around = (*at.open, *({**handed, **sets}.get(one, -1) for one in over))
            outputs.append((_make_slot(line, output, output.symbol, around, maker, space), name.name))
            continue
        space.told.add(_with_stem(line, output))
    table = None if line.table is None else _table(line, line.table, outputs, names, space)
    made = tuple((number, name) for name, number in sets.items())
    return PlannedMethod(line.method.name, inputs, tuple(outputs), made, line.cite, line.span, table)


def _table(
    line: Method, table: tuple[Name, ...], outputs: list[tuple[int, str]], names: Names, space: Space
) -> tuple[int, ...]:
    """Return the slots of the outputs that are printed."""
    ours = {slot for slot, _ in outputs}
    found: list[int] = []
    for name in table:
        known = space.names.get(name.name)
        if isinstance(known, Slot) and known.index in ours:
            found.append(known.index)
        elif not space.is_told(name.name):
            given = [one for one in line.names() if isinstance(space.names.get(one), Slot)]
            names.problems.add("unknown-name", name.span, f"this method gives no `{name.name[:40]}`",
                               expected=listed(given), found=name.name[:40],
                               hint=names.problems.near(name.name, given))  # fmt: skip
    return tuple(found)


def _hold_sets(inputs: tuple[BoundInput, ...], handed: Inputs, kind: MethodKind, names: Names, at: Context) -> None:
    """Hold the sets handed over: each once, and none of whose rows one is open here already."""
    taken: set[int] = set()
    spans = {name.name: (formula.span, formula.span.text) for name, formula in handed if formula is not None}
    for given in inputs:
        if kind.takes[given.name].shape != "set" or given.rows < 0:
            continue
        span, text = spans[given.name]
        names.hold_open(names.sets[given.rows].outer, text.strip(), span, at)
        if given.rows in taken or given.rows in at.open:
            why = "a row of it is open here" if given.rows in at.open else "it is handed over twice"
            names.problems.add("row-leak", span, f"the method cannot take all rows of `{text.strip()[:40]}`: {why}",
                               expected="a set of its own for each input", found=text.strip()[:40])  # fmt: skip
        taken.add(given.rows)


def _make_set(line: Method, output: Output, maker: Maker, space: Space, outer: tuple[int, ...]) -> int:
    return maker.row_set(_with_stem(line, output), space, outer, (), output.name.span).index


def _make_slot(line: Method, output: Output, symbol: Symbol, sets: tuple[int, ...], maker: Maker, space: Space) -> int:
    named = replace(symbol, name=_with_stem(line, output), shows=symbol.shows or symbol.name)
    return maker.slot(named, space, sets, output.name.span).index


def _kind_of(name: Name, problems: Problems) -> MethodKind | None:
    kind = METHODS.get(name.name)
    if kind is None:
        problems.add("not-a-word", name.span, f"there is no method `{name.name[:40]}`", expected=listed(METHODS),
                     found=name.name[:40], hint=problems.near(name.name, METHODS))  # fmt: skip
    return kind


def _bind(
    method: Name, kind: MethodKind, handed: Inputs, names: Names, space: Space, at: Context
) -> tuple[BoundInput, ...]:
    """Bind all inputs, and hold counts and inputs that go with a word."""
    words = {name.name: formula.name for name, formula in handed if isinstance(formula, Name)}
    known = {name for name, wanted in kind.takes.items() if words.get(name) in wanted.words}

    def is_idle(wanted: InputKind) -> bool:
        return wanted.where is not None and wanted.where[0] in known and words[wanted.where[0]] != wanted.where[1]

    taken = {name.name for name, _ in handed}

    def is_needed(name: str, wanted: InputKind) -> bool:
        if not set(rests_on(kind.takes, name)) <= taken:
            return False
        return wanted.where is None or words.get(wanted.where[0]) == wanted.where[1]

    needed = tuple(name for name, wanted in kind.takes.items() if is_needed(name, wanted))
    for name, formula in handed:
        wanted = kind.takes.get(name.name)
        if wanted is None or formula is None:
            continue
        if wanted.where is not None and is_idle(wanted):
            other, word = wanted.where
            names.problems.add("unknown-key", name.span, f"`{name.name}` has no use here",
                               expected=f"`{name.name}` with `{other}: {word}` only",
                               found=f"`{other}: {words[other]}`")  # fmt: skip
        without = next((rows for rows in rests_on(kind.takes, name.name) if rows not in taken), "")
        if without:
            names.problems.add("unknown-key", name.span, f"`{name.name}` has no use here",
                               expected=f"`{name.name}` with `{without}` only",
                               found=f"no `{without}`")  # fmt: skip
        value = literal(formula)
        if wanted.count is not None and (
            value is None or value.denominator != 1 or not wanted.count[0] <= value <= wanted.count[1]
        ):
            names.problems.add("not-a-number", formula.span, f"`{name.name}` is a whole number",
                               expected=f"a whole number from {wanted.count[0]} to {wanted.count[1]}",
                               found=formula.span.text.strip()[:40])  # fmt: skip
    return _MethodBinder("method", handed, names, space, at).bind_all(method, kind.takes, needed)


class _MethodBinder(Binder):
    """Binds the inputs of a method: every number is a formula; a word is one of its own, or by row one of ours."""

    def number(self, name: Name, formula: Expression, wanted: InputKind) -> BoundInput:
        bound = self.names.expression(formula, self.space, self.rows_open(wanted))
        return BoundInput(name.name, formula=bound, span=formula.span)

    def word(self, name: Name, formula: Expression, wanted: InputKind) -> BoundInput:
        if isinstance(formula, Name) and formula.name in wanted.words:
            return BoundInput(name.name, word=formula.name)
        if wanted.shape == "row word":
            return super().word(name, formula, wanted)
        found = formula.span.text.strip()[:40]
        self.problems.add("not-a-word", formula.span, f"the method takes one of its words for `{name.name}`",
                          expected=listed(wanted.words), found=found,
                          hint=self.problems.near(found, wanted.words))  # fmt: skip
        return BoundInput(name.name)


# ---------------------------------------------------------------- by another method


def plan_twin(
    line: Twin, names: Names, maker: Maker, space: Space, at: Context, checks: CheckNames
) -> PlannedLine | None:
    """Spell out a value found once more: the method, the difference, and a check that it stays within the bound."""
    kind, problems = _kind_of(line.method, names.problems), names.problems
    space.told.update(line.names())
    names.look_name(line.name, space, at)
    first = space.names.get(line.name.name)
    places = _places(line, problems)
    if not isinstance(first, Slot) or kind is None:
        return None
    inputs = _bind(line.method, kind, line.inputs, names, space, at)
    output = _output(line, kind, first, problems)
    if not output or places is None:
        return None
    name, symbol = line.name.name, first.symbol
    space.told.difference_update(line.names())
    shown = symbol.shows or symbol.name
    second = replace(symbol, name=f"{name}.{AGAIN}", shows=f"{shown},2" if "_" in shown else f"{shown}_2",
                     says=f"{symbol.says}, by another method")  # fmt: skip
    apart = Symbol(f"{name}.{APART}", "Δ", "difference of the two", "quantity", ONE, (), places, fixed=True)
    found = maker.slot(second, space, at.open, line.span)
    method = PlannedMethod(line.method.name, inputs, ((found.index, output),), (), line.cite, line.span)
    formula = read_formula(*_spelled(f"abs({name}.{AGAIN} - {name})/abs({name})"), problems)
    holds = read_condition(*_spelled(f"{name}.{APART} <= {line.within.span.text.strip()}"), problems)
    assert formula is not None and holds is not None
    arm = PlannedArm(None, names.expression(formula, space, at))
    gap = maker.slot(apart, space, at.open, line.span)
    gives = PlannedGives(gap.index, (arm,), Citation("", ""), None, False, line.span)
    title = f"{space.stem}{symbol.says} by another method"
    checks.take(title, line.span)
    check = PlannedCheck(title, names.condition(holds, space, at), "", line.cite, line.span, bare=True)
    return PlannedPart("", "", (method, gives, check), line.span)


def _spelled(text: str) -> tuple[str, Span]:
    """Return a formula of ours with a place of its own: no file holds it."""
    return text, Span(Source("by another method", text), 0, len(text))


def _places(line: Twin, problems: Problems) -> int | None:
    """Return the decimals the difference is printed with: those of its bound, three at least."""
    bound = line.within
    if isinstance(bound, Number) and bound.unit is None and 0 < bound.value <= WIDEST:
        return max(3, len(bound.text.partition(".")[2]))
    problems.add("not-a-number", bound.span, "`within` is the relative difference that two methods may have",
                 expected=f"a number above 0 and up to {WIDEST}, such as 0.005",
                 found=bound.span.text.strip()[:40])  # fmt: skip
    return None


def _output(line: Twin, kind: MethodKind, first: Slot, problems: Problems) -> str:
    """Return the output that is the twin: the one named, or the only one of that dimension."""
    unit = first.symbol.unit
    if unit is None:
        problems.add("unit-mismatch", line.name.span, f"`{line.name.name}` is a word, which no method gives",
                     expected="a quantity", found="a word")  # fmt: skip
        return ""
    alike = [name for name, given in kind.gives.items() if given == OutputKind(unit.dimension)]
    if line.output is not None:
        if line.output.name in alike:
            return line.output.name
        problems.add("unknown-name", line.output.span,
                     f"the method `{line.method.name}` gives no `{line.output.name[:40]}` to hold `{line.name.name}` "
                     "against", expected=listed(alike) if alike else "another method: none of its outputs is alike",
                     found=line.output.name[:40])  # fmt: skip
        return ""
    if len(alike) == 1:
        return alike[0]
    problems.add("missing-key", line.method.span, f"which output is `{line.name.name}` held against?",
                 expected=f"`output:` with {listed(alike)}" if alike else "a method with such an output",
                 found=f"{len(alike)} outputs of that dimension")  # fmt: skip
    return ""
