"""The study file: where everything lies and what it means."""

from __future__ import annotations

import re
from collections.abc import Iterator
from dataclasses import dataclass
from pathlib import Path, PurePosixPath
from typing import Annotated, Any, Literal

from pydantic import BeforeValidator, Field, model_validator

from socibrain.documents import Document, Entry, OtherKind, read_document
from socibrain.errors import DocumentRefused, Fault


def _as_text(value: Any) -> Any:
    return str(value) if isinstance(value, int | float) and not isinstance(value, bool) else value


Text = Annotated[str, BeforeValidator(_as_text)]
"""Text; a bare number in the file is read as the text that it is written as."""

TieRule = Literal["directed", "either", "both"]


class People(Entry):
    """The people table: one row per person."""

    file: str
    id: str = "participant_id"
    site: str | None = None
    """Column with the site; without it the whole study is one site."""
    role: str | None = None
    """Column with the class by which brokerage roles are counted."""
    invited: Chosen | None = None
    """Who was to be scanned; everyone when left out."""
    scanned: Chosen | None = None
    """Who was scanned; whoever has a matrix when left out."""
    numbers: tuple[str, ...] = ()
    """Columns that hold numbers; a sidecar with `Units` says it too."""


class Chosen(Entry):
    """People whose entry in ``column`` is one of ``values``."""

    column: str
    values: tuple[Text, ...]


class Roster(Entry):
    """Who could be named, site by site."""

    file: str
    person: str = "participant_id"
    name: str | None = None
    """Column with the name as people would write it; without it answers use ids."""
    site: str | None = None
    """Column with the site; the people table's site when left out."""


class Answered(Entry):
    """Who answered the questionnaire."""

    file: str
    person: str = "participant_id"
    column: str
    values: tuple[Text, ...]
    """Entries that mean: this person answered."""


class Question(Entry):
    """One question in which people named others."""

    asks: str
    file: str
    layout: Literal["long", "wide"]
    chooser: str
    """Column that says who answers."""
    chosen: str
    """Column that says who is named; for wide layouts a pattern such as ``friend_*``."""
    ties: TieRule
    """``directed``: as named; ``either``: when one names the other; ``both``: when both do."""
    cap: int | None = Field(default=None, ge=1)
    """Most names that could be given."""


class Questionnaire(Entry):
    """What people were asked about others."""

    answered: Answered | None = None
    """Status table; without it, whoever has at least one answer row answered."""
    own_answers_missing: Literal["undefined", "from_others"] = "undefined"
    """Position of people who did not answer: undefined, or what others' answers give."""
    aliases: str | None = None
    """Table with columns ``written`` and ``person`` (and ``site``): other spellings."""
    questions: dict[str, Question] = Field(min_length=1)


class Communities(Entry):
    """How communities are sought."""

    resolution: float = Field(default=1.0, gt=0)
    restarts: int = Field(default=50, ge=2)


class BrainInput(Entry):
    """One kind of brain network: a file for each person (and visit)."""

    files: str
    """Path pattern with ``{person}`` and, where there are visits, ``{visit}``."""
    edges: Literal["correlation", "fisher_z", "partial_correlation", "streamlines", "other"]
    """What a weight is."""
    layout: Literal["matrix", "edge_list"] = "matrix"
    first_index: Literal[0, 1] = 0
    """Number of the first region in an edge list."""
    variable: str | None = None
    """Name of the array in a MATLAB or NPZ file that holds several."""
    negative: Literal["refuse", "drop", "absolute"]
    """What to do with negative weights."""
    dead_regions: Literal["refuse", "exclude_person"] = "refuse"
    """A region without any tie, or with missing weights: refuse the file, or leave the person out."""
    communities: Communities = Communities()


class Regions(Entry):
    """The regions, in the order of the matrices' rows."""

    file: str
    name: str = "name"
    system: str | None = None


class Exclusion(Entry):
    """A rule that leaves people (or one visit of theirs) out."""

    file: str | None = None
    """Table with the column; the people table when left out."""
    person: str = "participant_id"
    visit: str | None = None
    """Column with the visit; without it the rule holds for all visits."""
    column: str
    above: float | None = None
    below: float | None = None
    values: tuple[Text, ...] | None = None
    leaves_out_of: Literal["brain", "social", "both"] = "brain"
    because: str

    @model_validator(mode="after")
    def _one_limit(self) -> Exclusion:
        if sum(limit is not None for limit in (self.above, self.below, self.values)) != 1:
            raise ValueError("give exactly one of above, below, values")
        return self


class StudyFile(Entry):
    """Everything a study file may say."""

    socibrain: Literal[1]
    study: str = Field(pattern=r"^[A-Za-z0-9_-]+$")
    title: str
    seed: int = Field(default=1, ge=0)
    people: People
    roster: Roster | None = None
    questionnaire: Questionnaire | None = None
    brain: dict[str, BrainInput] = Field(default_factory=dict)
    regions: Regions | None = None
    visits: tuple[Text, ...] = ()
    exclusions: tuple[Exclusion, ...] = ()


