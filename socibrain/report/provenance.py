"""Where the numbers come from: versions, seeds, digests, timings."""

from __future__ import annotations

import hashlib
from collections.abc import Mapping
from dataclasses import dataclass

from socibrain.report.material import ReportInput
from socibrain.report.notation import count

TITLES = {"socibrain": "socibrain version", "seconds": "Seconds by stage", "packages": "Versions"}


@dataclass(frozen=True)
class Part:
    """One titled list of the run record."""

    title: str
    entries: tuple[tuple[str, str], ...]


def read_record(material: ReportInput) -> list[Part]:
    """The run record as titled lists.

    Files named after a person become one line.  Paths of the two files on the machine that ran,
    and what the study file says (methods tell it), are left out.
    """
    people = sorted({str(person) for person in material.cohort.persons["person"]})
    run, parts = [], []
    for key, value in material.record.items():
        if key.endswith("_file") or key == "study_says":
            continue
        if isinstance(value, Mapping | list | tuple):
            parts.append(Part(_title(key), tuple(_fold(_flat(value), people).items())))
        else:
            run.append((_title(key), str(value)))
    study_says = material.record.get("study_says")
    if isinstance(study_says, Mapping) and "seed" in study_says:
        run.append(("Seed of the study", str(study_says["seed"])))
    if material.findings:
        run.append(("Seed of the plan", str(material.findings.options.seed)))
    return [part for part in (Part("Run", tuple(run)), *parts) if part.entries]


def _flat(content: object, before: str = "") -> dict[str, str]:
    """Nested entries by their path, as ``hypotheses 1: outcome``."""
    if isinstance(content, Mapping):
        inner = {f"{before}: {key}" if before else str(key): value for key, value in content.items()}
    elif isinstance(content, list | tuple) and any(isinstance(each, Mapping) for each in content):
        inner = {f"{before} {number}".strip(): value for number, value in enumerate(content, start=1)}
    elif isinstance(content, list | tuple):
        return {before: ", ".join(str(each) for each in content) or "none"}
    else:
        return {before: "none" if content is None else str(content)}
    return {name: text for key, value in inner.items() for name, text in _flat(value, key).items()}


def _fold(entries: Mapping[str, str], people: list[str]) -> dict[str, str]:
    """Files of single people become one entry, with a digest of their digests in path order."""
    shown = {name: value for name, value in entries.items() if not any(person in name for person in people)}
    folded = sorted((name, value) for name, value in entries.items() if name not in shown)
    if not folded:
        return shown
    together = hashlib.sha256("".join(value for _, value in folded).encode()).hexdigest()
    return shown | {f"{count(len(folded))} files of single people, together": together}


def _title(key: str) -> str:
    text = TITLES.get(key, key.replace("_", " "))
    return text if text.startswith("socibrain") else text[:1].upper() + text[1:]
