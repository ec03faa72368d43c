"""Input that is odd, half there or hostile: read rightly, or refused plainly; never lost silently."""

from __future__ import annotations

import os
import shutil
from pathlib import Path

import numpy as np
import pandas as pd
import pytest

from socibrain.run import stages
from tests.broken_study import EVERYONE, STATUS, Break, added, assert_told, cell, changed, gone
from tests.made_study import SITES, MadeStudy, call, ids, make_study

TABLES = ("people.tsv", "roster.tsv", "advice.tsv", "regions.tsv")


@pytest.fixture
def study(tmp_path: Path) -> MadeStudy:
    return make_study(tmp_path / "study")


@pytest.fixture(scope="module")
def plain(tmp_path_factory: pytest.TempPathFactory) -> pd.DataFrame:
    """Persons of the study as it is."""
    study = make_study(tmp_path_factory.mktemp("plain") / "study")
    assert study.run("measure").code == 0
    return persons(study)


def persons(study: MadeStudy) -> pd.DataFrame:
    return table(study, "persons").set_index("person")


def table(study: MadeStudy, name: str) -> pd.DataFrame:
    return pd.read_csv(study.out / f"{name}.csv", na_values="n/a", keep_default_na=False)


def section(study: MadeStudy, start: str, end: str | None) -> None:
    """Take the part of the study file from one entry to another out."""
    text = study.text("study.yaml")
    first = text.index(f"\n{start}:") + 1
    last = len(text) if end is None else text.index(f"\n{end}:") + 1
    study.write("study.yaml", text[:first] + text[last:])


@pytest.mark.parametrize(
    ("ending", "head"), [("\r\n", b""), ("\r", b""), ("\n", b"\xef\xbb\xbf")], ids=["CRLF", "CR", "BOM"]
)
def test_line_ends_and_marks_do_not_matter(
    study: MadeStudy, plain: pd.DataFrame, ending: str, head: bytes
) -> None:
    documents = ("study.yaml",) if ending != "\r" else ()
    for file in (*TABLES, *documents, *(f"brain/{person}.tsv" for person in EVERYONE)):
        study.write(file, head + study.text(file).replace("\n", ending).encode())
    assert study.run("measure").code == 0
    pd.testing.assert_frame_equal(persons(study), plain)


@pytest.mark.parametrize(
    ("file", "content", "where", "what"),
    [
        ("roster.tsv", lambda text: text.replace("Name N01", "Åsa").encode("latin-1"), "line 2", "UTF-8"),
        ("people.tsv", lambda text: text.encode("utf-16"), "line 1", "UTF-8"),
        ("people.tsv", lambda text: b"PK\x03\x04\xff\x00 a spreadsheet", "line 1", "UTF-8"),
        ("people.tsv", lambda text: text.replace("n03", "n\x0003").encode(), "line 4", "cannot hold"),
        ("people.tsv", lambda text: text.replace("\t", ",").encode(), "line 1", "a comma in it"),
        ("people.tsv", lambda text: text.splitlines()[0].encode(), "", "has a header and no rows"),
        ("roster.tsv", lambda text: text.splitlines()[0].encode(), "", "has a header and no rows"),
        ("advice.tsv", lambda text: b"", "", "is empty"),
        ("brain/n01.tsv", lambda text: text.encode("utf-16"), "line 1", "UTF-8"),
    ],
)
def test_files_that_are_no_table(study: MadeStudy, file: str, content, where: str, what: str) -> None:
    study.write(file, content(study.text(file)))
    assert_told(study.run("measure"), 4, (f"{file}:{where}" if where else file, what, ""))
    assert study.left() == []


def test_folders_where_files_should_be(study: MadeStudy) -> None:
    for file in ("regions.tsv", "brain/n01.tsv"):
        (study.folder / file).unlink()
        (study.folder / file).mkdir()
    message = ("regions.tsv; brain/n01.tsv", "cannot be read (Is a directory)", "correct the path")
    assert_told(study.run("measure"), 4, message)
    (study.folder / "study.yaml").unlink()
    (study.folder / "study.yaml").mkdir()
    where = str(study.folder / "study.yaml")
    assert_told(study.run("measure"), 3, (where, "cannot be read (Is a directory)", "check the path"))


