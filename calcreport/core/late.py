"""Libraries, and the program's own commands, loaded at the moment they are needed and not before.

The one place where a module is imported by name at run time; both lists are closed.
"""

from __future__ import annotations

from importlib import import_module
from types import ModuleType
from typing import Literal


def load(name: Literal["mpmath", "sympy", "pint", "scipy.optimize"]) -> ModuleType:
    """Return a library of the closed list, importing it the first time."""
    return import_module(name)


def load_command(name: str) -> ModuleType:
    """Return the module of one of the program's commands."""
    return import_module(f"calcreport.commands.{name}")
