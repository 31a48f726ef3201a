"""Which callable works which method; signatures stand in `core.methods`."""

from __future__ import annotations

from collections.abc import Callable

from calcreport.methods.envelopes import member_on_supports
from calcreport.methods.fibres import section_by_fibres, section_in_bands_by_fibres
from calcreport.methods.results import Handed, Result, Spend

WORKS: dict[str, Callable[[Handed, Spend], Result]] = {
    "section by fibres": section_by_fibres,
    "section in bands by fibres": section_in_bands_by_fibres,
    "member on supports": member_on_supports,
}