@dataclass(frozen=True)
class Study:
    """A checked study file, and the folder that its paths start from."""

    document: Document[StudyFile]

    @property
    def says(self) -> StudyFile:
        """What the study file says."""
        return self.document.content

    @property
    def folder(self) -> Path:
        """Folder of the study file; every path in it starts here."""
        return self.document.path.parent

    def path(self, written: str) -> Path:
        """The file that a path written in the study file means."""
        return self.folder / written

    @property
    def tables(self) -> tuple[str, ...]:
        """Every table that the study file names, as written, without repeats."""
        says, asked = self.says, self.says.questionnaire
        files = [says.people.file, *(rule.file for rule in says.exclusions if rule.file)]
        files += [part.file for part in (says.roster, says.regions) if part]
        if asked:
            files += [question.file for question in asked.questions.values()]
            files += [asked.answered.file] if asked.answered else []
            files += [asked.aliases] if asked.aliases else []
        return tuple(dict.fromkeys(files))


PLAN = OtherKind(
    has="hypotheses",
    lacks="people",
    found="this is a plan, not a study file",
    mend="give the study file that its `study:` names; `socibrain link` takes a plan",
)


def read_study(path: str | Path) -> Study:
    """Read a study file.

    Raises `DocumentRefused` with every fault, each with line, column and how to mend it.
    """
    study = Study(read_document(Path(path), StudyFile, mistaken=PLAN))
    faults = list(_contradictions(study))
    if faults:
        raise DocumentRefused(*faults)
    return study


def _contradictions(study: Study) -> Iterator[Fault]:
    """Entries that are fine alone and cannot be meant together."""
    says, at = study.says, study.document.fault
    if not says.brain and not says.questionnaire:
        yield at(
            ("study",), "nothing-to-read", "neither questionnaire nor brain", "add at least one of the two"
        )
    if len(set(says.visits)) < len(says.visits):
        yield at(("visits",), "duplicate-visit", "a visit stands twice", "name each visit once")
    for place, name in enumerate(says.people.numbers):
        if name in (says.people.id, says.people.site, says.people.role):
            yield at(("people", "numbers", place), "not-a-number", f"'{name}' is a column of ids or classes",
                     "take it out")  # fmt: skip
    yield from _doubtful_questions(study)
    yield from _doubtful_brains(study)
    yield from _doubtful_rules(study)


def _doubtful_questions(study: Study) -> Iterator[Fault]:
    says, at = study.says, study.document.fault
    for name, question in (says.questionnaire.questions if says.questionnaire else {}).items():
        here = ("questionnaire", "questions", name)
        if name in says.brain or not _is_name(name):
            yield at(
                here, "bad-name", "a question needs a name of its own from letters, digits and _", "rename it"
            )
        if question.layout == "wide" and "*" not in question.chosen:
            yield at((*here, "chosen"), "no-pattern", "names no set of columns",
                     "write * where the columns' names differ, such as friend_*")  # fmt: skip


def _doubtful_brains(study: Study) -> Iterator[Fault]:
    says, at = study.says, study.document.fault
    for name, source in says.brain.items():
        here = ("brain", name)
        if not _is_name(name):
            yield at(here, "bad-name", "an input needs a name from letters, digits and _", "rename it")
        unknown = sorted(set(re.findall(r"{(.*?)}", source.files)) - {"person", "visit"})
        if unknown:
            yield at((*here, "files"), "unknown-placeholder", f"{{{unknown[0]}}} stands for nothing",
                     "only {person} and {visit} are filled in")  # fmt: skip
        if "{person}" not in source.files:
            yield at((*here, "files"), "no-person", "is the same file for everyone",
                     "write {person} where the person's id stands in the path")  # fmt: skip
        if says.visits and "{visit}" not in source.files:
            yield at((*here, "files"), "no-visit", "visits are declared", "write {visit} into the path")
        if not says.visits and "{visit}" in source.files:
            yield at((*here, "files"), "no-visit", "no visits are declared", "add `visits: [...]`")
        if source.layout == "matrix" and "first_index" in source.model_fields_set:
            yield at((*here, "first_index"), "not-used", "is for edge lists only", "take it out")


def _doubtful_rules(study: Study) -> Iterator[Fault]:
    says, at = study.says, study.document.fault
    origins = {*says.brain, *(says.questionnaire.questions if says.questionnaire else ())}
    tables: dict[str, str] = {}
    for number, rule in enumerate(says.exclusions):
        here = ("exclusions", number)
        stem = PurePosixPath(rule.file).stem if rule.file else ""
        if rule.file and (stem in origins or tables.setdefault(stem, rule.file) != rule.file):
            yield at((*here, "file"), "same-name", f"two things would be called '{stem}.…' in our tables",
                     "give the file another name")  # fmt: skip
        if rule.leaves_out_of != "social" and not says.brain:
            yield at(here, "nothing-to-exclude", "leaves people out of a brain side that is not there",
                     "write `leaves_out_of: social`")  # fmt: skip
        if rule.leaves_out_of == "social" and not says.questionnaire:
            yield at(here, "nothing-to-exclude", "leaves people out of a social side that is not there",
                     "write `leaves_out_of: brain`")  # fmt: skip
        if rule.visit is not None and not says.visits:
            yield at((*here, "visit"), "no-visit", "no visits are declared", "add `visits: [...]`")
        for entry in ("person", "visit"):
            if rule.file is None and entry in rule.model_fields_set:
                yield at((*here, entry), "not-used", "is for a table of its own, and no file is named",
                         "add `file:`, or take it out")  # fmt: skip


def _is_name(name: str) -> bool:
    return re.fullmatch(r"[A-Za-z0-9_]+", name) is not None
