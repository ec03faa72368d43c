"""How hypotheses are tested: what a plan fixes for all of them."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Literal


@dataclass(frozen=True)
class LinkOptions:
    """Options of the engine.  ``visit`` is the visit whose brains are linked ('' without visits)."""

    seed: int
    alpha: float
    shuffles: int
    sites: Literal["random", "fixed"]
    visit: str
