"""Everything that the study's files say, read once, matched by id."""

from __future__ import annotations

from dataclasses import dataclass

import pandas as pd

from socibrain.errors import Faults
from socibrain.networks.social import SocialNetwork, SocialReading, build_social_networks
from socibrain.sources.answered import read_answered
from socibrain.sources.answers import read_answers
from socibrain.sources.decisions import OpenName
from socibrain.sources.exclusions import LeftOut, read_exclusions, read_rule_values
from socibrain.sources.matrix_files import find_matrices
from socibrain.sources.names import read_names
from socibrain.sources.people import invited, read_people, scanned
from socibrain.sources.records import MatrixFile, PeopleTable, RegionTable, RosterEntry
from socibrain.sources.regions import read_regions
from socibrain.sources.roster import read_roster
from socibrain.sources.study import Study
from socibrain.sources.tables import listed, read_text


@dataclass(frozen=True)
class Gathered:
    """What was read.

    ``tally`` says what became of every written name, as in `SocialReading`.  ``invited`` and
    ``scanned`` are ids (everyone, and whoever has a matrix, where not declared); ``scan_values``
    holds the numbers of exclusion tables as ``file.column``, each by (person, visit).
    """

    study: Study
    people: PeopleTable
    regions: RegionTable | None
    roster: tuple[RosterEntry, ...]
    networks: tuple[SocialNetwork, ...]
    tally: pd.DataFrame
    open_names: tuple[OpenName, ...]
    matrices: tuple[MatrixFile, ...]
    left_out: tuple[LeftOut, ...]
    invited: frozenset[str]
    scanned: frozenset[str]
    scan_values: dict[str, dict[tuple[str, str], float]]

    def site(self, person: str) -> str:
        """The person's site."""
        return str(self.people.table.at[person, "site"])

    @property
    def sites(self) -> tuple[str, ...]:
        """All sites, in alphabetical order."""
        return tuple(sorted({str(site) for site in self.people.table["site"]}))


def gather(study: Study, faults: Faults) -> Gathered:
    """Read every file that the study names, except the matrices themselves.

    Raises `DataRefused` when the people table cannot be used: nobody would be known by then, and
    of the other tables it is only told whether they can be read.  Whatever else is wrong is in
    ``faults``.
    """
    people = read_people(study, faults)
    if people is None:
        for file in study.tables:
            read_text(study.path(file), file, faults)
        faults.refuse()
    left_out = read_exclusions(study, people, faults)
    roster: tuple[RosterEntry, ...] = ()
    social = SocialReading((), pd.DataFrame(), ())
    if study.says.questionnaire:
        roster = read_roster(study, people, faults)
        _note_absent(study, people, roster, faults)
        social = _read_social(study, people, roster, left_out, faults)
    asked, came = invited(study, people), scanned(study, people)
    found = [
        matrix
        for source in study.says.brain
        for matrix in find_matrices(study, source, people.ids, faults, expected=came is None or bool(came))
    ]
    return Gathered(
        study=study,
        people=people,
        regions=read_regions(study, faults) if study.says.regions else None,
        roster=roster,
        networks=social.networks,
        tally=social.tally,
        open_names=social.open_names,
        matrices=tuple(found),
        left_out=left_out,
        invited=frozenset(people.ids) if asked is None else asked,
        scanned=frozenset(matrix.person for matrix in found) if came is None else came,
        scan_values=read_rule_values(study, people),
    )


def input_files(gathered: Gathered) -> list[str]:
    """Every file that was read but the decisions, as the study writes it, without repeats."""
    study = gathered.study
    sidecar = study.says.people.file.rsplit(".", 1)[0] + ".json"
    files = [*study.tables, sidecar]
    return list(dict.fromkeys([*files, *(matrix.file for matrix in gathered.matrices)]))


def _note_absent(study: Study, people: PeopleTable, roster: tuple[RosterEntry, ...], faults: Faults) -> None:
    """Say who is in the people table only: they may be scanned, and have no social position."""
    there = {entry.person for entry in roster}
    absent = [person for person in people.ids if person not in there]
    declared = study.says.roster
    if declared and roster and absent:
        faults.add(declared.file, f"column {declared.person}", "not-on-roster",
                   f"no row for {listed(absent)} of the people table: no social position",
                   "add a row for everyone who could be named", grave=False)  # fmt: skip


def _read_social(
    study: Study,
    people: PeopleTable,
    roster: tuple[RosterEntry, ...],
    left_out: tuple[LeftOut, ...],
    faults: Faults,
) -> SocialReading:
    asked = study.says.questionnaire
    questions = asked.questions if asked else {}
    read = [read_answers(study, question, faults) for question in questions]
    role = people.table["role"]
    return build_social_networks(
        study,
        roster,
        [answers for answers in read if answers is not None],
        faults,
        answered=read_answered(study, faults, known=people.ids),
        roles={person: role.get(person) for person in people.ids},
        names=read_names(study, roster, faults),
        leave_out=frozenset(each.person for each in left_out if each.leaves_out_of != "brain"),
    )
