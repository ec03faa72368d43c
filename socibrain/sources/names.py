"""Written names to roster ids: what is certain is resolved, the rest waits for a human."""

from __future__ import annotations

from collections import defaultdict
from collections.abc import Mapping
from dataclasses import dataclass, replace
from typing import Literal

from rapidfuzz import fuzz

from socibrain.documents import nearest
from socibrain.errors import Faults
from socibrain.sources.decisions import read_decisions
from socibrain.sources.records import RosterEntry
from socibrain.sources.spelling import name_key, name_words
from socibrain.sources.study import Study
from socibrain.sources.tables import is_missing, loose_form, mend_unknown, read_table

Kind = Literal["resolved", "outside site", "off roster", "ambiguous", "unresolved"]

LIKENESS = 80.0
"""Least similarity (0 to 100) at which a person is offered to the human; our own choice."""
PART_OF_NAME = 90.0
"""Similarity of a text whose every word begins a word of the name ("J. Moor"); our own choice."""
CLOSE_CALL = 5.0
"""People within so many points of the best one are offered together; our own choice."""


@dataclass(frozen=True)
class Resolution:
    """Whom a written text means.

    ``person`` is set for ``resolved`` and ``outside site`` (somebody of another site; None when
    several there bear the name).  For ``ambiguous`` and ``unresolved``, ``candidates`` are the
    people a human may choose from and ``score`` is the best similarity, 0 to 100.
    ``decided`` says that a human's decision was replayed.
    """

    kind: Kind
    person: str | None = None
    candidates: tuple[str, ...] = ()
    score: float = 0.0
    decided: bool = False


@dataclass(frozen=True)
class NameBook:
    """Everything that is known about who is meant by what, by site.

    ``decisions`` (written, site) -> person, or None for nobody; site '' holds everywhere.
    ``names`` and ``aliases`` hold the people of a key, by the site in which they are found;
    the keys are those of `name_key`.
    """

    sites: Mapping[str, str]
    decisions: Mapping[tuple[str, str], str | None]
    names: Mapping[str, Mapping[str, frozenset[str]]]
    aliases: Mapping[tuple[str, str], frozenset[str]]
    spoken: Mapping[str, Mapping[str, tuple[str, ...]]]
    """Site -> person -> words of the name, for similarity; people whose name is their id are absent."""

    def resolve(self, written: str, site: str) -> Resolution:
        """Whom ``written`` means when somebody of ``site`` wrote it.

        In this order: an id as it is, a human's decision, a name of the roster, an alias; each
        looked for in ``site`` first.  Similarity never decides: it only offers candidates.
        """
        if written in self.sites:
            return self._found(written, site)
        key = name_key(written) or written
        for scope in (site, ""):
            if (key, scope) in self.decisions:
                person = self.decisions[key, scope]
                found = Resolution("off roster") if person is None else self._found(person, site)
                return replace(found, decided=True)
        named = self.names.get(key, {})
        known = named.get(site) or self._aliased(key, site)
        if known:
            return self._only(known, site)
        offered, score = self._offer(written, site)
        elsewhere = frozenset[str]().union(*named.values())
        if elsewhere:
            both = tuple(sorted({*offered, *elsewhere}))
            alone = next(iter(elsewhere)) if len(elsewhere) == 1 else None
            return (
                Resolution("ambiguous", None, both, 100.0) if offered else Resolution("outside site", alone)
            )
        if not offered:
            return Resolution("off roster")
        return Resolution("unresolved" if len(offered) == 1 else "ambiguous", None, offered, score)

    def _found(self, person: str, site: str) -> Resolution:
        return Resolution("resolved" if self.sites[person] == site else "outside site", person)

    def _only(self, people: frozenset[str], site: str) -> Resolution:
        if len(people) > 1:
            return Resolution("ambiguous", None, tuple(sorted(people)), 100.0)
        return self._found(next(iter(people)), site)

    def _aliased(self, key: str, site: str) -> frozenset[str]:
        """People the alias table offers to writers of ``site``: its own people before others."""
        people = self.aliases.get((key, site)) or self.aliases.get((key, ""), frozenset())
        return frozenset(p for p in people if self.sites[p] == site) or people

    def _offer(self, written: str, site: str) -> tuple[tuple[str, ...], float]:
        """The people of ``site`` whose id or name is like ``written``, and the best similarity."""
        loose, words = loose_form(written), name_words(written)
        scores = {p: 100.0 for p, home in self.sites.items() if home == site and loose_form(p) == loose}
        for person, spoken in self.spoken.get(site, {}).items() if words else ():
            likeness = _likeness(words, spoken)
            if likeness >= LIKENESS:
                scores[person] = max(likeness, scores.get(person, 0.0))
        best = max(scores.values(), default=0.0)
        return tuple(sorted(p for p, score in scores.items() if score >= best - CLOSE_CALL)), best


