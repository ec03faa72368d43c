"""The methods paragraphs, made from the findings, the passports, the run record."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from typing import Any

from socibrain.cohort.table import Column
from socibrain.link.finding import Finding, Findings
from socibrain.report import references as works
from socibrain.report.material import ReportInput
from socibrain.report.notation import count, level
from socibrain.report.words import family_size, listed, spoken

TIE_RULES = {
    "directed": "ties keep the direction in which people named each other",
    "either": "two people are tied when at least one named the other",
    "both": "two people are tied when both named the other",
}
EDGES = {
    "correlation": "a correlation",
    "fisher z": "a correlation after Fisher's z",
    "partial correlation": "a partial correlation",
    "streamlines": "a number of streamlines",
    "other": "as the study declares it",
}
NEGATIVE = {"drop": "negative ones dropped", "absolute": "negative ones taken as absolute"}


@dataclass(frozen=True)
class MeasureUsed:
    """One measure that a hypothesis names, as its passport describes it."""

    label: str
    says: str
    reading: str
    undefined: str
    source: str


@dataclass(frozen=True)
class Methods:
    """Paragraphs, measures used, and the works they rest on."""

    paragraphs: tuple[str, ...]
    measures: tuple[MeasureUsed, ...]
    references: tuple[str, ...]


def describe_methods(material: ReportInput) -> Methods:
    """What was done, in the order in which it was done."""
    findings = material.findings
    paragraphs = [_networks(material)]
    references: list[str] = []
    columns: list[Column] = []
    if findings and findings.findings:
        columns = columns_used(findings, material.cohort.columns)
        paragraphs += [
            _model(findings, material.cohort.columns),
            _shuffles(findings),
            _check(findings, material),
        ]
        references = _works(findings, columns)
    paragraphs.append(_software(material))
    measures = [
        MeasureUsed(c.label, c.description, c.reading, c.undefined, c.source) for c in columns if c.measure
    ]
    return Methods(tuple(filter(None, paragraphs)), tuple(measures), tuple(references))


def columns_used(findings: Findings, columns: Mapping[str, Column]) -> list[Column]:
    """Columns that the hypotheses name, each once, in the order they are first named."""
    names = [
        name
        for each in findings.findings
        for name in (each.hypothesis.predictor, each.hypothesis.outcome, *each.hypothesis.adjust)
    ]
    return [columns[name] for name in dict.fromkeys(names) if name in columns]


def _networks(material: ReportInput) -> str:
    rules = {network.question: network.rule for network in material.cohort.social}
    told = [f"for “{question.replace('_', ' ')}”, {TIE_RULES[rule]}" for question, rule in rules.items()]
    several = len(set(material.cohort.persons["site"])) > 1
    social = (
        f"Positions were computed on the whole network{' of each site' if several else ''}, "
        f"including people without a scan, and "
        f"then read off; {listed(told)}. People who did not answer "
        "have no value where it needs their own answers; in the positions of the others, ties that only "
        "they could have reported are missing."
        if told
        else ""
    )
    inputs = [f"“{name}”" for name in dict.fromkeys(column.origin for column in material.brain_columns())]
    brain = f"Brain measures were computed for each person's network ({listed(inputs)})." if inputs else ""
    return " ".join(
        filter(
            None,
            (
                *_questions(material),
                social,
                brain,
                *_brain_choices(material.record),
                _exclusions(material.record),
            ),
        )
    )


def _questions(material: ReportInput) -> list[str]:
    """What people were asked, word for word, one sentence for each question."""
    says = _mapping(
        _mapping(_mapping(material.record.get("study_says")).get("questionnaire")).get("questions")
    )
    told = []
    for name in material.questions:
        asked, cap = _mapping(says.get(name)).get("asks"), _mapping(says.get(name)).get("cap")
        if asked:
            most = f", with up to {cap} names" if cap else ""
            told.append(f"Question “{name.replace('_', ' ')}” asked: “{asked}”{most}.")
    return told


def _brain_choices(record: Mapping[str, object]) -> list[str]:
    """One sentence for each brain input on what its weights are and how communities were sought."""
    told = []
    for name, says in _mapping(_mapping(record.get("study_says")).get("brain")).items():
        choices = _mapping(says)
        communities = _mapping(choices.get("communities"))
        sought = (
            f"; communities were sought {communities['restarts']} times "
            f"at resolution {communities['resolution']:g}"
            if communities
            else ""
        )
        edges, negative = (
            str(choices.get("edges")).replace("_", " "),
            NEGATIVE.get(str(choices.get("negative"))),
        )
        rule = f", {negative}" if negative else ""
        told.append(f"In “{name}”, a weight is {EDGES.get(edges, edges)}{rule}{sought}.")
    return told


def _exclusions(record: Mapping[str, object]) -> str:
    rules = _mapping(record.get("study_says")).get("exclusions")
    reasons = (
        [str(_mapping(rule).get("because")) for rule in rules] if isinstance(rules, list | tuple) else []
    )
    quoted = [f"“{reason}”" for reason in dict.fromkeys(reasons)]
    return (
        f"Rules of the study file leave people or scans out because of {listed(quoted)}." if reasons else ""
    )


def _mapping(value: object) -> Mapping[str, Any]:
    return value if isinstance(value, Mapping) else {}


def _model(findings: Findings, columns: Mapping[str, Column]) -> str:
    options = findings.options
    visit = f" Brains of visit “{options.visit}” were used." if options.visit else ""
    adjusted = dict.fromkeys(name for each in findings.findings for name in each.hypothesis.adjust)
    names = [spoken(name, columns) for name in adjusted]
    lone = [each for each in findings.findings if each.n_sites == 1]
    several = len(lone) < len(findings.findings)
    parts = _with_sites(findings) if several else _without_sites()
    extra = (
        f" Where a hypothesis says so, the model allows for {listed(names)}{parts.split}." if names else ""
    )
    also = (
        f" {listed([f'“{each.hypothesis.id}”' for each in lone])} had people of one site only, and no part "
        "for sites."
        if several and lone
        else ""
    )
    return (
        f"Each hypothesis was fitted by {parts.model}{extra} Slopes are standardised by {parts.unit}; "
        f"intervals are {level(options.alpha)} intervals.{visit}{also}"
    )


@dataclass(frozen=True)
class _ModelWords:
    """How the model is told: what it is, how adjustments entered, what slopes are standardised by."""

    model: str
    split: str
    unit: str


def _with_sites(findings: Findings) -> _ModelWords:
    speaks = "so that slope, interval and p speak of differences between people of the same site."
    unit = "within-site standard deviations"
    if findings.options.sites == "fixed":
        model = f"ordinary least squares with a level of its own for every site (fixed effects), {speaks}"
        return _ModelWords(model, "", unit)
    model = (
        "a linear model with a random intercept for site, its variance estimated by restricted maximum "
        "likelihood with zero allowed (Patterson & Thompson 1971), and degrees of freedom after "
        "Satterthwaite (1946). The predictor entered as its deviation from the mean of the site, with the "
        f"site's mean beside it, {speaks}"
    )
    return _ModelWords(model, ", split in the same way", unit)


def _without_sites() -> _ModelWords:
    return _ModelWords("ordinary least squares over all people.", "", "the columns' standard deviations")


def _shuffles(findings: Findings) -> str:
    tested = _tested(findings)
    if not tested:
        return ""
    drawn = {count(each.shuffles) for each in tested if not each.exhaustive}
    how = [f"{listed(sorted(drawn))} random shuffles"] if drawn else []
    how += (
        ["every distinct arrangement where there are fewer"]
        if any(each.exhaustive for each in tested)
        else []
    )
    several = any(each.n_sites > 1 for each in tested)
    where, blocks = (
        ("within sites", "; blocks after Winkler et al. 2014") if several else ("among all people", "")
    )
    text = (
        f"p values come from shuffling the residuals of the model without the predictor {where} and "
        f"fitting the full model anew (Freedman & Lane 1983{blocks}), with "
        f"{listed(how)} (seed {findings.options.seed}); the statistic is the Wald t, the observed "
        f"arrangement is counted (Phipson & Smyth 2010), and the test is approximate."
    )
    if any(family_size(each, findings) > 1 for each in tested):
        text += (
            " Within a family of hypotheses p is corrected, step by step, by the most extreme statistic over "
            "the family in the same shuffle (Westfall & Young 1993)."
        )
    families = {each.hypothesis.family for each in tested}
    if len(families) > 1:
        text += (
            f" There are {len(tested)} tested hypotheses in {len(families)} families: p is corrected within "
            "families, not across them."
        )
    sided = [each.hypothesis.id for each in tested if each.hypothesis.one_sided]
    tests = f" Tests are two-sided, except for {listed(sided)}." if sided else " Tests are two-sided."
    return text + tests + f" An association counts as found when its p is at most {findings.options.alpha:g}."


def _check(findings: Findings, material: ReportInput) -> str:
    checked = [each for each in findings.findings if each.check]
    if not checked:
        return ""
    version = _mapping(material.record.get("packages")).get("statsmodels", "")
    named = f"statsmodels {version}".strip()
    return (
        f"Each observed fit was made again with {named}; the differences stand in the table of each finding."
    )


def _software(material: ReportInput) -> str:
    version = material.record.get("socibrain")
    return f"Everything was computed by socibrain {version}." if version else ""


def _works(findings: Findings, columns: Sequence[Column]) -> list[str]:
    """Works behind the method, then the sources of the measures used, in alphabetical order."""
    tested = _tested(findings)
    several = any(each.n_sites > 1 for each in tested)
    random = several and findings.options.sites == "random"
    found = [works.PATTERSON_THOMPSON, works.SATTERTHWAITE] if random else []
    if tested:
        found += [works.FREEDMAN_LANE, works.PHIPSON_SMYTH]
    if several:
        found.append(works.WINKLER)
    if any(family_size(each, findings) > 1 for each in tested):
        found.append(works.WESTFALL_YOUNG)
    sources = {
        f"{column.source.rstrip('.')}."
        for column in columns
        if column.measure and column.source and not column.source.startswith("our own")
    }
    return sorted({*found, *sources}, key=str.casefold)


def _tested(findings: Findings) -> list[Finding]:
    return [each for each in findings.findings if each.status in ("ok", "boundary")]
