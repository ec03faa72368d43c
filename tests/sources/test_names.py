"""Written names: the certain ones are resolved, all others wait for a human."""

from __future__ import annotations

from collections.abc import Callable
from pathlib import Path

import pytest

from socibrain.errors import Fault, Faults
from socibrain.sources.decisions import DECISIONS, OpenName, write_suggestions
from socibrain.sources.names import NameBook, Resolution, name_book, read_names
from socibrain.sources.records import RosterEntry
from socibrain.sources.spelling import name_key
from socibrain.sources.study import Study, read_study

ROSTER = (
    RosterEntry("007", "north", "Änna Berg"),
    RosterEntry("NA", "north", "Kim Lee"),
    RosterEntry("12", "north", "Jürgen O'Brien-Moor"),
    RosterEntry("13", "north", "Beatrix Salt"),
    RosterEntry("14", "north", "Anna Holt"),
    RosterEntry("21", "south", "Kim Lee"),
    RosterEntry("22", "south", "Beatrix Marsh"),
    RosterEntry("23", "south", "Lee Kim"),
    RosterEntry("24", "south", "Marlon Quay"),
)
Names = Callable[..., tuple[NameBook, list[Fault]]]


@pytest.fixture
def study(tmp_path: Path) -> Study:
    (tmp_path / "study.yaml").write_text(
        "socibrain: 1\nstudy: s\ntitle: t\npeople: {file: people.tsv}\n"
        "questionnaire: {aliases: aliases.tsv, questions: {advice: {asks: whom?, file: a.tsv, layout: long, "
        "chooser: by, chosen: names, ties: directed}}}\n",
        encoding="utf-8",
    )
    return read_study(tmp_path / "study.yaml")


@pytest.fixture
def names(study: Study) -> Names:
    def reader(aliases: str = "written\tperson\n", decisions: str | None = None) -> object:
        study.path("aliases.tsv").write_text(aliases, encoding="utf-8")
        if decisions is not None:
            study.path("private").mkdir(exist_ok=True)
            study.path(DECISIONS).write_text(decisions, encoding="utf-8")
        faults = Faults()
        return read_names(study, ROSTER, faults), list(faults)

    return reader  # type: ignore[return-value]


@pytest.mark.parametrize(
    ("written", "site", "kind", "person"),
    [
        ("007", "north", "resolved", "007"),
        ("NA", "north", "resolved", "NA"),
        ("21", "north", "outside site", "21"),
        ("anna berg", "north", "resolved", "007"),
        ("BERG,  Anna", "north", "resolved", "007"),
        ("Berg Anna", "north", "unresolved", None),  # turned round only where a comma says so
        ("jurgen obrien moor", "north", "resolved", "12"),
        ("Ju\u0308rgen O’Brien–Moor", "north", "resolved", "12"),
        ("Kim Lee", "north", "resolved", "NA"),  # the writer's own site comes first
        ("Kim Lee", "south", "resolved", "21"),
        ("Lee, Kim", "south", "resolved", "21"),
        ("Lee Kim", "south", "resolved", "23"),
        ("Marlon Quay", "north", "outside site", "24"),
        ("Zoltan Wick", "north", "off roster", None),
        ("Anna Strangeworthy", "north", "off roster", None),
        ("???", "north", "off roster", None),
    ],
)
def test_what_is_certain_is_resolved(
    names: Names, written: str, site: str, kind: str, person: str | None
) -> None:
    book, faults = names()
    found = book.resolve(written, site)
    assert (found.kind, found.person) == (kind, person)
    assert faults == []


@pytest.mark.parametrize(
    ("written", "candidate"),
    [
        ("Beatrix Sallt", "13"),
        ("Jurgen OBrian-Moor", "12"),
        ("B. Salt", "13"),
        ("Bea Salt", "13"),
        ("Berg Anna", "007"),
        ("7", "007"),
        ("na", "NA"),
    ],
)
def test_a_misspelling_stays_open_with_one_candidate(names: Names, written: str, candidate: str) -> None:
    book, _ = names()
    found = book.resolve(written, "north")
    assert (found.kind, found.person, found.candidates) == ("unresolved", None, (candidate,))
    assert 80 <= found.score <= 100


def test_two_candidates_are_never_chosen_between(names: Names) -> None:
    book, _ = names()
    found = book.resolve("Anna", "north")
    assert (found.kind, found.person, found.candidates) == ("ambiguous", None, ("007", "14"))


def test_somebody_elsewhere_and_somebody_alike_here_is_for_a_human() -> None:
    roster = (RosterEntry("1", "north", "Beatrix Marish"), RosterEntry("2", "south", "Beatrix Marsh"))
    found = name_book(roster, aliases={}, decisions={}).resolve("Beatrix Marsh", "north")
    assert (found.kind, found.person, found.candidates) == ("ambiguous", None, ("1", "2"))


def test_ids_without_names_are_never_alike_by_similarity() -> None:
    roster = tuple(RosterEntry(f"station-crew-{n:03}", "north", f"station-crew-{n:03}") for n in range(9))
    book = name_book(roster, aliases={}, decisions={})
    assert book.resolve("station-crew-101", "north") == Resolution("off roster")
    assert book.resolve("Station-Crew-4", "north").candidates == ("station-crew-004",)


def test_a_nickname_goes_through_the_alias_table_site_by_site(names: Names) -> None:
    book, faults = names("written\tperson\tsite\nBea\t13\t\nBea\t22\t\nKapitän\t12\tnorth\n")
    assert faults == []
    assert book.resolve("bea", "north").person == "13"
    assert book.resolve("Bea", "south").person == "22"
    assert book.resolve("kapitan", "north").person == "12"
    assert book.resolve("Kapitan", "south").kind == "off roster"


