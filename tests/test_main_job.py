"""The main job on the demo cohort: planted effects are found, the null one is not, nobody is lost."""

from __future__ import annotations

import json
import shutil
from pathlib import Path

import numpy as np
import pandas as pd
import pytest

import socibrain
from demo_cohort.make import SEED
from demo_cohort.people import make_people
from demo_cohort.ties import WITHOUT_CORE, make_stations
from socibrain.cli import main
from socibrain.measures.social.at_hand import SiteAtHand
from socibrain.run.stages import Answer, report_run
from socibrain.streams import small_seed

PLAN = Path(__file__).parents[1] / "analyses" / "brokers" / "plan.yaml"
TIMED = ("run.json", "ro-crate-metadata.json")
"""Files that say when; all others hold tables."""
STUDY = PLAN.parents[2] / "demo_cohort" / "study.yaml"


@pytest.fixture(scope="module")
def run(tmp_path_factory: pytest.TempPathFactory) -> Path:
    return tmp_path_factory.mktemp("demo") / "run"


@pytest.fixture(scope="module")
def answer(run: Path) -> Answer:
    return socibrain.link(PLAN, out=run)


def row(answer: Answer, hypothesis: str) -> pd.Series:
    return answer.table.set_index("id").loc[hypothesis]


def test_the_planted_slope_is_found(answer: Answer) -> None:
    """Planted: -.3, with .1 allowed on either side in the committed files."""
    found = row(answer, "constraint_participation")
    assert found["estimate"] == pytest.approx(-0.3, abs=0.1)
    assert found["p_family"] < 0.05


def test_club_members_have_lower_modularity_as_planted(answer: Answer) -> None:
    found = row(answer, "club_modularity")
    assert found["estimate"] == pytest.approx(-0.35, abs=0.1)
    assert found["p_family"] < 0.01
    assert found["n_sites"] >= 9


@pytest.mark.parametrize("seed", [4127, 1, 2])
def test_clubs_are_clear_whatever_the_random_networks(answer: Answer, seed: int) -> None:
    """Nine at least of the ten planted circles; none where none is planted."""
    p = {
        network.site: SiteAtHand(network, small_seed(seed, "social", network.question, network.site)).club.p
        for network in answer.cohort.social
        if network.question == "advice"
    }
    bare = [p.pop(station) for station in WITHOUT_CORE]
    assert min(bare) > 0.2
    assert sum(each <= 0.01 for each in p.values()) >= 9
    assert len(p) == 10


def test_club_members_are_the_planted_circle(answer: Answer) -> None:
    """Among those who answered, in stations where a club is found: 19 in 20 at least as planted."""
    stations = make_stations(make_people(SEED), SEED)
    circle = {
        person.id: core
        for station in stations
        for person, core in zip(station.crew, station.core, strict=True)
    }
    found = answer.cohort.persons.drop_duplicates("person").set_index("person")["advice.rich_club_member"]
    found = found.dropna()
    planted = found.index.map(circle).to_numpy(dtype=float)
    assert (found == planted).mean() >= 0.95
    assert found[planted == 1].mean() >= 0.9


def test_what_was_not_planted_is_not_found(answer: Answer) -> None:
    found = row(answer, "betweenness_connectivity")
    assert found["p_family"] > 0.05
    assert found["ci_low"] < 0 < found["ci_high"]


def test_statsmodels_fits_the_same(answer: Answer) -> None:
    """Four digits is what its optimiser reaches on variances; slopes and t are closer."""
    assert answer.table["check_difference"].max() < 1e-4


def test_everyone_invited_is_analysed_or_accounted_for(answer: Answer, run: Path) -> None:
    ledger = pd.read_csv(run / "ledger.csv", keep_default_na=False, dtype=str)
    people = set(answer.cohort.persons["person"])
    for finding in answer.findings.findings:
        gone = ledger[ledger["stage"] == f"family {finding.hypothesis.family}"]["person"]
        assert not gone.duplicated().any()
        assert set(gone) | set(finding.people) == people
        assert not set(gone) & set(finding.people)
    assert (ledger["reason"] != "").all()


def test_position_is_read_off_the_whole_network(answer: Answer) -> None:
    """People who were never scanned have positions, and are there when others' are computed."""
    persons = answer.cohort.persons
    never_scanned = persons[persons["rest.modularity"].isna()]
    assert never_scanned["advice.constraint"].notna().sum() > 100
    for network in answer.cohort.social:
        assert len(network.people) == (persons.drop_duplicates("person")["site"] == network.site).sum()


def test_who_did_not_answer_has_no_position_and_is_still_named(answer: Answer) -> None:
    persons = answer.cohort.persons.drop_duplicates("person").set_index("person")
    silent = {
        person
        for network in answer.cohort.social
        if network.question == "advice"
        for person, spoke in zip(network.people, network.answered, strict=True)
        if not spoke
    }
    assert len(silent) == 25
    assert persons.loc[sorted(silent), "advice.constraint"].isna().all()
    assert (persons.loc[sorted(silent), "advice.in_degree"] > 0).any()


