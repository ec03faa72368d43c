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
        numbers=_numbers(finding, findings, verdict) if told else "",
        notes=tuple(_notes(finding, findings, verdict)) if told else (),
    )


def spoken(name: str, columns: Mapping[str, Column]) -> str:
    """A column as running text calls it: measures in quotes, where they come from behind them.

    What came with the people table or with scans loses its capital; it is quoted only where its
    name ends in brackets of its own.

    >>> spoken("years_of_service", {}), spoken("scans.head_motion", {})
    ('years of service', 'head motion (scans)')
    """
    origin, _, own = name.rpartition(".")
    origin, label, quoted = origin.replace("_", " "), own.replace("_", " "), False
    if name in columns:
        quoted = bool(columns[name].measure)
        label = columns[name].label if columns[name].label != name else label
    whence = f" ({origin})" if origin else ""
    label = label.removesuffix(whence)
    if quoted or (whence and label.endswith(")")):
        return f"“{label}”{whence}"
    return f"{label[0].lower() + label[1:] if label[1:2].islower() else label}{whence}"


def titled(name: str, columns: Mapping[str, Column]) -> str:
    """A column as a table calls it: its label, with a capital.

    >>> titled("years_of_service", {})
    'Years of service'
    """
    label = columns[name].label if name in columns and columns[name].label != name else spoken(name, {})
    return label[:1].upper() + label[1:]


def people_and_sites(finding: Finding) -> str:
    """How many people were analysed, and in how many sites where there are several."""
    people = f"{count(finding.n)} {'person' if finding.n == 1 else 'people'}"
    return f"{people} in {count(finding.n_sites)} sites" if finding.n_sites > 1 else people


def listed(names: list[str]) -> str:
    """Names in a row as a sentence has them.

    >>> listed(["age"]), listed(["age", "motion", "tenure"])
    ('age', 'age, motion and tenure')
    """
    return " and ".join(part for part in (", ".join(names[:-1]), names[-1]) if part) if names else ""


def within(finding: Finding) -> str:
    """Where the comparison is made, before or behind other words: '' for a single site.

    People are compared with others of their own site; with a single site there is nothing to say.
    """
    return "within sites" if finding.n_sites > 1 else ""


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
    way = "higher" if finding.estimate > 0 else "lower"
    predictor = spoken(finding.hypothesis.predictor, columns)
    outcome = spoken(finding.hypothesis.outcome, columns)
    who, than = f"people with higher values of {predictor}", ""
    if _is_yes_or_no(finding.hypothesis.predictor, columns):
        who, than = f"people who count as {predictor}", " than people who do not"
    place = within(finding)
    told = f"{place}, {who}" if place else who
    return _as_sentence(f"{told} tended to have {way} values of {outcome}{than}{_allowing(finding, columns)}")


def _is_yes_or_no(name: str, columns: Mapping[str, Column]) -> bool:
    """Whether a column's unit says that 1 stands for yes."""
    return name in columns and columns[name].unit.startswith("1 =")


def _not_found(finding: Finding, columns: Mapping[str, Column]) -> str:
    hypothesis = finding.hypothesis
    place = f" {within(finding)}".rstrip()
    aim = f" in the predicted direction ({hypothesis.direction})" if hypothesis.one_sided else ""
    return (
        f"No association between {spoken(hypothesis.predictor, columns)} and "
        f"{spoken(hypothesis.outcome, columns)} was found{place}{aim}"
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


def _numbers(finding: Finding, findings: Findings, verdict: Verdict) -> str:
    alpha = findings.options.alpha
    return (
        f"Standardised slope {decimal(finding.estimate)} ({level(alpha)} interval "
        f"{decimal(finding.ci_low)} to {decimal(finding.ci_high)}), {_sided(finding)}"
        f"p = {p_value(finding.p_family, alpha)}{_corrected(finding, findings)}; "
        f"{people_and_sites(finding)}; {_prediction(finding, verdict)}."
    )


def _prediction(finding: Finding, verdict: Verdict) -> str:
    """Whether the plan said beforehand which way the association would go."""
    direction = finding.hypothesis.direction
    if not direction:
        return "no direction was predicted"
    if verdict != "found":
        return f"a {direction} association was predicted"
    met = (finding.estimate > 0) == (direction == "positive")
    return "as predicted" if met else "against the prediction"


def _sided(finding: Finding) -> str:
    return "one-sided " if finding.hypothesis.one_sided else ""


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
    notes += _one_side(finding) + _disagreement(finding, alpha)
    if finding.status == "boundary":
        notes.append("The variance between sites was estimated as zero, the lowest value it can take.")
    notes += [_as_sentence(note) for note in finding.notes]
    if finding.p_permutation <= finding.smallest_p * (1 + 1e-9):
        notes.append(f"The p is the smallest that {_arrangements(finding)} can give.")
    return notes


def _as_sentence(text: str) -> str:
    return f"{text[:1].upper()}{text[1:].rstrip('.')}."


def _one_side(finding: Finding) -> list[str]:
    """What to say of a test that looks at the predicted side only."""
    if not finding.hypothesis.one_sided:
        return []
    looks = f"The test is one-sided: it looks for a {finding.hypothesis.direction} association only"
    if _on_the_other_side(finding):
        return [f"{looks}; the slope lies on the other side, of which p says nothing."]
    return [f"{looks}. The interval has two sides."]


def _on_the_other_side(finding: Finding) -> bool:
    """Whether a one-sided test met its slope where it did not look."""
    asked = finding.hypothesis
    against = -finding.estimate if asked.direction == "positive" else finding.estimate
    return asked.one_sided and against > 0


def _disagreement(finding: Finding, alpha: float) -> list[str]:
    """What to say when the interval and the corrected p point to different sides.

    An interval of 1 − alpha has alpha / 2 on each side, so that a one-sided p between alpha / 2 and
    alpha goes with an interval that includes zero.
    """
    if _on_the_other_side(finding):
        return []
    apart = finding.ci_low > 0 or finding.ci_high < 0
    if apart and finding.p_family > alpha:
        alone = "after correction for the family" if finding.p_permutation <= alpha else "by shuffling"
        return [
            f"The interval, made for this hypothesis alone, leaves out zero; {alone} the evidence "
            "falls short."
        ]
    if not apart and finding.p_family <= (alpha / 2 if finding.hypothesis.one_sided else alpha):
        return ["The interval includes zero although p is small: read this as a borderline finding."]
    return []


def _arrangements(finding: Finding) -> str:
    if finding.exhaustive:
        return f"all {count(finding.shuffles)} distinct arrangements"
    return f"{count(finding.shuffles)} shuffles"
