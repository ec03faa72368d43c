"""Sentences made from findings, saying no more than the numbers do."""

from __future__ import annotations

import math
from collections.abc import Mapping
from dataclasses import dataclass
from typing import Literal

from socibrain.cohort.table import Column
from socibrain.link.finding import Finding, Findings
from socibrain.report.notation import count, decimal, level, p_value

Verdict = Literal["found", "not found", "not answered"]
BADGES: dict[Verdict, str] = {
    "found": "association found",
    "not found": "no association found",
    "not answered": "not answered",
}


@dataclass(frozen=True)
class Answer:
    """One hypothesis answered in plain words: the verdict, one sentence, its numbers, what to mind."""

    hypothesis: str
    says: str
    role: str
    verdict: Verdict
    badge: str
    sentence: str
    numbers: str
    notes: tuple[str, ...]


def answer(finding: Finding, findings: Findings, columns: Mapping[str, Column]) -> Answer:
    """The answer to one of the findings.

    An association is told as found only when the p corrected for the family is at most alpha.
    """
    verdict = _verdict(finding, findings.options.alpha)
    if verdict == "found":
        sentence = _found(finding, columns)
    elif verdict == "not found":
        sentence = _not_found(finding, columns)
    else:
        sentence = _not_answered(finding)
    told = verdict != "not answered"
    return Answer(
        hypothesis=finding.hypothesis.id,
        says=finding.hypothesis.says,
        role=finding.hypothesis.role,
        verdict=verdict,
        badge=BADGES[verdict],
        sentence=sentence,
        numbers=_numbers(finding, findings) if told else "",
        notes=tuple(_notes(finding, findings, verdict)) if told else (),
    )


def spoken(name: str, columns: Mapping[str, Column]) -> str:
    """A column as it is called inside a sentence: its label, without a capital to begin with.

    >>> spoken("years_of_service", {}), spoken("scans.head_motion", {})
    ('years of service', 'head motion (scans)')
    """
    label = columns[name].label if name in columns else name
    if label == name:
        origin, _, own = name.replace("_", " ").rpartition(".")
        label = f"{own} ({origin})" if origin else own
    return label[0].lower() + label[1:] if label[1:2].islower() else label


def listed(names: list[str]) -> str:
    """Names in a row as a sentence has them.

    >>> listed(["age"]), listed(["age", "motion", "tenure"])
    ('age', 'age, motion and tenure')
    """
    return " and ".join(part for part in (", ".join(names[:-1]), names[-1]) if part) if names else ""


def within(finding: Finding) -> str:
    """Where the comparison is made.

    People are compared with others of their own site; with a single site there is nothing to say.
    """
    return "within sites" if finding.n_sites > 1 else "across people"


def family_size(finding: Finding, findings: Findings) -> int:
    """How many tested hypotheses share the correction of this one."""
    return sum(
        each.hypothesis.family == finding.hypothesis.family and each.status in ("ok", "boundary")
        for each in findings.findings
    )


def _verdict(finding: Finding, alpha: float) -> Verdict:
    if finding.status in ("refused", "failed") or math.isnan(finding.p_family):
        return "not answered"
    return "found" if finding.p_family <= alpha else "not found"


def _found(finding: Finding, columns: Mapping[str, Column]) -> str:
    place = within(finding)
    way = "higher" if finding.estimate > 0 else "lower"
    predictor = spoken(finding.hypothesis.predictor, columns)
    outcome = spoken(finding.hypothesis.outcome, columns)
    who, than = f"people with higher {predictor}", ""
    if _is_yes_or_no(finding.hypothesis.predictor, columns):
        who, than = f"people who count as “{predictor}”", " than people who do not"
    return (
        f"{place[0].upper()}{place[1:]}, {who} tended to have {way} {outcome}{than}"
        f"{_allowing(finding, columns)}."
    )


