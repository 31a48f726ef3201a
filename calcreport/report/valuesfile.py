"""The values file: every value and check with its line, printed form, citation and origin; and a plain text of it.

Worked calculations with forms and scripts in, one JSON-ready object or lines of text out.
"""

from __future__ import annotations

import json
from typing import Any

from calcreport.calculate.model import Key, Selection, Worked, WorkedCheck, WorkedGives, WorkedProject
from calcreport.core.expression import names
from calcreport.core.methods import METHODS
from calcreport.core.units import ONE
from calcreport.core.version import PROGRAM
from calcreport.report.below import gives_below
from calcreport.report.digits import number_text
from calcreport.report.forms import CalculationForms, is_size, proof_unit, side_unit
from calcreport.report.governing import governing
from calcreport.report.items import SayLine, SayOutput, SayOutputs, SayProof, SayTable, SayUnseen, Script

FORMAT = 1


def values_file(
    project: WorkedProject, forms: dict[str, CalculationForms], scripts: dict[str, Script], sheets: dict[str, int]
) -> dict[str, Any]:
    """Return the values file as an object."""
    calculations: dict[str, Any] = {}
    for worked in project.calculations:
        mark = worked.calculation.mark
        calculations[mark] = {
            "template": worked.calculation.template.name,
            "title": worked.calculation.title,
            "sheets": sheets.get(mark, 0),
            "fingerprint": worked.fingerprint,
            "verdict": worked.verdict,
            "stopped": worked.stop.told if worked.stop else None,
            "lines": _lines(scripts[mark], forms[mark]),
            "closures": _closures(scripts[mark], forms[mark]),
            "checks": [_check(check, scripts[mark], forms[mark]) for check in worked.checks],
        }
        if worked.selection is not None:
            calculations[mark]["selection"] = _selection(worked.selection)
    header = {
        "title": project.project.title,
        "number": project.project.number,
        "status": project.project.status,
        "date": project.project.date,
        "fingerprint": project.fingerprint,
        "file": project.project.files[0].name,
    }
    return {"program": PROGRAM, "format": FORMAT, "project": header, "calculations": calculations}


def values_bytes(found: dict[str, Any]) -> bytes:
    """Return the values file as it is written: a calculation's lines and checks each on a line of their own."""
    facts = (f"{_json(key)}: {_json(value)}" for key, value in found.items() if key != "calculations")
    parts = (f"{_json(mark)}: {_calculation_text(one)}" for mark, one in found["calculations"].items())
    return ("{" + ",\n".join(facts) + ',\n"calculations": {\n' + ",\n".join(parts) + "\n}}\n").encode()


def _calculation_text(one: dict[str, Any]) -> str:
    pieces = []
    for key, value in one.items():
        rows = isinstance(value, list) and value
        text = "[\n  " + ",\n  ".join(map(_json, value)) + "]" if rows else _json(value)
        pieces.append(f" {_json(key)}: {text}")
    return "{\n" + ",\n".join(pieces) + "}"


def _json(value: object) -> str:
    return json.dumps(value, ensure_ascii=False)


def _lines(script: Script, forms: CalculationForms) -> list[dict[str, Any]]:
    found: list[dict[str, Any]] = []
    values = script.worked.values
    for (slot, key), _ in sorted(values.given.items(), key=lambda item: (script.line_of.get(item[0], 0), item[0])):
        found.append(_value(slot, key, script, forms))
    for item in script.items:
        match item:
            case SayLine(_, worked):
                found.append(_gives(worked, script, forms))
            case SayOutput(_, _, slot, key):
                found.append(_output(slot, key, script, forms))
            case SayOutputs(_, _, worked):
                places = worked.places(values)
                found += [_output(slot, key, script, forms) for slot, key in places if slot in item.columns]
            case SayTable(worked=each) | SayUnseen(each):
                rows = [gives for row in each.rows for gives in gives_below(row)]
                told = {(line["gives"], tuple(line.get("rows", ()))) for line in found}
                for worked in rows:
                    entry = _gives(worked, script, forms)
                    if (entry["gives"], tuple(entry.get("rows", ()))) not in told:
                        found.append(entry)
    return found


def _output(slot: int, key: Key, script: Script, forms: CalculationForms) -> dict[str, Any]:
    """Return a value that a method gave."""
    line = script.worked.values.by_method[slot, key]
    entry = _value(slot, key, script, forms)
    number = next(s.of for s in script.items if isinstance(s, SayOutput | SayOutputs) and s.number == entry["line"])
    return entry | {"method": line.kind, "cite": line.cite.printed, "from": [f"{forms.mark}.{number}"]}


def _closures(script: Script, forms: CalculationForms) -> list[dict[str, Any]]:
    """Return the sums that prove the results of methods."""
    found: list[dict[str, Any]] = []
    system = script.worked.plan.template.system
    for item in script.items:
        if isinstance(item, SayProof):
            unit = proof_unit(item.worked, item.place, system)
            proof = item.worked.result.proofs[item.place]
            found.append({"line": item.number, "method": item.worked.line.kind,
                          "name": METHODS[item.worked.line.kind].proves[item.place].name,
                          "residual": proof.residual / unit.size, "of": proof.of / unit.size, "unit": unit.text,
                          "from": [f"{forms.mark}.{item.of}"]})  # fmt: skip
    return found


