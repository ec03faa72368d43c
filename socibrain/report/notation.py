"""How numbers are written on the page."""

from __future__ import annotations

import math
from collections.abc import Sequence

SMALLEST_SHOWN = 5
"""People in the smallest cell of a breakdown that is shown as a number (common practice)."""
FEW = f"<{SMALLEST_SHOWN}"
AT_LEAST = f"≥{SMALLEST_SHOWN}"


def decimal(value: float, places: int = 2) -> str:
    """A number with a true minus sign, a dash where there is none, and never minus zero.

    >>> decimal(-0.314), decimal(-0.001), decimal(float("nan"))
    ('−0.31', '0.00', '–')
    """
    if not math.isfinite(value):
        return "–" if math.isnan(value) else ("∞" if value > 0 else "−∞")
    text = f"{abs(value):.{places}f}"
    return f"−{text}" if value < 0 and float(text) != 0 else text


def short(value: float) -> str:
    """A number with three telling digits, for axes and tables of any unit.

    >>> short(1234.5), short(-0.01234), short(0.0)
    ('1,234', '−0.0123', '0')
    """
    if not math.isfinite(value):
        return decimal(value)
    if value == 0:
        return "0"
    places = max(0, 2 - math.floor(math.log10(abs(value))))
    text = f"{abs(value):,.{min(places, 8)}f}"
    text = text.rstrip("0").rstrip(".") if "." in text else text
    return f"−{text}" if value < 0 else text


def evenly(values: Sequence[float]) -> list[str]:
    """The numbers of one column, all with the decimals that give the largest three telling digits.

    >>> evenly([0.5, 0.0123, 0.0001, float("nan")]), evenly([12.0, 7.0])
    (['0.500', '0.012', '<0.001', '–'], ['12', '7'])
    """
    known = [abs(value) for value in values if math.isfinite(value)]
    largest = max(known, default=0.0)
    places = max(0, 2 - math.floor(math.log10(largest))) if largest else 0
    if all(value == round(value) for value in known):
        places = 0
    least = 10.0**-places
    return [f"<{least:.{places}f}" if 0 < value < least / 2 else decimal(value, places) for value in values]


def count(value: float) -> str:
    """A whole number with its thousands apart.

    >>> count(9999)
    '9,999'
    """
    return f"{round(value):,}"


def p_value(p: float, alpha: float) -> str:
    """A p with enough digits to see on which side of alpha it lies.

    >>> p_value(0.0123, 0.05), p_value(0.05004, 0.05), p_value(0.0001, 0.05)
    ('0.012', '0.05004', '0.0001')
    """
    if math.isnan(p):
        return "–"
    places = 3 if p >= 0.001 else 1 - math.floor(math.log10(p)) if p > 0 else 6
    while places < 12 and (p <= alpha) != (float(f"{p:.{places}f}") <= alpha):
        places += 1
    while places < 12 and p != alpha and float(f"{p:.{places}f}") == alpha:
        places += 1
    text = f"{p:.{places}f}"
    return text.rstrip("0") if p < 0.001 else text


def level(alpha: float) -> str:
    """How sure an interval is that goes with a test at alpha.

    >>> level(0.05), level(0.005)
    ('95 %', '99.5 %')
    """
    return f"{100 * (1 - alpha):.10g} %"


def is_small(people: int) -> bool:
    """Whether a cell holds so few people that its count is hidden."""
    return 0 < people < SMALLEST_SHOWN


def breakdown(people: Sequence[int]) -> list[str]:
    """Counts of a breakdown, small cells hidden.

    Where exactly one cell is hidden, its count would follow from the total: the next smallest is
    blurred as well.

    >>> breakdown([40, 3, 2]), breakdown([40, 12, 3]), breakdown([12, 0])
    (['40', '<5', '<5'], ['40', '≥5', '<5'], ['12', '0'])
    """
    shown = [FEW if is_small(each) else count(each) for each in people]
    if shown.count(FEW) == 1:
        others = [number for number, each in enumerate(people) if each >= SMALLEST_SHOWN]
        if others:
            shown[min(others, key=lambda number: people[number])] = AT_LEAST
    return shown


def share(part: int, whole: int) -> str:
    """A share in whole percent, or a bound where it would give a small cell away.

    >>> share(20, 30), share(22, 24), share(2, 24), share(24, 24), share(3, 4)
    ('67 %', '> 79 %', '< 21 %', '100 %', '–')
    """
    if whole < SMALLEST_SHOWN:
        return "–"
    if is_small(part):
        return f"< {math.ceil(100 * SMALLEST_SHOWN / whole)} %"
    if is_small(whole - part):
        return f"> {math.floor(100 * (whole - SMALLEST_SHOWN) / whole)} %"
    return f"{100 * part / whole:.0f} %"
