"""From answers to whole-site networks: a hand-worked study, every fault, and what must not matter."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace
from pathlib import Path

import numpy as np
import pandas as pd
import pytest

from socibrain.errors import Fault, Faults
from socibrain.networks.nominations import FATES
from socibrain.networks.social import SocialReading, build_social_networks
from socibrain.sources.answers import read_answers
from socibrain.sources.decisions import DECISIONS, write_suggestions
from socibrain.sources.names import read_names
from socibrain.sources.records import RosterEntry
from socibrain.sources.study import read_study
from socibrain.streams import stream

ROSTER = (
    RosterEntry("007", "north", "Änna Berg"),
    RosterEntry("NA", "north", "Kim Lee"),
    RosterEntry("12", "north", "Jo Moor"),
    RosterEntry("13", "north", "Beatrix Salt"),
    RosterEntry("14", "north", "Anna Holt"),
    RosterEntry("21", "south", "Kim Lee"),
    RosterEntry("22", "south", "Ove Quay"),
)
# 007 names NA (by name), 12 twice, herself, a misspelling of 13; NA names 007 and somebody of
# south; 12 names nobody; 13 names "Anna" (two people), a stranger, NA; 14 has no row; 21 names 22.
ROWS = (
    ("007", "lee, kim"),
    ("007", "12"),
    ("007", "Jo Moor"),
    ("007", "Berg, Anna"),
    ("007", "Beatrix Sallt"),
    ("NA", "anna  berg"),
    ("NA", "Ove Quay"),
    ("12", ""),
    ("13", "Anna"),
    ("13", "Zoltan Wick"),
    ("13", "Kim Lee"),
    ("21", "Ove Quay"),
    ("22", "n/a"),
)
HEADER = "written,site,person,score,suggestion\n"
WRITTEN = ("lee", "kim", "moor", "berg", "beatrix", "sallt", "anna", "quay", "zoltan", "wick")


@dataclass(frozen=True)
class Toy:
    """A small study on disk, read with one call."""

    folder: Path
    rows: Sequence[tuple[str, str]] = ROWS
    roster: tuple[RosterEntry, ...] = ROSTER
    answered: frozenset[str] | None = None
    leave_out: frozenset[str] = frozenset()
    ties: str = "directed"
    cap: str = ""
    aliases: str = "written\tperson\n"
    decisions: str = ""
    free_time: Sequence[tuple[str, str]] | None = None

    def read(self) -> tuple[SocialReading, list[Fault]]:
        files = {"advice": self.rows} | ({"free": self.free_time} if self.free_time is not None else {})
        asks = "".join(
            f"    {name}: {{asks: whom?, file: {name}.tsv, layout: long, chooser: by, chosen: names, "
            f"ties: {self.ties}{self.cap}}}\n"
            for name in files
        )
        (self.folder / "study.yaml").write_text(
            "socibrain: 1\nstudy: s\ntitle: t\npeople: {file: people.tsv}\nquestionnaire:\n"
            f"  aliases: aliases.tsv\n  questions:\n{asks}",
            encoding="utf-8",
        )
        for name, rows in files.items():
            text = "".join(f"{by}\t{named}\n" for by, named in rows)
            (self.folder / f"{name}.tsv").write_text("by\tnames\n" + text, encoding="utf-8")
        (self.folder / "aliases.tsv").write_text(self.aliases, encoding="utf-8")
        if self.decisions:
            (self.folder / "private").mkdir(exist_ok=True)
            (self.folder / DECISIONS).write_text(self.decisions, encoding="utf-8")
        study, faults = read_study(self.folder / "study.yaml"), Faults()
        answers = [found for name in files if (found := read_answers(study, name, faults)) is not None]
        reading = build_social_networks(
            study,
            self.roster,
            answers,
            faults,
            answered=self.answered,
            roles={"007": "deck", "NA": None},
            names=read_names(study, self.roster, faults),
            leave_out=self.leave_out,
        )
        return reading, list(faults)


@pytest.fixture
def toy(tmp_path: Path) -> Toy:
    return Toy(tmp_path)


def edges(reading: SocialReading, site: str = "north", question: str = "advice") -> set[tuple[str, str]]:
    network = next(n for n in reading.networks if (n.site, n.question) == (site, question))
    return {(network.people[i], network.people[j]) for i, j in np.argwhere(network.named)}


def account(reading: SocialReading, person: str) -> dict[str, object]:
    row = reading.tally[reading.tally["person"] == person].iloc[0]
    return {name: value for name, value in row.items() if not (value is not pd.NA and value == 0)}


def of_kind(faults: list[Fault], kind: str) -> list[str]:
    return [fault.where for fault in faults if fault.kind == kind]


def test_hand_worked_sites(toy: Toy) -> None:
    reading, _ = toy.read()
    north, south = reading.networks
    assert (north.site, north.question, north.rule) == ("north", "advice", "directed")
    assert north.people == ("007", "12", "13", "14", "NA")
    assert north.roles == ("deck", None, None, None, None)
    assert north.answered.tolist() == [True, True, True, False, True]
    assert edges(reading) == {("007", "NA"), ("007", "12"), ("NA", "007"), ("13", "NA")}
    assert south.people == ("21", "22")
    assert edges(reading, "south") == {("21", "22")}
    assert not north.named.flags.writeable
    assert not north.answered.flags.writeable


def test_hand_worked_accounts(toy: Toy) -> None:
    reading, _ = toy.read()
    where = {"question": "advice", "site": "north"}
    assert account(reading, "007") == where | {
        "person": "007", "state": "answered", "written": 5, "resolved": 2, "duplicate": 1, "self": 1,
        "unresolved": 1, "over_cap": pd.NA, "at_cap": pd.NA,
    }  # fmt: skip
    assert account(reading, "13") == where | {
        "person": "13", "state": "answered", "written": 3, "resolved": 1, "ambiguous": 1, "off_roster": 1,
        "over_cap": pd.NA, "at_cap": pd.NA,
    }  # fmt: skip
    assert account(reading, "NA")["outside_site"] == 1
    assert account(reading, "12")["state"] == "named nobody"
    silent = account(reading, "14")
    assert silent["state"] == "did not answer"
    assert silent["written"] is pd.NA  # unknown, not zero


def test_accounts_add_up(toy: Toy) -> None:
    reading, _ = toy.read()
    spoke = reading.tally[reading.tally["state"] != "did not answer"]
    fates = spoke[[fate.replace(" ", "_") for fate in FATES]].sum(axis=1)
    assert spoke["written"].sum() == sum(1 for _, text in ROWS if text not in ("", "n/a"))
    assert (fates == spoke["written"]).all()
    network_out = {
        person: int(row.sum())
        for network in reading.networks
        for person, row in zip(network.people, network.named, strict=True)
    }
    assert dict(zip(spoke["person"], spoke["resolved"], strict=True)).items() <= network_out.items()


def test_every_oddity_is_on_record_by_line(toy: Toy) -> None:
    _, faults = toy.read()
    assert {fault.kind: fault.where for fault in faults} == {
        "named-duplicate": "advice.tsv:line 4, column names",
        "named-self": "advice.tsv:line 5, column names",
        "named-unresolved": "advice.tsv:line 6, column names",
        "named-outside-site": "advice.tsv:line 8, column names",
        "named-ambiguous": "advice.tsv:line 10, column names",
        "named-off-roster": "advice.tsv:line 11, column names",
        "empty-rows": "advice.tsv",
    }
    assert not any(fault.grave for fault in faults)


def test_no_fault_holds_a_written_name(toy: Toy) -> None:
    status = frozenset({"007", "14", "22"})
    busy = replace(toy, answered=status, cap=", cap: 2", rows=(*ROWS, ("Beatrix Sallt", "Zoltan Wick")))
    _, faults = busy.read()
    kinds = {fault.kind for fault in faults}
    assert {"unknown-chooser", "over-cap", "answers-without-status", "gave-nothing", "named-self"} <= kinds
    for fault in faults:
        assert not any(part in str(fault).casefold() for part in WRITTEN), fault


def test_where_to_decide_is_said_with_the_command_that_lists_the_names(toy: Toy) -> None:
    _, faults = toy.read()
    mends = [fault.mend for fault in faults if fault.kind == "named-ambiguous"]
    assert mends == [f"decide in {DECISIONS} (`socibrain audit` writes the list), or correct the answers"]


def test_only_a_human_turns_a_misspelling_into_a_tie(toy: Toy) -> None:
    before, _ = toy.read()
    study = read_study(toy.folder / "study.yaml")
    assert [(name.written, name.candidates) for name in before.open_names] == [
        ("Anna", ("007", "14")),
        ("Beatrix Sallt", ("13",)),
        ("Zoltan Wick", ()),
    ]
    assert write_suggestions(study, before.open_names, Faults()) == 3
    undecided, _ = toy.read()
    assert edges(undecided) == edges(before)
    text = (toy.folder / DECISIONS).read_text(encoding="utf-8")
    text = text.replace("Beatrix Sallt,north,", "Beatrix Sallt,north,13").replace(
        "Zoltan Wick,north,", "Zoltan Wick,north,nobody"
    )
    decided, faults = replace(toy, decisions=text).read()
    assert edges(decided) == edges(before) | {("007", "13")}
    assert [name.written for name in decided.open_names] == ["Anna"]
    assert of_kind(faults, "named-off-roster") == []  # a human said so: nothing left to do
    assert account(decided, "13")["off_roster"] == 1
    assert write_suggestions(study, decided.open_names, Faults()) == 0


def test_an_alias_is_a_tie(toy: Toy) -> None:
    reading, _ = replace(toy, rows=(("12", "Bea"),), aliases="written\tperson\nbea\t13\n").read()
    assert edges(reading) == {("12", "13")}


def test_status_decides_who_answered(toy: Toy) -> None:
    status = frozenset({"007", "12", "13", "14", "21", "22"})  # 14 without a row, NA with rows
    reading, faults = replace(toy, answered=status).read()
    assert reading.networks[0].answered.tolist() == [True, True, True, True, False]
    assert edges(reading) == {("007", "NA"), ("007", "12"), ("13", "NA")}
    assert account(reading, "14")["state"] == "named nobody"
    aside = account(reading, "NA")
    assert (aside["state"], aside["set_aside"], aside["written"]) == ("did not answer", 2, pd.NA)
    assert of_kind(faults, "answers-without-status") == ["advice.tsv:line 7"]
    assert of_kind(faults, "gave-nothing") == ["advice.tsv:line 9", "advice.tsv:line 14"]
    assert [fault.found for fault in faults if fault.grave] == [
        "'14' answered by the status table and has no row"
    ]


def test_without_status_each_question_speaks_for_itself(toy: Toy) -> None:
    reading, faults = replace(toy, free_time=(("14", "Jo Moor"), ("007", ""))).read()
    states = reading.tally.set_index(["question", "person"])["state"]
    assert states["free", "14"] == "answered"
    assert states["advice", "14"] == "did not answer"
    assert states["free", "007"] == "named nobody"
    assert of_kind(faults, "no-row") == ["advice.tsv", *["free.tsv"] * 5]


def test_empty_rows_without_a_status_are_counted_in_one_remark(toy: Toy) -> None:
    _, faults = toy.read()
    (fault,) = [fault for fault in faults if fault.kind == "empty-rows"]
    assert fault.found == (
        "2 people have a row and named nobody, and no `answered:` says whether they answered; "
        "counted as having answered and named nobody: 12, 22"
    )
    assert not fault.grave
    _, alone = replace(toy, rows=(("NA", "Jo Moor"), ("12", ""))).read()
    assert any(fault.found.startswith("1 person has a row and named nobody") for fault in alone)
    _, decided = replace(toy, answered=frozenset({"007", "12", "NA", "13", "21", "22"})).read()
    assert of_kind(decided, "empty-rows") == []


def test_more_names_than_the_cap_are_kept_and_noted(toy: Toy) -> None:
    reading, faults = replace(toy, cap=", cap: 3").read()
    assert of_kind(faults, "over-cap") == ["advice.tsv:line 5"]
    tally = reading.tally.set_index("person")
    assert (tally.at["007", "over_cap"], tally.at["007", "at_cap"]) == (2, True)
    assert (tally.at["13", "over_cap"], tally.at["13", "at_cap"]) == (0, True)
    assert not tally.at["NA", "at_cap"]
    assert tally.at["14", "at_cap"] is pd.NA
    assert ("007", "12") in edges(reading)


def test_people_left_out_leave_no_trace_but_are_recognised(toy: Toy) -> None:
    reading, faults = replace(toy, leave_out=frozenset({"12", "13", "21", "22"})).read()
    assert [network.people for network in reading.networks] == [("007", "14", "NA")]
    assert edges(reading) == {("007", "NA"), ("NA", "007")}
    assert account(reading, "007")["left_out"] == 2
    assert set(reading.tally["person"]) == {"007", "14", "NA"}
    assert "unknown-chooser" not in {fault.kind for fault in faults}


def test_an_unknown_chooser_is_grave(toy: Toy) -> None:
    _, faults = replace(toy, rows=(("7", "Kim Lee"), ("99", ""), ("99", "Kim Lee"))).read()
    strangers = [fault for fault in faults if fault.kind == "unknown-chooser"]
    assert [(fault.where, fault.grave) for fault in strangers] == [
        ("advice.tsv:line 2", True),
        ("advice.tsv:line 3", True),
    ]
    assert strangers[0].mend == "did you mean '007'?"


def test_an_unreadable_roster_brings_forth_no_other_fault(toy: Toy) -> None:
    aliases = "written\tperson\nbea\t13\n"
    reading, faults = replace(toy, roster=(), aliases=aliases, decisions=f"{HEADER}Anna,,14,,\n").read()
    assert (reading.networks, faults) == ((), [])


@pytest.mark.parametrize(("ties", "sites"), [("either", ["south"]), ("both", ["north", "south"])])
def test_a_site_without_usable_ties_is_noted(toy: Toy, ties: str, sites: list[str]) -> None:
    _, faults = replace(toy, ties=ties, rows=(("007", "Kim Lee"), ("21", ""))).read()
    found = [fault.found for fault in faults if fault.kind == "no-ties"]
    assert [site for site in ("north", "south") if any(f"'{site}'" in text for text in found)] == sites


def test_wide_answers_are_noted_once_per_line(tmp_path: Path) -> None:
    (tmp_path / "study.yaml").write_text(
        "socibrain: 1\nstudy: s\ntitle: t\npeople: {file: people.tsv}\nquestionnaire: {questions: {advice: "
        "{asks: whom?, file: w.tsv, layout: wide, chooser: by, chosen: 'f_*', ties: directed, cap: 3}}}\n",
        encoding="utf-8",
    )
    text = "by\tf_1\tf_2\tf_3\tf_4\n007\t12\tNA\t12\tJo Moor\n"
    (tmp_path / "w.tsv").write_text(text, encoding="utf-8")
    study, faults = read_study(tmp_path / "study.yaml"), Faults()
    answers = read_answers(study, "advice", faults)
    assert answers is not None
    names = read_names(study, ROSTER, faults)
    reading = build_social_networks(study, ROSTER, [answers], faults, answered=None, roles={}, names=names)
    assert edges(reading) == {("007", "12"), ("007", "NA")}
    assert of_kind(list(faults), "named-duplicate") == ["w.tsv:line 2, columns f_3, f_4"]
    assert of_kind(list(faults), "over-cap") == ["w.tsv:line 2"]


def test_row_order_does_not_matter(toy: Toy) -> None:
    before, _ = toy.read()
    for draw in range(5):
        rng = stream(1, "row order", draw)
        rows = [ROWS[i] for i in rng.permutation(len(ROWS))]
        roster = tuple(ROSTER[i] for i in rng.permutation(len(ROSTER)))
        after, _ = replace(toy, rows=rows, roster=roster).read()
        pd.testing.assert_frame_equal(after.tally, before.tally)
        assert after.open_names == before.open_names
        for one, other in zip(after.networks, before.networks, strict=True):
            assert one.people == other.people
            assert np.array_equal(one.named, other.named)


def test_new_ids_move_the_people_and_nothing_else(toy: Toy) -> None:
    before, _ = toy.read()
    new = {entry.person: f"p{number}" for number, entry in enumerate(reversed(ROSTER))}
    after, _ = replace(
        toy,
        rows=[(new[by], new.get(text, text)) for by, text in ROWS],
        roster=tuple(replace(entry, person=new[entry.person]) for entry in ROSTER),
    ).read()
    for site in ("north", "south"):
        assert edges(after, site) == {(new[one], new[other]) for one, other in edges(before, site)}
    counts = before.tally.assign(person=[new[p] for p in before.tally["person"]]).set_index("person")
    theirs = after.tally.set_index("person").sort_index()
    pd.testing.assert_frame_equal(counts.sort_index(), theirs, check_index_type=False)
