"""What a hypothesis may say."""

from __future__ import annotations

from typing import Literal

from pydantic import Field

from socibrain.documents import Entry


class Hypothesis(Entry):
    """One expectation: ``predictor`` goes with ``outcome``, within sites.

    ``outcome``, ``predictor`` and ``adjust`` are column names of the cohort's person table: a
    measure as ``question.measure`` or ``input.measure``, an attribute by its own name.
    ``direction`` is a prediction; the test is two-sided unless ``one_sided``.
    """

    id: str = Field(pattern=r"^[A-Za-z0-9_-]+$")
    says: str
    scale: Literal["person"] = "person"
    outcome: str
    predictor: str
    adjust: tuple[str, ...] = ()
    direction: Literal["positive", "negative"] | None = None
    one_sided: bool = False
    role: Literal["confirmatory", "exploratory"] = "exploratory"
    family: str = "all"
