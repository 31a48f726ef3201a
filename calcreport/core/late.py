"""Libraries too slow to load for work that does not need them, loaded at the moment they are needed.

The one place where a module is imported by name at run time; the list is closed.
"""

from __future__ import annotations

from importlib import import_module
from types import ModuleType
from typing import Literal


def load(name: Literal["mpmath", "sympy", "pint"]) -> ModuleType:
    """Return a library of the closed list, importing it the first time."""
    return import_module(name)
