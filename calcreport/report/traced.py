"""The tree of lines behind one number, as text: each value with its formula, its line and what it came from.

Scripts and forms in, lines of text out.
"""

from __future__ import annotations

from calcreport.calculate.model import GivenPairs, GivenRows, GivenValue, Key, LinkedValue, PlannedMethod, row_cells
from calcreport.core.expression import Name, Node, Over, children
from calcreport.core.methods import METHODS
from calcreport.report.digits import number_text
from calcreport.report.forms import CalculationForms, link_place, linked_values
from calcreport.report.items import Script

#: a tree deeper or longer than this is cut, and says so
DEEPEST, LONGEST = 40, 400


def trace_lines(
    mark: str, slot: int, key: Key, scripts: dict[str, Script], forms: dict[str, CalculationForms]
) -> tuple[str, ...]:
    """Return the tree of one value of a calculation, by its slot and the key of its row."""
    tracer = _Tracer(scripts, forms)
    tracer.value(mark, slot, key, "", "")
    return tuple(tracer.lines[:LONGEST]) + (("…",) if len(tracer.lines) > LONGEST else ())


class _Tracer:
    def __init__(self, scripts: dict[str, Script], forms: dict[str, CalculationForms]) -> None:
        self.scripts, self.forms = scripts, forms
        self.lines: list[str] = []
        self.told: set[tuple[str, int, Key]] = set()
        self._links: dict[str, dict[tuple[int, Key], LinkedValue]] = {}

    def value(self, mark: str, slot: int, key: Key, lead: str, branch: str) -> None:
        """Add a value's line and, below it, what it came from; a value told before is named only."""
        worked = self.scripts[mark].worked
        formula, method = worked.values.worked.get((slot, key)), worked.values.by_method.get((slot, key))
        number = self.scripts[mark].line_of.get((slot, key), 0)
        text = f"{worked.plan.slots[slot].path} = {self.shown(mark, slot, key)}"
        how = f"  = {formula.span.text.strip()}" if formula is not None else f"  {self.origin(mark, slot, key)}"
        how = f"  by the method {method.kind}" if method is not None else how
        place = mark, slot, key
        again = place in self.told and (formula is not None or method is not None)
        self.lines.append(f"{lead}{branch}{mark}.{number}  {text}{'  (above)' if again else how}")
        if again or len(lead) > 3 * DEEPEST:
            return
        self.told.add(place)
        inner = lead + ("   " if branch in ("", "└─ ") else "│  ") if branch else lead
        for last, (other_mark, other, other_key) in self.sources(mark, slot, key):
            self.value(other_mark, other, other_key, inner, "└─ " if last else "├─ ")

    def sources(self, mark: str, slot: int, key: Key) -> list[tuple[bool, tuple[str, int, Key]]]:
        """Return what a value came from, the last one marked."""
        worked = self.scripts[mark].worked
        found: list[tuple[str, int, Key]] = []
        formula, method = worked.values.worked.get((slot, key)), worked.values.by_method.get((slot, key))
        if method is not None:
            self.inputs(method, mark, slot, key, found)
        elif formula is not None:
            rows = dict(zip(worked.values.sets[slot], key, strict=True))
            self.collect(formula, mark, rows, found)
        else:
            link = self.links(mark).get((slot, key))
            if link is not None:
                found.append((link.mark, *link_place(link, self.scripts[link.mark].worked)))
        unique = list(dict.fromkeys(found))
        return [(place == len(unique) - 1, one) for place, one in enumerate(unique)]

    def links(self, mark: str) -> dict[tuple[int, Key], LinkedValue]:
        """Return the values a calculation takes from others."""
        if mark not in self._links:
            self._links[mark] = linked_values(self.scripts[mark].worked)
        return self._links[mark]

    def collect(self, node: Node, mark: str, rows: dict[int, int], found: list[tuple[str, int, Key]]) -> None:
        values = self.scripts[mark].worked.values
        if isinstance(node, Name) and node.slot >= 0:
            found.append((mark, node.slot, tuple(rows[s] for s in values.sets[node.slot])))
        elif isinstance(node, Over):
            outer = tuple(rows[s] for s in values.outer[node.bound])
            for row in range(len(values.names[node.bound].get(outer, ()))):
                self.collect(node.body, mark, {**rows, node.bound: row}, found)
        else:
            for child in children(node):
                self.collect(child, mark, rows, found)

    def inputs(self, method: PlannedMethod, mark: str, slot: int, key: Key, found: list[tuple[str, int, Key]]) -> None:
        """Collect what a method was handed, row by row where it takes a number for every row."""
        values = self.scripts[mark].worked.values
        made = {index for index, _ in method.sets}
        rows = {s: row for s, row in zip(values.sets[slot], key, strict=True) if s not in made}
        sets = {given.name: given.rows for given in method.inputs}
        for given in method.inputs:
            opened = [rows]
            for owner in (sets[name] for name in METHODS[method.kind].takes[given.name].rows):
                opened = [
                    {**around, owner: row}
                    for around in opened
                    for row in range(len(values.names[owner].get(tuple(around[s] for s in values.outer[owner]), ())))
                ]
            for around in opened:
                if given.formula is not None:
                    self.collect(given.formula, mark, around, found)
                elif given.slot >= 0:
                    found.append((mark, given.slot, tuple(around[s] for s in values.sets[given.slot])))

    def shown(self, mark: str, slot: int, key: Key) -> str:
        value = self.scripts[mark].worked.values.get(slot, key)
        if not isinstance(value, float):
            return str(value)
        figure = self.forms[mark].figure(slot, key)
        unit = self.scripts[mark].worked.plan.slots[slot].symbol.unit
        power = f"e{figure.exponent}" if figure.exponent else ""
        text = number_text(figure).replace("−", "-") + power
        return text if unit is None or unit.text == "1" else f"{text} {unit.text}"

    def origin(self, mark: str, slot: int, key: Key) -> str:
        link = self.links(mark).get((slot, key))
        if link is not None:
            return f"[line {link.mark}.{link.path}]"
        given = self.given(mark, slot, key)
        return f"[{given.origin.kind} {given.origin.words}]".replace(" ]", "]") if given is not None else ""

    def given(self, mark: str, slot: int, key: Key) -> GivenValue | None:
        """Return what the project gave for a slot, or for the callout it is read off."""
        worked = self.scripts[mark].worked
        for given, planned in zip(worked.calculation.given, worked.plan.givens, strict=True):
            match given:
                case GivenValue() if slot in (planned.slot, *planned.outputs):
                    return given
                case GivenRows():
                    for column, place, cell in row_cells(planned, given):
                        if place == key and slot in (column.slot, *column.outputs):
                            return cell
                case GivenPairs() if slot == planned.slot:
                    names = [worked.values.names[index].get((), ()) for index in planned.over]
                    row = tuple(known[place] for known, place in zip(names, key, strict=True))
                    return dict(given.cells).get(row)
                case _:
                    pass
        return None
