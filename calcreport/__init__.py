"""Calculation packages for structural concrete from plain-text projects and design-code templates."""

from calcreport.core.version import VERSION as __version__

__all__ = ["__version__"]