def read_names(study: Study, roster: tuple[RosterEntry, ...], faults: Faults) -> NameBook:
    """The name book of a study: its roster, its alias table and the decisions humans took.

    An alias or a decision for somebody who is not on the roster is a grave fault.  Faults cite
    file and line, never what was written.  Without anybody on the roster (it could not be read)
    nothing is looked at.
    """
    if not roster:
        return name_book((), aliases={}, decisions={})
    return name_book(
        roster, aliases=_read_aliases(study, roster, faults), decisions=read_decisions(study, roster, faults)
    )


def name_book(
    roster: tuple[RosterEntry, ...],
    *,
    aliases: Mapping[tuple[str, str], frozenset[str]],
    decisions: Mapping[tuple[str, str], str | None],
) -> NameBook:
    """Lay open the roster for looking up names.

    >>> book = name_book((RosterEntry("007", "north", "Anna Berg"),), aliases={}, decisions={})
    >>> book.resolve("Berg, Änna", "north").person
    '007'
    >>> book.resolve("Ana Berg", "north").kind, book.resolve("Ana Berg", "north").candidates
    ('unresolved', ('007',))
    """
    names: dict[str, dict[str, frozenset[str]]] = defaultdict(dict)
    spoken: dict[str, dict[str, tuple[str, ...]]] = defaultdict(dict)
    for entry in roster:
        if entry.name == entry.person:
            continue
        key = name_key(entry.name)
        names[key][entry.site] = names[key].get(entry.site, frozenset()) | {entry.person}
        spoken[entry.site][entry.person] = name_words(entry.name)
    sites = {entry.person: entry.site for entry in roster}
    return NameBook(sites, decisions, dict(names), aliases, dict(spoken))


def _likeness(words: tuple[str, ...], name: tuple[str, ...]) -> float:
    """How alike a text and a name are, 0 to 100, in whatever order their words stand."""
    part = all(any(whole.startswith(word) for whole in name) for word in words)
    return max(PART_OF_NAME * part, fuzz.token_sort_ratio(" ".join(words), " ".join(name)))


def _read_aliases(
    study: Study, roster: tuple[RosterEntry, ...], faults: Faults
) -> dict[tuple[str, str], frozenset[str]]:
    asked = study.says.questionnaire
    if asked is None or asked.aliases is None:
        return {}
    table = read_table(study.path(asked.aliases), asked.aliases, {"written": "", "person": ""}, faults)
    people, sites = {entry.person for entry in roster}, {entry.site for entry in roster}
    aliases: dict[tuple[str, str], frozenset[str]] = {}
    for line, row in table or ():
        place = f"line {line}"
        site = "" if is_missing(row.get("site", "")) else row["site"]
        if is_missing(row["written"]) or is_missing(row["person"]):
            faults.add(asked.aliases, place, "incomplete-alias", "an alias lacks its text or its person",
                       "fill in both cells or remove the row")  # fmt: skip
        elif row["person"] not in people:
            faults.add(asked.aliases, place, "unknown-person", "the person is not on the roster",
                       mend_unknown(row["person"], people, "write an id of the roster"))  # fmt: skip
        elif site and site not in sites:
            faults.add(asked.aliases, place, "unknown-site", f"the roster has no site '{site}'",
                       nearest(site, sites))  # fmt: skip
        else:
            key = (name_key(row["written"]) or row["written"], site)
            aliases[key] = aliases.get(key, frozenset()) | {row["person"]}
    return aliases
