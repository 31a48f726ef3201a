"""A finished run as one side of a comparison: its accounts, and its calculations as they would be printed."""

from __future__ import annotations

from calcreport.calculate.model import Worked, WorkedProject
from calcreport.history.accounts import account, placed_entries
from calcreport.history.model import Account
from calcreport.report.compared import Side
from calcreport.report.confirmations import find_forms
from calcreport.report.governing import governing
from calcreport.report.notation import Notation
from calcreport.report.script import write_script
from calcreport.report.told import SymbolForms, Told


def accounted(worked: Worked) -> Account:
    """Return the account of a calculation with the name of the check that governs it."""
    check = governing(worked)
    return account(worked, check.line.name if check is not None else "")


def make_side(project: WorkedProject, name: str) -> Side:
    """Return all calculations of a run as they would be printed; `name` is what the side is called."""
    forms = find_forms(project)
    scripts = {w.calculation.mark: write_script(w) for w in project.calculations}
    shared: dict[int, SymbolForms] = {}
    told = {
        mark: Told(script, forms, scripts,
                   shared.setdefault(id(script.worked.plan), SymbolForms(Notation(script.worked.plan.slots))))
        for mark, script in scripts.items()
    }  # fmt: skip
    places = {
        w.calculation.mark: {entry.identity: place for entry, place in placed_entries(w)} for w in project.calculations
    }
    return Side(name, told, places)
