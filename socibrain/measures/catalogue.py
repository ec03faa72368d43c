"""What a measure is, and how measures are found."""

from __future__ import annotations

import importlib
import pkgutil
from collections.abc import Callable
from dataclasses import dataclass
from functools import cache
from typing import Any, Literal, TypeVar

from socibrain.documents import nearest

Side = Literal["social", "brain"]
Scale = Literal["person", "region", "site"]
Need = Literal["own answers", "roles", "systems", "club"]


@dataclass(frozen=True)
class Measure:
    """A measure and its passport.

    ``function`` takes a `SiteAtHand` (social) or a `BrainAtHand` (brain) and returns float64:
    social person scale (n_people,), social site scale a float, brain person scale a float, brain
    region scale (n_regions,).  NaN means undefined, for the reason given in ``undefined``.
    """

    name: str
    label: str
    side: Side
    scale: Scale
    unit: str
    low: float
    high: float
    reading: str
    undefined: str
    source: str
    needs: frozenset[Need]
    function: Callable[[Any], Any]
    says: str


F = TypeVar("F", bound=Callable[[Any], Any])
_declared: dict[str, Measure] = {}


def measure(
    *,
    label: str,
    side: Side,
    scale: Scale,
    unit: str,
    low: float,
    high: float,
    reading: str,
    undefined: str,
    source: str,
    needs: tuple[Need, ...] = (),
) -> Callable[[F], F]:
    """Declare the decorated function as a measure; its name is the measure's name.

    ``reading`` says what a higher value means, ``undefined`` when there is no value and why,
    ``needs`` what must be known of a person ("own answers": their own answers; "roles": classes).
    """

    def declare(function: F) -> F:
        name = function.__name__
        if name in _declared:
            raise ValueError(f"two measures are called {name}")
        first_line = (function.__doc__ or "").strip().splitlines()[0]
        _declared[name] = Measure(
            name, label, side, scale, unit, low, high, reading, undefined, source,
            frozenset(needs), function, first_line,
        )  # fmt: skip
        return function

    return declare


@cache
def all_measures() -> dict[str, Measure]:
    """Every measure by name, social before brain, in alphabetical order."""
    for side in ("social", "brain"):
        room = importlib.import_module(f"socibrain.measures.{side}")
        for module in pkgutil.iter_modules(room.__path__):
            importlib.import_module(f"{room.__name__}.{module.name}")
    return dict(sorted(_declared.items(), key=lambda item: (item[1].side != "social", item[0])))


def find_measure(name: str) -> Measure:
    """The measure of that name.

    Raises `KeyError` whose text names the nearest valid one.
    """
    known = all_measures()
    if name not in known:
        raise KeyError(nearest(name, known))
    return known[name]
