"""Invented words: places, people and regions that stand for nothing real."""

from __future__ import annotations

import numpy as np
from rapidfuzz.distance import Levenshtein

from socibrain.streams import stream

COAST = "Ellowrey coast"
STATIONS = {
    "Orrowen": 18,
    "Skelmarra": 20,
    "Vantrevay": 22,
    "Quillorn": 23,
    "Hestermoy": 24,
    "Brevolk": 25,
    "Dunnareth": 26,
    "Mirrowick": 27,
    "Ashvoren": 28,
    "Pellanthy": 30,
    "Corvarrow": 33,
    "Lundrevey": 34,
}
"""Station and number of crew."""

OUTSIDERS = ("my brother-in-law", "the harbour office", "the woman at the chandlery", "a fisherman I know",
             "nobody here, the doctor", "the old coxswain's widow", "my neighbour")  # fmt: skip
"""Answers that mean nobody on any roster."""

SYSTEMS = ("dovra", "kelm", "irvo", "prenna", "quor", "sabeth", "tulk", "wexin")
REGIONS_IN_SYSTEM = 10

_GIVEN_START = (
    "Vek Orv Tazh Lirv Mob Sulb Kazh Brev Olk Juv Fenj Rikh Darv Ostr Yesh Pelv Wimb Zunt Hulv Nevk"
)
_GIVEN_END = "a o esh im ul ari eno ith oma uli"
_FAMILY_START = (
    "Quard Thorv Melk Grint Hask Bolv Skarn Drenn Plov Trebb Wark Yarv Cresk Fland Jorb Nolm Sprit"
)
_FAMILY_MIDDLE = "a e i o u"
_FAMILY_END = "vash lorn quill dreth mosk bant tweld rell gorth nesk"
_REGION_START = "bra cho dwe fle gri hoo jun klo lar mee nye plo rus sko tre wha yol zib"
_REGION_END = "bbet ckle dder ggan lmo mpet nkle pper rrow sket tton zzle"
FURTHEST_SLIP = 2
"""Edits by which a misspelt name differs from the right one, at most."""


def crew_names(seed: int) -> dict[str, list[str]]:
    """Written names by station; inside a station no two are easily mistaken for each other."""
    draw = stream(seed, "names")
    names: dict[str, list[str]] = {}
    used: set[str] = set()
    for station, size in STATIONS.items():
        crew: list[str] = []
        while len(crew) < size:
            given = _word(draw, _GIVEN_START, _GIVEN_END)
            name = f"{given} {_word(draw, _FAMILY_START, _FAMILY_MIDDLE, _FAMILY_END)}"
            alone = all(Levenshtein.distance(name, other) > 2 * FURTHEST_SLIP for other in crew)
            if name not in used and alone:
                crew.append(name)
                used.add(name)
        names[station] = crew
    return names


def region_names(seed: int) -> list[str]:
    """Names of all regions, system by system."""
    draw = stream(seed, "regions")
    every = [first + second for first in _REGION_START.split() for second in _REGION_END.split()]
    return [str(name) for name in draw.permutation(every)[: len(SYSTEMS) * REGIONS_IN_SYSTEM]]


def _word(draw: np.random.Generator, *parts: str) -> str:
    return "".join(str(draw.choice(part.split())) for part in parts)
