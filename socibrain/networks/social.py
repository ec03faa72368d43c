"""One site's people and ties, checked and immutable."""

from __future__ import annotations

from collections.abc import Iterable, Mapping, Sequence
from dataclasses import dataclass

import numpy as np
import pandas as pd
from numpy.typing import NDArray

from socibrain.errors import Faults
from socibrain.networks.nominations import FATES, Read, note_nominations, open_names, read_nominations, tally
from socibrain.sources.decisions import OpenName
from socibrain.sources.names import NameBook
from socibrain.sources.records import Answers, RosterEntry
from socibrain.sources.study import Study, TieRule
from socibrain.sources.tables import listed, mend_unknown

Array = NDArray[np.float64]
Mask = NDArray[np.bool_]


@dataclass(frozen=True)
class SocialNetwork:
    """Who named whom in one site, over everyone on its roster.

    ``named[i, j]`` is True where person i named person j: (n_people, n_people), no self-naming,
    read-only.  ``answered[i]`` says whether i answered; the row of a person who did not answer is
    all False and means *unknown*, not *nobody*.  ``roles`` is the class of each person for
    brokerage, None where missing.
    """

    site: str
    question: str
    people: tuple[str, ...]
    named: Mask
    answered: Mask
    roles: tuple[str | None, ...]
    rule: TieRule

    @property
    def ties(self) -> Array:
        """The network after the tie rule: 0/1 float64, symmetric unless the rule is ``directed``."""
        return apply_rule(self.named, self.rule)


@dataclass(frozen=True)
class SocialReading:
    """Every social network of a study, and an account of all that was written.

    ``networks``: one per question and site, questions as in the study file, sites and people by
    name and id.  ``tally``: one row per question and person of the networks, columns
    ``question, site, person``; ``state`` (answered; named nobody: answered and wrote nothing; did
    not answer); ``written``, the number of names; what became of them: ``resolved`` (different
    people of the site, each a tie), ``duplicate``, ``self``, ``outside_site``, ``off_roster``,
    ``ambiguous``, ``unresolved``, ``left_out`` (named somebody whom an exclusion rule leaves
    out), which add up to ``written``; ``at_cap`` and ``over_cap`` (missing without a cap).  All of
    these are missing for people who did not answer; ``set_aside`` counts names that such people
    wrote all the same.  ``open_names``: texts that wait for a human, see `write_suggestions`.
    """

    networks: tuple[SocialNetwork, ...]
    tally: pd.DataFrame
    open_names: tuple[OpenName, ...]


def build_social_networks(
    study: Study,
    roster: tuple[RosterEntry, ...],
    answers: Iterable[Answers],
    faults: Faults,
    *,
    answered: frozenset[str] | None,
    roles: Mapping[str, str | None],
    names: NameBook,
    leave_out: frozenset[str] = frozenset(),
) -> SocialReading:
    """One network per question and site over everyone on the roster except ``leave_out``.

    ``answered`` holds those who answered by the status table; who is in it and has no name there named
    nobody (who is in it and has no row for any question is a grave fault: the answers may be lost),
    and answers of people outside it are set aside.  Without a status table (None) whoever
    has a row for the question, even an empty one, answered it; who only has empty ones is put on
    record.  ``names`` is built on the whole
    roster, so that a person left out is recognised and nobody else is taken for them.
    Grave fault: a chooser who is not on the roster.
    """
    asked = study.says.questionnaire
    answers = tuple(answers)
    homes = {entry.person: entry.site for entry in roster}
    kept = {person: site for person, site in sorted(homes.items()) if person not in leave_out}
    elsewhere = frozenset[str]().union(*(one.choosers for one in answers))
    networks: list[SocialNetwork] = []
    rows: list[dict[str, object]] = []
    waiting: dict[tuple[str, str], OpenName] = {}
    if answers and answered is not None:
        _refuse_lost_answers(answers, [p for p in kept if p in answered and p not in elsewhere], faults)
    for one in answers:
        if asked is None:
            raise ValueError("this study asks no questions")
        question = asked.questions[one.question]
        spoke = one.choosers if answered is None else answered
        _refuse_strangers(one, homes, faults)
        read = read_nominations(one, homes=homes, left_out=leave_out, spoke=spoke, names=names)
        note_nominations(read, one, question, faults)
        _note_silence(read, one, kept, faults, answered=answered, elsewhere=elsewhere)
        rows += tally(read, one, question, homes=kept, spoke=spoke)
        waiting |= {(name.site, name.written): name for name in open_names(read, homes)}
        for site in sorted(set(kept.values())):
            people = tuple(person for person, home in kept.items() if home == site)
            network = _network(
                read, spoke, question.ties, site=site, question=one.question, people=people, roles=roles
            )
            networks.append(network)
            if not network.ties.any():
                faults.add(one.file, "", "no-ties", f"no usable tie in site '{site}' for '{one.question}'",
                           "check the names and the tie rule", grave=False)  # fmt: skip
    return SocialReading(tuple(networks), _table(rows), tuple(waiting[key] for key in sorted(waiting)))