def _value(slot: int, key: Key, script: Script, forms: CalculationForms) -> dict[str, Any]:
    symbol = script.worked.plan.slots[slot]
    unit = symbol.symbol.unit or ONE
    value = script.worked.values.get(slot, key)
    entry: dict[str, Any] = {"line": script.line_of.get((slot, key), 0), "gives": symbol.path}
    if symbol.sets:
        entry["rows"] = _row_names(symbol.sets, key, script)
    if isinstance(value, float):
        figure = forms.figure(slot, key)
        power = f" × 10^{figure.exponent}" if figure.exponent else ""
        entry |= {"value": value / unit.size, "unit": unit.text, "shown": number_text(figure) + power}
    else:
        entry |= {"value": value, "unit": None, "shown": value}
    return entry


def _row_names(sets: tuple[int, ...], key: Key, script: Script) -> list[str]:
    values, plan = script.worked.values, script.worked.plan
    rows = dict(zip(sets, key, strict=True))
    found = []
    for index in sets:
        outer = tuple(rows[o] for o in plan.sets[index].outer)
        found.append(values.names[index][outer][rows[index]])
    return found


def _gives(worked: WorkedGives, script: Script, forms: CalculationForms) -> dict[str, Any]:
    entry = _value(worked.line.slot, worked.key, script, forms)
    formula = worked.line.arms[worked.arm].formula
    entry["formula"] = formula.span.text.strip()
    entry["cite"] = worked.line.cite.printed
    rows = dict(worked.open)
    shown: dict[str, str] = {}
    origins: list[str] = []
    for name in names(formula):
        sets = script.worked.values.sets[name.slot] if name.slot >= 0 else ()
        if name.slot < 0 or any(index not in rows for index in sets):
            continue
        key = tuple(rows[index] for index in sets)
        value = _value(name.slot, key, script, forms)
        shown[name.name] = f"{value['shown']} {value['unit'] or ''}".replace(" 1", "").strip()
        origins.append(f"{forms.mark}.{value['line']}")
    entry["shown_inputs"] = shown
    entry["from"] = list(dict.fromkeys(origins))
    return entry


def _selection(selection: Selection) -> dict[str, Any]:
    """Return the candidates worked, counted from 1, each with its verdict and ratio of the governing check."""
    tried: list[dict[str, Any]] = []
    for one in selection.tried:
        candidate, check = selection.candidates[one.place], governing(one.worked)
        pairs = zip(candidate.values, candidate.texts, strict=True)
        tried.append({
            "number": one.place + 1,
            "values": {value.given.name: text for value, text in pairs},
            "verdict": one.worked.verdict,
            "governing": check.line.name if check else None,
            "ratio": check.ratio if check else None,
            "stopped": one.worked.stop.told if one.worked.stop else None,
        })  # fmt: skip
    return {
        "candidates": len(selection.candidates),
        "used": selection.used + 1,
        "first": selection.first + 1 if selection.first >= 0 else None,
        "pinned": selection.pinned,
        "tried": tried,
    }


def _check(check: WorkedCheck, script: Script, forms: CalculationForms) -> dict[str, Any]:
    entry: dict[str, Any] = {"name": check.line.name, "line": script.check_line.get(id(check), 0), "kind": check.kind}
    by = check.by
    if by is not None:
        unit = side_unit(by.test, forms)
        left, right = by.left / unit.size, by.right / unit.size
        if check.kind in ("demand / capacity", "ratio"):
            entry |= {"demand": left, "capacity": right}
        elif check.kind == "required / provided":
            entry |= {"required": right, "provided": left}
        else:
            entry |= {"left": left, "right": right}
        entry["unit"] = unit.text
        if is_size(by.test.left):
            entry["of"] = "size"
    entry |= {"ratio": check.ratio, "verdict": check.verdict, "cite": check.line.cite.printed}
    if check.reason:
        entry["reason"] = check.reason
    if check.open:
        entry["rows"] = [
            script.worked.plan.sets[s].name + " " + script.worked.values.row_names(s)[r] for s, r in check.open
        ]
    return entry


def values_text(project: WorkedProject) -> list[str]:
    """Return values and checks as plain lines, from the worked values alone."""
    lines: list[str] = []
    for worked in project.calculations:
        calculation = worked.calculation
        lines.append(f"{calculation.mark}  {calculation.title}  [{calculation.template.name}]  {worked.verdict}")
        lines += _plain_values(worked)
        for check in worked.checks:
            ratio = f"{check.ratio:.4f}" if check.ratio is not None else ""
            lines.append(f"  check {check.line.name:<34} {ratio:>9} {check.verdict}")
        if worked.stop:
            lines.append(f"  stopped: {worked.stop.told}")
    return lines


def _plain_values(worked: Worked) -> list[str]:
    lines: list[str] = []
    for slot in worked.plan.slots:
        unit = slot.symbol.unit or ONE
        if slot.sets:
            found = [v for v in worked.values.rows[slot.index].values() if isinstance(v, float)]
            if found:
                lines.append(f"  {slot.path:<16} {', '.join(f'{v / unit.size:.6g}' for v in found)} {_unit(unit.text)}")
            continue
        value = worked.values.plain[slot.index]
        if isinstance(value, float):
            lines.append(f"  {slot.path:<16} {value / unit.size:.6g} {_unit(unit.text)}")
        elif value is not None:
            lines.append(f"  {slot.path:<16} {value}")
    return lines


def _unit(text: str) -> str:
    return "" if text == "1" else text
