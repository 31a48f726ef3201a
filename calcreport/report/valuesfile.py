"""The values file: every value and check with its line, printed form, citation and origin; and a plain text of it.

Worked calculations with forms and scripts in, one JSON-ready object or lines of text out. The lines of a calculation
are those of its account, in page order: all that another issue is compared by.
"""

from __future__ import annotations

import hashlib
import json
from typing import Any

from calcreport.calculate.model import Selection, Tried, Worked, WorkedCheck, WorkedProject
from calcreport.core.methods import METHODS
from calcreport.core.units import ONE
from calcreport.core.version import PROGRAM
from calcreport.history.model import Kind, Revisions
from calcreport.report.forms import CalculationForms, proof_unit
from calcreport.report.governing import governing
from calcreport.report.items import SayHeading, SayProof, Script
from calcreport.report.summary import dispositions
from calcreport.report.value_lines import Finished, LineWriter

FORMAT = 2


def values_file(finished: Finished) -> dict[str, Any]:
    """Return the values file as an object, before its sheets are counted and its changes dated."""
    project = finished.project
    issue = project.project.last_issue
    calculations: dict[str, Any] = {}
    for worked in project.calculations:
        mark = worked.calculation.mark
        writer = LineWriter(worked, finished)
        lines = finished.lines[mark]
        chief = governing(worked)
        calculations[mark] = {
            "template": worked.calculation.template.name,
            "title": worked.calculation.title,
            "sheets": 0,
            "fingerprint": worked.fingerprint,
            "template_files": _digests(worked),
            "revision": issue.number,
            "changed": issue.date,
            "verdict": worked.verdict,
            "governing": chief.line.name if chief is not None else None,
            "stopped": worked.stop.told if worked.stop else None,
            "headings": [item.text for item in finished.scripts[mark].items if isinstance(item, SayHeading)],
            "lines": [writer.line(entry, place) for entry, place in lines if not isinstance(place, WorkedCheck)],
            "closures": _closures(finished.scripts[mark], finished.forms[mark]),
            "checks": [writer.check(entry, place) for entry, place in lines if isinstance(place, WorkedCheck)],
        }
        said = _dispositions(project, worked)
        if said:
            calculations[mark]["dispositions"] = said
        if worked.selection is not None:
            calculations[mark]["selection"] = _selection(worked.selection)
    facts = project.project
    header = {
        "title": facts.title,
        "number": facts.number,
        "status": facts.status,
        "date": facts.date,
        "fingerprint": project.fingerprint,
        "file": project.project.files[0].name,
        "revisions": [{"number": one.number, "date": one.date, "why": one.why} for one in facts.issues],
        "facts": [list(fact) for fact in _facts(project)],
    }
    return {"program": PROGRAM, "format": FORMAT, "project": header, "calculations": calculations}


def date_values(found: dict[str, Any], revisions: Revisions, marks: str) -> None:
    """Write into a values file when each calculation and line last changed, by which issue that is told, and which
    changes the sheets mark."""
    found["project"] |= {"since": revisions.before, "marks": marks}
    for mark, one in found["calculations"].items():
        revised, since = revisions.revised[mark], revisions.since[mark]
        one["revision"], one["changed"] = revised.number, revised.date
        for line in (*one["lines"], *one["checks"]):
            kind: Kind = line["kind"] if "gives" in line else "check"
            number = since.get((kind, line["path"], line.get("again", 1)))
            if number is not None:
                line["changed"] = number


def count_sheets(found: dict[str, Any], sheets: dict[str, int]) -> None:
    """Write into a values file how many sheets each calculation has."""
    for mark, one in found["calculations"].items():
        one["sheets"] = sheets.get(mark, 0)


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


#: one encoder for all: making one takes longer than most lines
_json = json.JSONEncoder(ensure_ascii=False).encode


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


def _digests(worked: Worked) -> dict[str, str]:
    """Return sixteen hexadecimal digits over each file of a template, by the name it is asked for."""
    files = worked.calculation.template.files
    return {s.name.removeprefix("templates/"): hashlib.sha256(s.text.encode()).hexdigest()[:16] for s in files}


def _facts(project: WorkedProject) -> list[tuple[str, str, str]]:
    """Return what the sheets before the calculations say of the package: (group, name, text)."""
    facts = project.project
    found = [("project", name, getattr(facts, name)) for name in ("address", "client", "permit", "office", "contact")]
    found += [("project", "paper", facts.paper), ("project", "units", facts.system)]
    found += [("code", name, text) for name, text in facts.codes]
    found += [("code", "amendments", facts.amendments)]
    found += [("criteria", name, text) for name, text in facts.criteria]
    for mark, properties in facts.materials:
        found.append(("material", mark, ", ".join(f"{name} {text}" for name, text in properties)))
    for one in facts.assumptions:
        state = f", to be verified by {one.by}" if one.to_be_verified else ""
        found.append(("assumption", "", one.says + state))
    found += [("elsewhere", what, where) for what, where in facts.elsewhere]
    found += [("limit state", one.limit_state, one.says) for one in facts.dispositions if one.limit_state]
    return [fact for fact in found if fact[2]]


def _dispositions(project: WorkedProject, worked: Worked) -> list[str]:
    """Return the engineer's words on checks that are NG, as the sheets of the calculation print them."""
    return [
        f"{member.mark} {check.line.name}: {words}"
        for member in worked.members
        for check in member.checks
        if check.verdict == "NG"
        for words in dispositions(project, member.mark, check.line.name)
    ]


def _selection(selection: Selection) -> dict[str, Any]:
    """Return the candidates worked, counted from 1, each with its verdict and ratio of the governing check."""
    tried: list[dict[str, Any]] = []
    for one in selection.tried:
        candidate, check = selection.candidates[one.place], governing(one.worked)
        tried.append({
            "number": one.place + 1,
            "values": dict(candidate.named),
            "verdict": one.worked.verdict,
            "governing": check.line.name if check else None,
            "ratio": check.ratio if check else None,
            "stopped": one.worked.stop.told if one.worked.stop else None,
        } | _least(selection, one))  # fmt: skip
    return {
        "candidates": len(selection.candidates),
        "used": selection.used + 1,
        "first": selection.first + 1 if selection.first >= 0 else None,
        "pinned": selection.pinned,
        "tried": tried,
    }


def _least(selection: Selection, one: Tried) -> dict[str, Any]:
    """Return what tells candidates of one preference apart, in base units, where any preference is shared."""
    if not selection.has_groups:
        return {}
    preference = selection.candidates[one.place].preference + 1
    return {
        "preference": preference,
        "least": one.worked.values.get(selection.least) if one.worked.verdict == "OK" else None,
    }


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
