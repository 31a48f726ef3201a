"""A root of a function between two bounds where its sign changes, to the last bits.

Callable and bounds in, the place out. Method: Brent's, by the library; no equation of any design code.
"""

from __future__ import annotations

from collections.abc import Callable

from calcreport.core.late import load

#: trials at most; bisection alone would need about sixty
MOST_TRIALS = 200


class NoRoot(ArithmeticError):
    """There is no change of sign between the bounds; the words say so."""


def find_root(function: Callable[[float], float], low: float, high: float) -> tuple[float, float]:
    """Return the root and the larger of the two differences at the bounds.

    Raises `NoRoot` where both differences have one sign.
    """
    at_low, at_high = function(low), function(high)
    larger = max(abs(at_low), abs(at_high))
    if at_low == 0:
        return low, larger
    if at_high == 0:
        return high, larger
    if (at_low < 0) == (at_high < 0):
        raise NoRoot("the two sides do not cross between the bounds")
    optimize = load("scipy.optimize")
    found = optimize.brentq(function, low, high, xtol=1e-300, rtol=8.9e-16, maxiter=MOST_TRIALS, disp=False)
    return float(found), larger
