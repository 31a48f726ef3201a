"""Libraries, and a few of the program's own modules, loaded at the moment they are needed and not before.

The one place where a module is imported by name at run time; all lists are closed.
"""

from __future__ import annotations

from importlib import import_module
from types import ModuleType
from typing import Literal, TypeAlias

Library: TypeAlias = Literal["mpmath", "sympy", "pint", "scipy.optimize", "numpy", "openpyxl", "xlsxwriter", "pypdf"]


def load(name: Library) -> ModuleType:
    """Return a library of the closed list, importing it the first time."""
    return import_module(name)


def load_schedules() -> ModuleType:
    """Return the module that reads schedules: few projects have any, and tables ask for much."""
    return import_module("calcreport.read.schedules")


def load_row_tables() -> ModuleType:
    """Return the module that takes rows from tables, for the same reason."""
    return import_module("calcreport.read.row_tables")


def load_tables() -> ModuleType:
    """Return the module that reads the tables of a project, for the same reason."""
    return import_module("calcreport.read.tables")


def load_template_tables() -> ModuleType:
    """Return the module that reads tables beside templates, for the same reason."""
    return import_module("calcreport.read.template_tables")


def load_command(name: str) -> ModuleType:
    """Return the module of one of the program's commands."""
    return import_module(f"calcreport.commands.{name}")
