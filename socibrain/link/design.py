"""From a cohort to designs: what one hypothesis means in columns of numbers."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from typing import Literal

import numpy as np
import pandas as pd
from numpy.typing import NDArray

from socibrain.link.hypothesis import Hypothesis
from socibrain.link.options import LinkOptions
from socibrain.link.sample import Sample, numbers

Array = NDArray[np.float64]
Codes = NDArray[np.intp]
NOTHING = 1e-9
"""What is left of a column, as a share of it, when rounding is all that is left."""
FEW_SITES = 6
"""Below this many sites a variance between them is hardly known: common practice."""


@dataclass(frozen=True)
class Design:
    """One hypothesis in numbers, at person scale, people sorted by site.

    ``outcome`` (n,) and the columns are in units of within-site SDs: the square root of the summed
    squared deviations from site means over n − G, adjustments not taken out.  ``within`` (n, q):
    deviations from site means, adjustments first, the predictor last.  ``between`` (n, b):
    constant in sites; the intercept, the predictor's site mean when ``context`` (it is column 1),
    adjustments' site means; with fixed sites one indicator per site.  ``notes`` say what was coded
    or dropped.  Arrays are read-only.
    """

    hypothesis: Hypothesis
    people: tuple[str, ...]
    site_names: tuple[str, ...]
    sites: Codes
    outcome: Array
    within: Array
    between: Array
    context: bool
    outcome_sd: float
    predictor_sd: float
    notes: tuple[str, ...]

    @property
    def columns(self) -> Array:
        """All columns of the model, (n, q + b): within, then between."""
        return np.column_stack([self.within, self.between])


@dataclass(frozen=True)
class Refused:
    """A hypothesis that the sample cannot answer, or whose fit failed, and why."""

    hypothesis: Hypothesis
    reason: str
    n: int
    n_sites: int
    status: Literal["refused", "failed"] = "refused"


class _Unanswerable(Exception):
    """Why a hypothesis cannot be answered."""


def make_designs(
    sample: Sample, hypotheses: Sequence[Hypothesis], options: LinkOptions
) -> tuple[Design | Refused, ...]:
    """The design of each hypothesis of a family, or why there is none."""
    site_names, codes = np.unique(sample.table["site"].to_numpy(str), return_inverse=True)
    made: list[Design | Refused] = []
    for hypothesis in hypotheses:
        try:
            if sample.table.empty:
                raise _Unanswerable(f"nobody has all columns that the family asks for: {sample.nobody}")
            notes = _tautology(sample, hypothesis)
            made.append(_design(sample.table, hypothesis, codes.astype(np.intp), options, notes))
        except _Unanswerable as why:
            made.append(Refused(hypothesis, str(why), len(sample.table), len(site_names)))
    return tuple(made)


def _tautology(sample: Sample, hypothesis: Hypothesis) -> list[str]:
    """What to say of an outcome and a predictor that are measured on one network."""
    network = sample.networks.get(hypothesis.outcome)
    if network is None or network != sample.networks.get(hypothesis.predictor):
        return []
    return [
        f"outcome and predictor are computed from the same network ('{network}'): "
        "they go together by construction, so a small p may say nothing about people"
    ]


def _design(
    table: pd.DataFrame, hypothesis: Hypothesis, sites: Codes, options: LinkOptions, notes: list[str]
) -> Design:
    if hypothesis.one_sided and hypothesis.direction is None:
        raise _Unanswerable("a one-sided test needs a direction")
    if hypothesis.outcome == hypothesis.predictor:
        raise _Unanswerable("outcome and predictor are the same column")
    outcome = _asked_numbers(table, hypothesis.outcome)
    predictor = _asked_numbers(table, hypothesis.predictor)
    adjustments = _adjustments(table, hypothesis.adjust, notes)
    n_sites = int(sites.max()) + 1
    parts = _within_parts(adjustments, sites, notes)
    outcome_part, predictor_part = _deviation(outcome, sites), _deviation(predictor, sites)
    _insist(hypothesis, (outcome, outcome_part), (predictor, predictor_part), parts, n_sites)

    outcome_sd, predictor_sd = (_within_sd(part, n_sites) for part in (outcome_part, predictor_part))
    within = np.column_stack([part / _within_sd(part, n_sites) for part in [*parts, predictor_part]])
    centred = (outcome - outcome.mean()) / outcome_sd
    means = {hypothesis.predictor: predictor / predictor_sd} | adjustments
    if options.sites == "fixed":
        between, context = np.eye(n_sites)[sites], False
    else:
        between, context = _between(means, hypothesis.predictor, sites, notes)
        if 1 < n_sites < FEW_SITES:
            notes.append(
                f"{n_sites} sites tell little of the variance between sites: fixed sites are advised"
            )
    alone = int((np.bincount(sites) == 1).sum())
    if alone:
        notes.append(
            f"{alone} of {n_sites} sites have one person only, who cannot speak to the within-site effect"
        )
    for array in (centred, within, between, sites):
        array.flags.writeable = False
    return Design(
        hypothesis=hypothesis,
        people=tuple(table["person"].astype(str)),
        site_names=tuple(table["site"].astype(str)),
        sites=sites,
        outcome=centred,
        within=within,
        between=between,
        context=context,
        outcome_sd=outcome_sd,
        predictor_sd=predictor_sd,
        notes=tuple(notes),
    )


def _insist(
    hypothesis: Hypothesis,
    outcome: tuple[Array, Array],
    predictor: tuple[Array, Array],
    parts: list[Array],
    n_sites: int,
) -> None:
    """Raise where the sample cannot answer.  Pairs are values and their deviations from site means."""
    people = outcome[0].size
    y, x = outcome[1], predictor[1]
    if _is_nothing(y, outcome[0]):
        raise _Unanswerable(f"outcome '{hypothesis.outcome}' is the same for everyone within each site")
    if _is_nothing(x, predictor[0]):
        raise _Unanswerable(
            f"predictor '{hypothesis.predictor}' is the same for everyone within each site; "
            "the person scale asks about differences within sites"
        )
    if people - n_sites - len(parts) - 1 < 1:
        raise _Unanswerable(
            f"{people} people in {n_sites} sites are too few for {len(parts) + 1} "
            "within-site effects beside the sites' own levels"
        )
    if _is_nothing(_cleared(x, parts), x):
        raise _Unanswerable(f"predictor '{hypothesis.predictor}' follows from the adjustments within sites")
    if _is_nothing(_cleared(y, parts), y):
        raise _Unanswerable(f"outcome '{hypothesis.outcome}' follows from the adjustments within sites")
    if _is_nothing(_cleared(y, [*parts, x]), _cleared(y, parts)):
        raise _Unanswerable(
            f"outcome '{hypothesis.outcome}' follows from the predictor without error within sites"
        )


def _asked_numbers(table: pd.DataFrame, name: str) -> Array:
    values = numbers(table[name])
    if values is None:
        raise _Unanswerable(f"'{name}' holds text; outcome and predictor must be numbers")
    return values


def _adjustments(table: pd.DataFrame, names: Sequence[str], notes: list[str]) -> dict[str, Array]:
    """Columns of the adjustments by name; text as one indicator for each value but the most frequent."""
    columns: dict[str, Array] = {}
    for name in dict.fromkeys(names):
        values = numbers(table[name])
        if values is not None:
            columns[name] = values
            continue
        texts = table[name].astype(str)
        counts = texts.value_counts()
        levels = sorted(counts.index, key=lambda level: (-counts[level], level))
        notes.append(f"'{name}' is coded against '{levels[0]}'")
        columns |= {f"{name} = {level}": (texts == level).to_numpy(np.float64) for level in levels[1:]}
    return columns


def _within_parts(adjustments: dict[str, Array], sites: Codes, notes: list[str]) -> list[Array]:
    """Deviations from site means of the adjustments that add something within sites."""
    parts: list[Array] = []
    for name, values in adjustments.items():
        part = _deviation(values, sites)
        if _is_nothing(part, values):
            notes.append(f"'{name}' does not vary within sites: only its site means adjust")
        elif _is_nothing(_cleared(part, parts), part):
            notes.append(f"'{name}' follows from the other adjustments within sites and was dropped there")
        else:
            parts.append(part)
    return parts


def _between(columns: dict[str, Array], predictor: str, sites: Codes, notes: list[str]) -> tuple[Array, bool]:
    """Intercept and site means, (n, b), keeping one site free for the site variance."""
    n_sites = int(sites.max()) + 1
    kept = [np.ones(sites.size)]
    context = False
    for name, values in columns.items():
        means = _site_means(values, sites)[sites]
        spread = means - values.mean()
        if n_sites == 1:
            continue
        if _is_nothing(spread, values):
            notes.append(f"site means of '{name}' are all the same and were dropped")
        elif len(kept) >= n_sites - 1:
            notes.append(f"site means of '{name}' were dropped: {n_sites} sites cannot carry them")
        elif _is_nothing(_cleared(spread, kept), spread):
            notes.append(f"site means of '{name}' follow from the others and were dropped")
        else:
            scale = 1.0 if name == predictor else float(np.abs(spread).max())
            kept.append(spread / scale)
            context = context or name == predictor
    return np.column_stack(kept), context


def _site_means(values: Array, sites: Codes) -> Array:
    return np.asarray(np.bincount(sites, values) / np.bincount(sites))


def _deviation(values: Array, sites: Codes) -> Array:
    return np.asarray(values - _site_means(values, sites)[sites])


def _within_sd(part: Array, n_sites: int) -> float:
    return float(np.sqrt(part @ part / (part.size - n_sites)))


def _cleared(column: Array, others: Sequence[Array]) -> Array:
    """What is left of a column beside the others."""
    if not others:
        return column
    basis = np.linalg.qr(np.column_stack([other / np.abs(other).max() for other in others]))[0]
    rest = column - basis @ (basis.T @ column)
    return np.asarray(rest - basis @ (basis.T @ rest))


def _is_nothing(rest: Array, whole: Array) -> bool:
    return bool(np.linalg.norm(rest) <= NOTHING * np.linalg.norm(whole))