def _is_yes_or_no(name: str, columns: Mapping[str, Column]) -> bool:
    """Whether a column's unit says that 1 stands for yes."""
    return name in columns and columns[name].unit.startswith("1 =")


def _not_found(finding: Finding, columns: Mapping[str, Column]) -> str:
    hypothesis = finding.hypothesis
    aim = f" in the predicted direction ({hypothesis.direction})" if hypothesis.one_sided else ""
    return (
        f"No association between {spoken(hypothesis.predictor, columns)} and "
        f"{spoken(hypothesis.outcome, columns)} was found {within(finding)}{aim}"
        f"{_allowing(finding, columns)}; the interval runs from {decimal(finding.ci_low)} to "
        f"{decimal(finding.ci_high)}."
    )


def _not_answered(finding: Finding) -> str:
    reason = finding.reason.rstrip(".") or "no reason is on record"
    what = "could not be fitted" if finding.status == "failed" else "was not tested"
    return f"This hypothesis {what}: {reason}."


def _allowing(finding: Finding, columns: Mapping[str, Column]) -> str:
    adjust = [spoken(name, columns) for name in finding.hypothesis.adjust]
    return f", allowing for {listed(adjust)}" if adjust else ""


def _numbers(finding: Finding, findings: Findings) -> str:
    alpha = findings.options.alpha
    sites = f"{count(finding.n_sites)} site{'s' if finding.n_sites != 1 else ''}"
    return (
        f"Standardised slope {decimal(finding.estimate)} ({level(alpha)} interval "
        f"{decimal(finding.ci_low)} to {decimal(finding.ci_high)}), "
        f"p = {p_value(finding.p_family, alpha)}{_corrected(finding, findings)}; "
        f"{count(finding.n)} people in {sites}."
    )


def _corrected(finding: Finding, findings: Findings) -> str:
    size = family_size(finding, findings)
    return f" corrected for the {size} hypotheses of its family" if size > 1 else ""


def _notes(finding: Finding, findings: Findings, verdict: Verdict) -> list[str]:
    alpha, hypothesis = findings.options.alpha, finding.hypothesis
    notes = []
    if verdict == "found":
        if hypothesis.direction:
            met = (finding.estimate > 0) == (hypothesis.direction == "positive")
            notes.append(
                f"The plan predicted a {hypothesis.direction} association"
                f"{'.' if met else '; the one found has the opposite sign.'}"
            )
        notes.append(
            "An association, not a cause: it may run either way, or come from something not measured."
        )
    else:
        notes.append("Not finding an association does not show that there is none.")
    if hypothesis.role == "exploratory":
        notes.append("Exploratory: it needs to be confirmed in other people.")
    notes += _disagreement(finding, alpha)
    if finding.status == "boundary":
        notes.append("The variance between sites was estimated as zero, the lowest value it can take.")
    notes += [_as_sentence(note) for note in finding.notes]
    if finding.p_permutation <= finding.smallest_p * (1 + 1e-9):
        notes.append(f"The p is the smallest that {_arrangements(finding)} can give.")
    return notes


def _as_sentence(text: str) -> str:
    return f"{text[:1].upper()}{text[1:].rstrip('.')}."


def _disagreement(finding: Finding, alpha: float) -> list[str]:
    """What to say when the interval and the corrected p point to different sides."""
    apart = finding.ci_low > 0 or finding.ci_high < 0
    if apart and finding.p_family > alpha:
        alone = "after correction for the family" if finding.p_permutation <= alpha else "by shuffling"
        return [
            f"The interval, made for this hypothesis alone, leaves out zero; {alone} the evidence "
            "falls short."
        ]
    if not apart and finding.p_family <= alpha:
        return ["The interval includes zero although p is small: read this as a borderline finding."]
    return []


def _arrangements(finding: Finding) -> str:
    if finding.exhaustive:
        return f"all {count(finding.shuffles)} distinct arrangements"
    return f"{count(finding.shuffles)} shuffles"