def test_every_column_of_every_table_is_in_a_dictionary(answer: Answer, run: Path) -> None:
    tables = [path for path in run.iterdir() if path.suffix in (".csv", ".parquet")]
    assert len(tables) == 8
    for path in tables:
        table = pd.read_csv(path) if path.suffix == ".csv" else pd.read_parquet(path)
        said = json.loads(path.with_suffix(".json").read_text(encoding="utf-8"))
        assert list(said) == list(table.columns), path.name
        for name, entry in said.items():
            assert entry["Description"] not in ("", name), (path.name, name)


def test_ids_survive_as_text(run: Path, answer: Answer) -> None:
    ids = {line.split(",")[0] for line in (run / "persons.csv").read_text(encoding="utf-8").splitlines()}
    assert {"sub-007", "sub-NA", "sub-1e5"} <= ids


def test_a_second_run_gives_the_same_bytes_with_another_number_of_workers(
    run: Path, answer: Answer, tmp_path: Path
) -> None:
    tables = [path for path in run.iterdir() if path.suffix in (".csv", ".json", ".parquet", ".npz")]
    before = {path.name: path.read_bytes() for path in tables if path.name not in TIMED}
    again = socibrain.link(PLAN, out=run, workers=1)
    assert again.table.equals(answer.table)
    assert {name: (run / name).read_bytes() for name in before} == before


def test_the_null_behind_every_p_is_kept(run: Path, answer: Answer) -> None:
    with np.load(run / "nulls.npz") as nulls:
        for finding in answer.findings.findings:
            null = nulls[finding.hypothesis.id]
            beyond = (np.abs(null) >= abs(finding.statistic) * (1 - 1e-9)).sum()
            assert finding.p_permutation == pytest.approx((beyond + 1) / (len(null) + 1))


def test_the_page_is_written_from_the_run(run: Path, answer: Answer) -> None:
    page = report_run(run)
    text = page.read_text(encoding="utf-8")
    assert text.count("<svg") >= 6
    assert "sub-007" not in text
    assert len(text) < 2_000_000


def copied(run: Path, name: str) -> Path:
    """The finished run in a folder beside it: paths in its record hold there too."""
    return Path(shutil.copytree(run, run.parent / name))


def refused(run: Path, capsys: pytest.CaptureFixture[str]) -> str:
    before = {path.name: path.read_bytes() for path in run.iterdir() if path.is_file()}
    with pytest.raises(SystemExit) as left:
        main(["report", str(run)])
    assert left.value.code == 6
    assert {path.name: path.read_bytes() for path in run.iterdir() if path.is_file()} == before
    return capsys.readouterr().err


def test_a_run_whose_inputs_changed_is_refused(
    answer: Answer, run: Path, capsys: pytest.CaptureFixture[str]
) -> None:
    changed = copied(run, "changed")
    record = json.loads((changed / "run.json").read_text(encoding="utf-8"))
    record["inputs"]["roster.tsv"] = "0" * 64
    (changed / "run.json").write_text(json.dumps(record), encoding="utf-8")
    told = refused(changed, capsys)
    assert "roster.tsv  is not what" in told
    assert told.count("is not what") == 1


def test_a_run_that_had_other_inputs_is_refused(
    answer: Answer, run: Path, capsys: pytest.CaptureFixture[str]
) -> None:
    """As when a matrix came in, or names were decided, after the plan was answered."""
    fewer = copied(run, "fewer")
    record = json.loads((fewer / "run.json").read_text(encoding="utf-8"))
    del record["inputs"]["aliases.tsv"]
    (fewer / "run.json").write_text(json.dumps(record), encoding="utf-8")
    assert "aliases.tsv  was not there when" in refused(fewer, capsys)


def test_decisions_count_once_they_are_made(
    tmp_path: Path, answer: Answer, capsys: pytest.CaptureFixture[str]
) -> None:
    """Names that wait in the list change nothing; a decision does."""
    for name in ("demo_cohort", "analyses"):
        shutil.copytree(STUDY.parents[1] / name, tmp_path / name, ignore=shutil.ignore_patterns("private"))
    plan, run = tmp_path / "analyses" / "brokers" / "plan.yaml", tmp_path / "run"
    study = tmp_path / "demo_cohort" / "study.yaml"
    study.write_text(study.read_text(encoding="utf-8").replace("restarts: 50", "restarts: 2"))
    socibrain.link(plan, out=run)
    socibrain.audit(study, out=tmp_path / "audit")
    assert report_run(run).is_file()
    waiting = tmp_path / "demo_cohort" / "private" / "decisions.csv"
    first, row, *rest = waiting.read_text(encoding="utf-8").splitlines()
    written, site, _, score, suggestion = row.split(",")
    decided = ",".join([written, site, "nobody", score, suggestion])
    waiting.write_text("\n".join([first, decided, *rest]) + "\n", encoding="utf-8")
    assert "holds other decisions than when" in refused(run, capsys)