def test_an_alias_of_two_people_of_one_site_is_ambiguous(names: Names) -> None:
    book, _ = names("written\tperson\nBea\t13\nBea\t14\n")
    assert book.resolve("Bea", "north").candidates == ("13", "14")
    assert book.resolve("Bea", "north").person is None


def test_an_alias_of_somebody_elsewhere_is_outside(names: Names) -> None:
    book, _ = names("written\tperson\nBea\t22\n")
    assert book.resolve("Bea", "north") == Resolution("outside site", "22")


@pytest.mark.parametrize(
    ("row", "kind", "says"),
    [
        ("Bea\t013\t", "unknown-person", "did you mean '13'?"),
        ("Bea\t99\t", "unknown-person", "write an id"),
        ("Bea\t13\tnrth", "unknown-site", "did you mean 'north'?"),
        ("Bea\t\t", "incomplete-alias", "both cells"),
        ("\t13\t", "incomplete-alias", "both cells"),
    ],
)
def test_alias_faults(names: Names, row: str, kind: str, says: str) -> None:
    _, faults = names(f"written\tperson\tsite\n{row}\n")
    assert [(fault.kind, fault.where, fault.grave) for fault in faults] == [
        (kind, "aliases.tsv:line 2", True)
    ]
    assert says in faults[0].mend
    assert "Bea" not in str(faults[0])


HEADER = "written,site,person,score,suggestion\n"


def test_a_decision_is_replayed_in_its_site(names: Names) -> None:
    text = f"{HEADER}Beatrix Sallt,north,13,96,13\nZoltan Wick,,nobody,,\nAnna,north,,90,007 or 14\n"
    book, faults = names(decisions=text)
    assert faults == []
    assert book.resolve("beatrix sallt", "north") == Resolution("resolved", "13", decided=True)
    assert book.resolve("Beatrix Sallt", "south").decided is False
    assert book.resolve("Zoltan Wick", "south") == Resolution("off roster", decided=True)
    assert book.resolve("Anna", "north").kind == "ambiguous"  # still empty: nothing decided


def test_a_decision_outranks_a_name_and_an_id_outranks_both(names: Names) -> None:
    book, _ = names(decisions=f"{HEADER}Anna Holt,north,007,,\n007,north,14,,\n")
    assert book.resolve("Anna Holt", "north").person == "007"
    assert book.resolve("007", "north").person == "007"


@pytest.mark.parametrize(
    ("rows", "kind", "place"),
    [
        ("Anna,north,99,,\n", "unknown-person", "line 2"),
        ("Anna,nrth,14,,\n", "unknown-site", "line 2"),
        ("Anna,north,14,,\nanna,north,007,,\n", "two-decisions", "lines 2 and 3"),
        (",north,14,,\n", "incomplete-decision", "line 2"),
        ("Anna,north\n", "ragged", "line 2"),
    ],
)
def test_decision_faults(names: Names, rows: str, kind: str, place: str) -> None:
    _, faults = names(decisions=HEADER + rows)
    assert [(fault.kind, fault.file, fault.place) for fault in faults] == [(kind, DECISIONS, place)]
    assert "anna" not in str(faults[0]).casefold()


OPEN = (
    OpenName("Beatrix, Sallt", "north", ("13",), 96.2),
    OpenName("Anna", "north", ("007", "14"), 90.0),
    OpenName("ANNA", "north", ("007", "14"), 90.0),
    OpenName("Zoltan Wick", "south", (), 0.0),
)


def test_suggestions_are_written_and_never_decided(study: Study) -> None:
    faults = Faults()
    assert write_suggestions(study, OPEN, faults) == 3  # two spellings of one text are one
    assert study.path(DECISIONS).read_text(encoding="utf-8") == (
        f'{HEADER}ANNA,north,,90,007 or 14\n"Beatrix, Sallt",north,,96,13\nZoltan Wick,south,,,\n'
    )
    assert write_suggestions(study, OPEN, faults) == 0
    assert list(faults) == []
    assert [path.name for path in study.path("private").iterdir()] == ["decisions.csv"]


def test_suggestions_leave_what_a_human_wrote_as_it_is(study: Study) -> None:
    before = "note,person,site,written\nseen by eye,nobody,,zoltan wick\nunsure,,north,Anna"
    study.path("private").mkdir()
    study.path(DECISIONS).write_text(before, encoding="utf-8")
    assert write_suggestions(study, OPEN, Faults()) == 1
    after = study.path(DECISIONS).read_text(encoding="utf-8")
    assert after == before + '\n,,north,"Beatrix, Sallt"\n'


def test_a_faulty_decision_file_is_not_touched(study: Study) -> None:
    study.path("private").mkdir()
    study.path(DECISIONS).write_text("what,who\n", encoding="utf-8")
    faults = Faults()
    assert write_suggestions(study, OPEN, faults) == 0
    assert faults.any_grave
    assert study.path(DECISIONS).read_text(encoding="utf-8") == "what,who\n"


def test_a_folder_that_cannot_be_written_is_a_fault(study: Study) -> None:
    study.path("private").write_text("a file stands where the folder should be", encoding="utf-8")
    faults = Faults()
    assert write_suggestions(study, OPEN, faults) == 0
    assert [fault.kind for fault in faults] == ["unwritable"]


def test_keys_of_other_scripts_keep_their_marks() -> None:
    assert name_key("Łukasz Øster") == "lukaszoster"
    assert name_key("が") != name_key("か")
    assert name_key("Straße") == name_key("STRASSE")