def test_one_id_inside_another_and_letters_of_any_script(tmp_path: Path, plain: pd.DataFrame) -> None:
    study = make_study(tmp_path / "a folder [with/ß] spaces")
    new = {person: f"sub-{number}" for number, person in enumerate(EVERYONE, start=1)} | {"s12": "sub-Ωé"}
    for file in ("people.tsv", "roster.tsv", "advice.tsv"):
        rows = [line.split("\t") for line in study.text(file).splitlines()]
        study.write(file, "".join("\t".join([new.get(row[0], row[0]), *row[1:]]) + "\n" for row in rows))
    for old, name in new.items():
        (study.folder / f"brain/{old}.tsv").rename(study.folder / f"brain/{name}.tsv")
    assert study.run("measure", out=tmp_path / "[/red] out").code == 0
    found = pd.read_csv(tmp_path / "[/red] out" / "persons.csv").set_index("person")
    for column in ("rest.mean_connectivity", "advice.in_degree"):
        assert found.loc[list(new.values()), column].tolist() == plain.loc[list(new), column].tolist()


@pytest.mark.parametrize("age", ["1e400", "-2e100", "inf", "nan", "12,5", "0x1F", "1_000", "１２"])
def test_cells_that_are_no_usable_number(study: MadeStudy, age: str) -> None:
    cell("people.tsv", "age", n02=age)(study)
    message = ("people.tsv:line 3, column age", f"'{age}' is not a number", "up to 1e+100")
    assert_told(study.run("measure"), 4, message)


def test_a_site_of_one_person(study: MadeStudy) -> None:
    added("people.tsv", "z01\teast\tcrew\t30")(study)
    added("roster.tsv", "z01\teast\tZed\tyes")(study)
    added("advice.tsv", "z01\t")(study)
    study.write("brain/z01.tsv", study.text("brain/n01.tsv"))
    assert study.run("link").code == 0
    (found,) = table(study, "findings").to_dict("records")
    assert (found["n"], found["n_sites"]) == (25, 3)
    assert "1 of 3 sites have one person only" in found["notes"]


def test_where_nobody_answered_nothing_is_known(study: MadeStudy) -> None:
    """Not 0: nobody was asked there, or nobody said."""
    cell("roster.tsv", "answered", **dict.fromkeys(ids("south"), "no"))(study)
    for person in ids("south"):
        study.without("advice.tsv", person)
    assert study.run("link").code == 0
    found = persons(study)
    social = [name for name in found.columns if name.startswith("advice.")]
    assert found.loc[found["site"] == "south", social].isna().all(axis=None)
    assert found.loc[found["site"] == "north", "advice.in_degree"].notna().all()
    sites = table(study, "sites").set_index("site")
    assert sites.loc["south", [name for name in sites.columns if name.startswith("advice.")]].isna().all()
    (finding,) = table(study, "findings").to_dict("records")
    assert (finding["n"], finding["n_sites"]) == (12, 1)
    ledger = table(study, "ledger")
    left = ledger[ledger["stage"] == "family all"]
    assert set(left["person"]) == set(ids("south"))
    assert set(left["reason"]) == {"did not answer"}


def test_nobody_answered_at_all(study: MadeStudy) -> None:
    study.write("advice.tsv", "person\tasks\n")
    study.change("study.yaml", STATUS, "")
    assert study.run("audit").code == 0
    told = study.run("link")
    where = f"{study.folder / 'plan.yaml'}:8:5"
    assert_told(told, 4, (where, "nobody has all columns", "ledger.csv tells who lacks what"))


def not_scanned_yet(study: MadeStudy) -> None:
    shutil.rmtree(study.folder / "brain")
    header, *rows = study.text("people.tsv").splitlines()
    study.write("people.tsv", "\n".join([header + "\tscanned", *(row + "\tno" for row in rows)]) + "\n")
    study.change("study.yaml", "  numbers:", "  scanned: {column: scanned, values: ['yes']}\n  numbers:")


def moved_all(study: MadeStudy) -> None:
    study.write("scans.tsv", "participant_id\tmotion\n" + "".join(f"{person}\t0.9\n" for person in EVERYONE))
    rule = "exclusions: [{file: scans.tsv, column: motion, above: 0.5, because: moved}]\n"
    study.write("study.yaml", study.text("study.yaml") + rule)


