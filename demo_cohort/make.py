"""Makes every file of the demo cohort anew, the same bytes each time: python -m demo_cohort.make"""

from __future__ import annotations

import argparse
import json
from collections.abc import Iterable, Sequence
from pathlib import Path

import numpy as np

from demo_cohort.answers import write_answers
from demo_cohort.brains import Scan, make_scans
from demo_cohort.people import ROLES, Person, make_people
from demo_cohort.ties import CAP, Station, make_stations
from demo_cohort.words import REGIONS_IN_SYSTEM, SYSTEMS, region_names

SEED = 4127
"""Fixed before anything was made; never changed to please a result."""
HERE = Path(__file__).parent
MISSING = "n/a"
_DECIMALS = {whole: f"{whole / 1000:.3f}" for whole in range(-1000, 1001)}


def make(folder: Path) -> None:
    """Write all files into ``folder``."""
    people = make_people(SEED)
    stations = make_stations(people, SEED)
    by_id = sorted(people, key=lambda person: person.id)
    (folder / "social").mkdir(parents=True, exist_ok=True)
    (folder / "brain").mkdir(parents=True, exist_ok=True)
    for old in (folder / "brain").glob("*_relmat.tsv"):
        old.unlink()
    _table(folder / "participants.tsv", PARTICIPANT_COLUMNS, map(_participant, by_id))
    _text(folder / "participants.json", json.dumps(SIDECAR, indent=2) + "\n")
    _table(folder / "roster.tsv", ("participant_id", "written_name", "station", "answered"),
           ((p.id, p.name, p.station, _yes(p.answered)) for p in people))  # fmt: skip
    _table(folder / "aliases.tsv", ("written", "person", "site"),
           ((p.nickname, p.id, p.station) for p in people if p.nickname))  # fmt: skip
    _write_social(folder / "social", stations)
    _table(folder / "regions.tsv", ("index", "name", "system"),
           ((number + 1, name, SYSTEMS[number // REGIONS_IN_SYSTEM])
            for number, name in enumerate(region_names(SEED))))  # fmt: skip
    scans = [_write_scan(folder / "brain", scan) for scan in make_scans(stations, SEED)]
    _table(folder / "scans.tsv", ("participant_id", "visit", "mean_framewise_displacement"), scans)


def _write_social(folder: Path, stations: list[Station]) -> None:
    advice = write_answers(stations, "advice", SEED)
    company = write_answers(stations, "free_time", SEED)
    rows = [(chooser, text) for chooser in sorted(advice) for text in advice[chooser] or [MISSING]]
    _table(folder / "advice.tsv", ("participant_id", "turns_to"), rows)
    wide = [
        (chooser, *company[chooser], *[MISSING] * (CAP - len(company[chooser])))
        for chooser in sorted(company)
    ]
    columns = ("participant_id", *(f"companion_{place}" for place in range(1, CAP + 1)))
    _table(folder / "free_time.tsv", columns, wide)


def _write_scan(folder: Path, scan: Scan) -> tuple[str, str, str]:
    whole = np.rint(scan.weights * 1000).astype(int).tolist()
    name = f"{scan.person}_ses-{scan.visit}_task-rest_seg-invented80_relmat.tsv"
    _table(folder / name, None, ([_DECIMALS[value] for value in row] for row in whole))
    return scan.person, scan.visit, f"{scan.motion:.3f}"


PARTICIPANT_COLUMNS = (
    "participant_id", "age", "sex", "station", "role", "years_of_service", "invited", "scanned",
)  # fmt: skip
SIDECAR = {
    "age": {"Description": "Age when the questionnaire was answered", "Units": "year"},
    "sex": {"Description": "Sex as recorded at the station", "Levels": {"F": "female", "M": "male"}},
    "station": {"Description": "Lifeboat station whose crew the person belongs to"},
    "role": {
        "Description": "What the person does in the crew",
        "Levels": dict(
            zip(
                ROLES,
                ("steers the boat", "keeps the engines", "finds the way", "works on deck", "works ashore"),
                strict=True,
            )
        ),
    },
    "years_of_service": {"Description": "Years in any lifeboat crew", "Units": "year"},
    "invited": {
        "Description": "Whether the person was invited to the scanner",
        "Levels": {"yes": "yes", "no": "no"},
    },
    "scanned": {
        "Description": "Whether the person was scanned at least once",
        "Levels": {"yes": "yes", "no": "no"},
    },
}


def _participant(person: Person) -> tuple[object, ...]:
    age = person.age if person.age_known else MISSING
    return (
        person.id, age, person.sex, person.station, person.role, person.years,
        _yes(person.invited), _yes(person.scanned),
    )  # fmt: skip


def _yes(fact: bool) -> str:
    return "yes" if fact else "no"


def _table(path: Path, columns: Sequence[str] | None, rows: Iterable[Sequence[object]]) -> None:
    lines = ["\t".join(columns)] if columns else []
    lines += ["\t".join(map(str, row)) for row in rows]
    _text(path, "\n".join(lines) + "\n")


def _text(path: Path, text: str) -> None:
    path.write_bytes(text.encode())


if __name__ == "__main__":
    parser = argparse.ArgumentParser(description=__doc__)
    parser.add_argument(
        "--out", type=Path, default=HERE, help="folder to write into (default: beside this file)"
    )
    make(parser.parse_args().out)
