"""The plan file: what is asked of a study, fixed before looking."""

from __future__ import annotations

from collections import Counter
from dataclasses import dataclass
from pathlib import Path
from typing import Annotated, Any, Literal

from pydantic import BeforeValidator, Field

from socibrain.documents import Document, Entry, OtherKind, nearest, read_document
from socibrain.errors import DocumentRefused, Fault
from socibrain.link.hypothesis import Hypothesis
from socibrain.link.options import LinkOptions
from socibrain.measures.catalogue import all_measures


def _as_text(value: Any) -> Any:
    return str(value) if isinstance(value, int) and not isinstance(value, bool) else value


class PlanFile(Entry):
    """Everything a plan file may say."""

    socibrain: Literal[1]
    plan: str = Field(pattern=r"^[A-Za-z0-9_-]+$")
    study: str
    """Path of the study file, from the plan's folder."""
    question: str
    seed: int = Field(ge=0)
    alpha: float = Field(default=0.05, gt=0, lt=1)
    shuffles: int = Field(default=9999, ge=19)
    visit: Annotated[str, BeforeValidator(_as_text)] | None = None
    """The visit whose brains are linked; the study's first when left out."""
    sites: Literal["random", "fixed"] = "random"
    hypotheses: tuple[Hypothesis, ...] = Field(min_length=1)


@dataclass(frozen=True)
class Plan:
    """A checked plan file, and the study it is about."""

    document: Document[PlanFile]

    @property
    def says(self) -> PlanFile:
        """What the plan file says."""
        return self.document.content

    @property
    def study_path(self) -> Path:
        """Where the study file lies."""
        return self.document.path.parent / self.says.study

    def options(self, visits: tuple[str, ...]) -> LinkOptions:
        """Options of the engine, for a study with these visits.

        Raises `DocumentRefused` when the plan asks for a visit that the study does not have.
        """
        says = self.says
        visit = says.visit if says.visit is not None else (visits[0] if visits else "")
        if visit and visit not in visits:
            known = ", ".join(visits) or "none"
            raise DocumentRefused(
                self.document.fault(
                    ("visit",), "unknown-visit", f"the study has no visit '{visit}'", f"its visits: {known}"
                )
            )
        return LinkOptions(says.seed, says.alpha, says.shuffles, says.sites, visit)


STUDY = OtherKind(
    has="people",
    lacks="hypotheses",
    found="this is a study file, not a plan",
    mend="give a plan, whose `study:` names this file; `socibrain audit` and `measure` take a study file",
)


def read_plan(path: str | Path) -> Plan:
    """Read a plan file.

    Raises `DocumentRefused` with every fault, each with line, column and how to mend it.
    """
    plan = Plan(read_document(Path(path), PlanFile, mistaken=STUDY))
    faults = _contradictions(plan)
    if faults:
        raise DocumentRefused(*faults)
    return plan


def _contradictions(plan: Plan) -> list[Fault]:
    """Entries that are fine alone and cannot be meant together."""
    at = plan.document.fault
    times = Counter(hypothesis.id for hypothesis in plan.says.hypotheses)
    found = []
    for number, hypothesis in enumerate(plan.says.hypotheses):
        here = ("hypotheses", number)
        if times[hypothesis.id] > 1:
            found.append(
                at((*here, "id"), "duplicate-id", f"'{hypothesis.id}' stands twice", "give each its own id")
            )
        if hypothesis.one_sided and hypothesis.direction is None:
            found.append(
                at(
                    (*here, "one_sided"),
                    "no-direction",
                    "a one-sided test needs a predicted direction",
                    "add `direction: positive` or `direction: negative`",
                )
            )
        if hypothesis.outcome == hypothesis.predictor:
            found.append(
                at((*here, "predictor"), "same-column", "is the outcome itself", "name another column")
            )
        for place, name in enumerate(hypothesis.adjust):
            if name in (hypothesis.outcome, hypothesis.predictor):
                found.append(
                    at(
                        (*here, "adjust", place),
                        "same-column",
                        f"'{name}' is the outcome or the predictor",
                        "take it out",
                    )
                )
    return found


def check_columns(plan: Plan, known: dict[str, bool]) -> None:
    """Refuse columns that the study does not have.

    ``known`` says for every column name whether it holds numbers.  Raises `DocumentRefused` with
    all unknown names, each with line, column and the nearest valid one.
    """
    faults = []
    for number, hypothesis in enumerate(plan.says.hypotheses):
        places: list[tuple[tuple[str | int, ...], str, bool]] = [
            (("outcome",), hypothesis.outcome, True),
            (("predictor",), hypothesis.predictor, True),
            *((("adjust", place), name, False) for place, name in enumerate(hypothesis.adjust)),
        ]
        for keys, name, must_count in places:
            here = ("hypotheses", number, *keys)
            if name not in known:
                faults.append(plan.document.fault(here, "unknown-column", *_unknown(name, known)))
            elif must_count and not known[name]:
                found = f"'{name}' holds text"
                mend = "name a column of numbers; declare it under people.numbers if it is one"
                faults.append(plan.document.fault(here, "not-a-number", found, mend))
    if faults:
        raise DocumentRefused(*faults)


def _unknown(name: str, known: dict[str, bool]) -> tuple[str, str]:
    """What is wrong with a column that people do not have, and how to mend it."""
    origin, _, word = name.partition(".")
    measure = all_measures().get(word)
    measured = {column.partition(".")[0] for column in known if "." in column}
    listed = "`socibrain catalogue` lists the measures"
    if measure is None or measure.scale == "person" or origin not in measured:
        close = nearest(name, known)
        mend = close if close.startswith("did you") else listed
        return f"'{name}' is no measure or attribute of this study", mend
    found = f"'{name}': '{word}' is measured by {measure.scale}; hypotheses here are about people"
    near = [
        f"'{column}'" for column in known if column.startswith(f"{origin}.") and column.endswith(f"_{word}")
    ]
    return found, f"of people there is {' and '.join(near)}" if near else listed