@pytest.mark.parametrize(
    ("breaking", "why"), [(not_scanned_yet, "not scanned"), (moved_all, "moved")], ids=["no scan", "no use"]
)
def test_no_brain_at_all(study: MadeStudy, breaking: Break, why: str) -> None:
    """A study before its first scan can be audited and measured; its plan cannot be answered yet."""
    breaking(study)
    assert study.run("audit").code == 0
    told = study.run("link")
    assert told.code == 4
    assert "'asked' cannot be answered: nobody has all columns" in told.err
    assert persons(study)["rest.modularity"].isna().all()
    ledger = table(study, "ledger")
    assert set(ledger[ledger["stage"] == "family all"]["reason"]) == {why}
    assert len(ledger[ledger["stage"] == "family all"]) == 24


def test_two_inputs_of_which_somebody_lacks_one(study: MadeStudy) -> None:
    shutil.copytree(study.folder / "brain", study.folder / "task")
    (study.folder / "task" / "n01.tsv").unlink()
    study.put_matrix("n02", np.zeros((10, 10)))
    study.change(
        "study.yaml",
        "    communities: {restarts: 2}\n",
        "    communities: {restarts: 2}\n    dead_regions: exclude_person\n"
        "  task: {files: 'task/{person}.tsv', edges: other, negative: drop, communities: {restarts: 2}}\n",
    )
    study.change("plan.yaml", "rest.mean", "task.mean")
    other = "  - {id: b, says: b, outcome: rest.modularity, predictor: age, family: b}\n"
    study.write("plan.yaml", study.text("plan.yaml") + other)
    assert study.run("link").code == 0
    ledger = table(study, "ledger").query("person != ''").set_index(["stage", "person"])["reason"].to_dict()
    dead = ledger.pop(("passed quality in rest", "n02"))
    assert dead.startswith("dead regions without any weight: 'area0'")
    assert ledger == {
        ("passed quality in task", "n01"): "there is no network file",
        ("family all", "n01"): "there is no network file",
        ("family b", "n02"): dead,
    }


def visits(study: MadeStudy) -> None:
    study.change("study.yaml", "regions:\n", "visits: [01, 02]\nregions:\n")
    study.change("study.yaml", "brain/{person}.tsv", "brain/{person}_{visit}.tsv")
    for person in EVERYONE:
        (study.folder / f"brain/{person}.tsv").rename(study.folder / f"brain/{person}_01.tsv")


def test_visits_keep_their_zeros(study: MadeStudy) -> None:
    visits(study)
    study.change("plan.yaml", "seed: 1", "seed: 1\nvisit: 1")
    where = f"{study.folder / 'plan.yaml'}:6:1"
    assert_told(study.run("link"), 3, (where, "the study has no visit '1'", "its visits: 01, 02"))
    study.change("plan.yaml", "visit: 1", "visit: 01")
    assert study.run("link").code == 0
    assert '\n"n01",' not in (study.out / "persons.csv").read_text()
    assert "\nn01,01,north," in (study.out / "persons.csv").read_text()


def no_site(study: MadeStudy) -> None:
    study.change("study.yaml", "  site: site\n  role", "  role")
    study.change("study.yaml", "  name: name\n  site: site", "  name: name")
    for file in ("people.tsv", "roster.tsv"):
        study.write(file, study.text(file).replace("\tsite", "\tplace", 1))


def no_roster(study: MadeStudy) -> None:
    section(study, "roster", "questionnaire")
    for site in SITES:
        study.write("advice.tsv", study.text("advice.tsv").replace(f"Name {site[0].upper()}", site[0]))


def no_role(study: MadeStudy) -> None:
    cell("people.tsv", "role", **dict.fromkeys(EVERYONE, "n/a"))(study)


@pytest.mark.parametrize(
    ("without", "n_sites"),
    [
        (no_site, 1),
        (no_roster, 2),
        (no_role, 2),
        (changed("study.yaml", STATUS, ""), 2),
        (lambda study: section(study, "regions", None), 2),
    ],
    ids=["sites", "roster", "roles", "status", "regions"],
)
def test_a_study_need_not_have_everything(study: MadeStudy, without: Break, n_sites: int) -> None:
    without(study)
    told = study.run("link")
    assert told.code == 0, told.err
    (found,) = table(study, "findings").to_dict("records")
    assert (found["n"], found["n_sites"]) == (24, n_sites)