def _network(
    read: Iterable[Read],
    spoke: frozenset[str],
    rule: TieRule,
    *,
    site: str,
    question: str,
    people: tuple[str, ...],
    roles: Mapping[str, str | None],
) -> SocialNetwork:
    place = {person: number for number, person in enumerate(people)}
    named = np.zeros((len(people), len(people)), dtype=np.bool_)
    for one in read:
        if one.fate == "resolved" and one.meant.person in place:
            named[place[one.nomination.chooser], place[one.meant.person]] = True
    answered = np.array([person in spoke for person in people], dtype=np.bool_)
    named.setflags(write=False)
    answered.setflags(write=False)
    return SocialNetwork(
        site, question, people, named, answered, tuple(roles.get(person) for person in people), rule
    )


def _refuse_strangers(answers: Answers, homes: Mapping[str, str], faults: Faults) -> None:
    """Choosers whom the roster does not know; silent when the roster itself could not be read."""
    for chooser, line in answers.first_line.items() if homes else ():
        if chooser not in homes:
            faults.add(answers.file, f"line {line}", "unknown-chooser", "who answers is not on the roster",
                       mend_unknown(chooser, homes, "put the person on the roster, or take the row out"),
                       )  # fmt: skip


def _refuse_lost_answers(answers: Sequence[Answers], people: Iterable[str], faults: Faults) -> None:
    """People who answered, and of whom no file has a row: absent is not the same as nobody."""
    files = " or ".join(dict.fromkeys(one.file for one in answers))
    if not all(one.first_line for one in answers):
        return
    for person in people:
        faults.add(files, "", "lost-answers", f"'{person}' answered by the status table and has no row",
                   "add their answers, an empty row if they named nobody, or correct the status")  # fmt: skip


def _note_silence(
    read: Iterable[Read],
    answers: Answers,
    kept: Mapping[str, str],
    faults: Faults,
    *,
    answered: frozenset[str] | None,
    elsewhere: frozenset[str],
) -> None:
    """People whose answers to this question alone are missing, and how that is taken."""
    wrote = {one.nomination.chooser for one in read}
    silent = [person for person in kept if answered is not None and person in answered]
    if silent and not answers.first_line:
        faults.add(answers.file, "", "empty",
                   f"has a header and no rows, and {len(silent)} people answered by the status table",
                   "export the answers again, or correct the status table")  # fmt: skip
        return
    empty = [person for person in kept if person in answers.first_line and person not in wrote]
    if answered is None and empty:
        who = f"{len(empty)} people have a row" if len(empty) > 1 else "1 person has a row"
        faults.add(answers.file, "", "empty-rows",
                   f"{who} and named nobody, and no `answered:` says whether they answered; "
                   f"counted as having answered and named nobody: {listed(empty)}",
                   "declare questionnaire.answered, with the column that says who answered",
                   grave=False)  # fmt: skip
    for person in kept:
        line = answers.first_line.get(person)
        place = "" if line is None else f"line {line}"
        if answered is not None and person in answered & elsewhere and person not in wrote:
            faults.add(answers.file, place, "gave-nothing",
                       f"'{person}' answered by the status table and named nobody here; taken as such",
                       "correct the status if the answers were lost", grave=False)  # fmt: skip
        elif answered is None and line is None and person in elsewhere:
            faults.add(answers.file, place, "no-row",
                       f"'{person}' answers another question and has no row here: not answered",
                       "add an empty row if they named nobody, or a status table", grave=False)  # fmt: skip


def _table(rows: list[dict[str, object]]) -> pd.DataFrame:
    """The tally with counts that can be missing."""
    labels = ["question", "site", "person", "state"]
    counts = ["written", *(fate.replace(" ", "_") for fate in FATES), "over_cap", "set_aside"]
    table = pd.DataFrame(rows, columns=[*labels, *counts, "at_cap"])
    return table.astype(
        dict.fromkeys(labels, object) | dict.fromkeys(counts, "Int64") | {"at_cap": "boolean"}
    )


def apply_rule(named: Mask, rule: TieRule) -> Array:
    """Ties from nominations, (n, n) 0/1 float64.

    >>> named = np.array([[False, True], [False, False]])
    >>> apply_rule(named, "either").tolist(), apply_rule(named, "both").tolist()
    ([[0.0, 1.0], [1.0, 0.0]], [[0.0, 0.0], [0.0, 0.0]])
    """
    if rule == "either":
        return (named | named.T).astype(np.float64)
    if rule == "both":
        return (named & named.T).astype(np.float64)
    return named.astype(np.float64)
