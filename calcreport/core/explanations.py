"""What each problem means and how to mend it, by slug. Read by `calcreport explain`."""

from __future__ import annotations

EXPLANATIONS: dict[str, str] = {}