def social_only(study: MadeStudy) -> None:
    section(study, "brain", None)
    study.change("plan.yaml", "rest.mean_connectivity", "advice.betweenness")


def brain_only(study: MadeStudy) -> None:
    section(study, "roster", "brain")
    study.change("plan.yaml", "advice.in_degree", "rest.modularity")


@pytest.mark.parametrize("side", [social_only, brain_only])
def test_one_side_is_a_study_too(study: MadeStudy, side: Break) -> None:
    side(study)
    for command in ("audit", "measure", "link"):
        told = study.run(command)
        assert told.code == 0, told.err
    told = call("report", str(study.out), "--workers", "1")
    assert told.code == 0, told.err
    assert "n01" not in (study.out / "report.html").read_text(encoding="utf-8")


def test_a_column_called_like_a_measure(study: MadeStudy) -> None:
    study.write("people.tsv", study.text("people.tsv").replace("\trole", "\tadvice.in_degree", 1))
    study.change("study.yaml", "  role: role\n", "")
    what = "column 'advice.in_degree' is called like a measure of 'advice'"
    assert_told(study.run("measure"), 4, ("people.tsv:line 1", what, "rename the column"))


def test_regions_in_another_order_under_names_that_mostly_fit(study: MadeStudy) -> None:
    names = ["AREA0", "area1", "area3", "area2", *(f"area{number}" for number in range(4, 10))]
    study.write("brain/n01.tsv", "\t".join(names) + "\n" + study.text("brain/n01.tsv"))
    what = "region 'area3' stands where the region table has 'area2'"
    assert_told(study.run("measure"), 4, ("brain/n01.tsv:row 3", what, "the same order"))


def test_names_that_wait_are_not_lost_when_they_cannot_be_written(study: MadeStudy) -> None:
    first = study.text("advice.tsv").splitlines()[1]
    study.write("advice.tsv", study.text("advice.tsv").replace(first, "n01\tSomebody Else", 1))
    (study.folder / "private").write_text("in the way")
    told = study.run("audit")
    assert_told(told, 4, ("private/decisions.csv", "cannot be written (File exists)", "writable"))
    assert "Somebody" not in told.err


def test_a_missing_matrix_named_almost_right_is_pointed_out(study: MadeStudy) -> None:
    (study.folder / "brain/n03.tsv").rename(study.folder / "brain/N3.tsv")
    message = ("brain/N3.tsv", "the people table has no 'N3'", "is it 'n03'?")
    assert_told(study.run("measure"), 4, message)


def test_a_file_name_that_is_no_text(study: MadeStudy) -> None:
    try:
        (study.folder / "brain" / os.fsdecode(b"\xff.tsv")).write_text("1")
    except OSError:
        pytest.skip("this file system knows text only")
    told = study.run("audit")
    assert told.code == 4
    assert "the people table has no '\\udcff'" in told.err


def test_tables_whose_columns_would_be_called_alike(study: MadeStudy) -> None:
    rule = "  - {file: FILE, column: motion, above: 0.5, because: moved}\n"
    rules = [rule.replace("FILE", file) for file in ("a/scans.tsv", "b/scans.tsv", "rest.tsv")]
    study.write("study.yaml", study.text("study.yaml") + "exclusions:\n" + "".join(rules))
    end = "in our tables"
    assert_told(
        study.run("measure"),
        3,
        (
            f"{study.folder / 'study.yaml'}:37:6",
            f"exclusions[1].file: two things would be called 'scans.…' {end}",
            "",
        ),
        (
            f"{study.folder / 'study.yaml'}:38:6",
            f"exclusions[2].file: two things would be called 'rest.…' {end}",
            "",
        ),
    )


def test_stopping_by_hand(study: MadeStudy, monkeypatch: pytest.MonkeyPatch) -> None:
    def stop(*_: object, **__: object) -> None:
        raise KeyboardInterrupt

    monkeypatch.setattr(stages, "measure_study", stop)
    told = study.run("measure")
    assert told.code == 130
    assert "finished work is kept" in told.err
    assert study.left() == []


def test_missing_files_of_a_run_are_noticed_by_the_report(study: MadeStudy) -> None:
    assert study.run("link").code == 0
    gone("brain/n01.tsv")(study)
    told = call("report", str(study.out))
    where = str(study.folder / "brain/n01.tsv")
    assert_told(told, 6, (where, "is not what", "socibrain link"))
