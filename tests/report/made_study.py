"""A made-up study with its findings, for the page alone: no number here was fitted."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import replace

import numpy as np
import pandas as pd

from socibrain.cohort.table import Cohort, Column
from socibrain.link.finding import Check, Finding, Findings
from socibrain.link.hypothesis import Hypothesis
from socibrain.link.options import LinkOptions
from socibrain.networks.social import SocialNetwork
from socibrain.report.material import ReportInput

SITES = (
    "Amber Quay",
    "Birch Point",
    "Cold Harbour",
    "Dunlin Bay",
    "Ebb Ness",
    "Fallow Strand",
    "Gull Reach",
    "Heron Spit",
    "Inner Skerry",
    "Jetty Row",
    "Kelp Sound",
    "Low Light",
)
ROLES = ("deck", "engine", "helm", "shore")
SYSTEMS = ("arbour", "brook", "cairn", "delta", "esker", "fen", "glade", "heath")
NAN = float("nan")


def column(name: str, label: str, *, reading: str = "", source: str = "", says: str = "") -> Column:
    origin, _, measure = name.rpartition(".")
    return Column(
        name,
        label,
        says or f"{label}, as made up",
        "",
        reading,
        "nobody to tell",
        source,
        measure if origin else "",
        origin,
        None,
        None,
    )


COLUMNS = {
    each.name: each
    for each in (
        column("person", "person"),
        column("site", "site"),
        column("age", "Age"),
        column(
            "advice.constraint",
            "Constraint (advice)",
            source="Burt (1992)",
            reading="higher = contacts are tied to each other",
            says="How closed a person's contacts are.",
        ),
        column("advice.betweenness", "Betweenness (advice)", reading="higher = on more shortest paths"),
        column(
            "rest.mean_participation",
            "Mean participation (rest)",
            source="Guimerà & Amaral (2005)",
            reading="higher = regions tie communities together",
            says="Mean participation over regions.",
        ),
        column("rest.mean_connectivity", "Mean connectivity (rest)"),
        column("rest.modularity", "Q (rest)"),
    )
}
OPTIONS = LinkOptions(seed=20, alpha=0.05, shuffles=9999, sites="random", visit="1")


def finding(
    name: str = "brokers",
    *,
    estimate: float = -0.31,
    ci: tuple[float, float] = (-0.45, -0.17),
    p: float = 0.0004,
    p_family: float = 0.0011,
    status: str = "ok",
    reason: str = "",
    outcome: str = "rest.mean_participation",
    predictor: str = "advice.constraint",
    n: int = 168,
    n_sites: int = 12,
    exhaustive: bool = False,
    check: bool = True,
    **asked: object,
) -> Finding:
    """A finding with the numbers given and points that look like them."""
    hypothesis = Hypothesis(id=name, says=f"What {name} says.", outcome=outcome, predictor=predictor, **asked)
    rng = np.random.default_rng(len(name))
    if status in ("refused", "failed"):
        nothing = np.empty(0)
        return Finding(
            hypothesis,
            status,
            reason,
            n,
            n_sites,
            *[NAN] * 12,
            0,
            False,
            NAN,
            None,
            nothing,
            (),
            (),
            nothing,
            nothing,
        )
    x = rng.normal(size=n)
    y = estimate * x + rng.normal(scale=np.sqrt(max(1 - estimate**2, 0.1)), size=n)
    se = (ci[1] - ci[0]) / 3.92
    return Finding(
        hypothesis=hypothesis,
        status=status,
        reason=reason,
        n=n,
        n_sites=n_sites,
        estimate=estimate,
        raw_estimate=estimate * 0.04 / 0.13,
        se=se,
        ci_low=ci[0],
        ci_high=ci[1],
        statistic=estimate / se,
        df=151.3,
        contextual=0.11,
        contextual_se=0.2,
        variance_ratio=0.0 if status == "boundary" else 0.21,
        p_permutation=p,
        p_family=p_family,
        shuffles=720 if exhaustive else 9999,
        exhaustive=exhaustive,
        smallest_p=1 / 720 if exhaustive else 1e-4,
        check=Check(estimate, estimate / se, 0.2, 3.1e-7, "") if check else None,
        null=rng.normal(size=9999),
        people=tuple(f"sub-x{k:03d}" for k in range(n)),
        sites=tuple(SITES[k % n_sites] for k in range(n)),
        outcome_residual=y * 0.04,
        predictor_residual=x * 0.13,
    )


def findings(each: Sequence[Finding], *, options: LinkOptions = OPTIONS) -> Findings:
    left_out = pd.DataFrame(
        [("all", f"sub-{k:03d}", SITES[0], "no age" if k < 9 else "answers missing") for k in range(22)],
        columns=["family", "person", "site", "reason"],
    )
    return Findings(options, tuple(each), left_out, pd.DataFrame({"id": [f.hypothesis.id for f in each]}))


def typical_findings() -> Findings:
    return findings(
        [
            finding(direction="negative", role="confirmatory", adjust=("age",)),
            finding(
                "carriers",
                estimate=0.03,
                ci=(-0.12, 0.18),
                p=0.71,
                p_family=0.97,
                predictor="advice.betweenness",
                outcome="rest.mean_connectivity",
                role="confirmatory",
                status="boundary",
            ),
            finding(
                "clubs",
                status="refused",
                reason="the predictor does not vary within any site",
                n=40,
                n_sites=3,
                outcome="rest.modularity",
            ),
        ]
    )


def made_cohort(*, people: int = 300, social: bool = True, brain: bool = True) -> Cohort:
    rng = np.random.default_rng(7)
    site = np.array([SITES[k % len(SITES)] for k in range(people)])
    ids = [f"sub-{k:03d}" for k in rng.permutation(1000)[:people]]
    persons = pd.DataFrame(
        {"person": ids, "visit": "", "site": site, "role": rng.choice(ROLES, people, p=[0.4, 0.3, 0.2, 0.1])}
    )
    persons["age"] = rng.integers(18, 65, people).astype(float)
    columns = {name: each for name, each in COLUMNS.items() if not each.origin}
    networks, scanned = [], rng.random(people) < 0.55
    if social:
        columns |= {name: each for name, each in COLUMNS.items() if each.origin == "advice"}
        persons["advice.constraint"] = rng.beta(2, 4, people)
        persons["advice.betweenness"] = rng.gamma(1, 20, people)
        for name in SITES:
            here = persons[persons["site"] == name]
            networks.append(made_network(name, here, rng))
    if brain:
        columns |= {name: each for name, each in COLUMNS.items() if each.origin == "rest"}
        persons.loc[scanned, "visit"] = "1"
        for name, centre in (("mean_participation", 0.5), ("mean_connectivity", 0.2), ("modularity", 0.4)):
            persons[f"rest.{name}"] = np.where(scanned, rng.normal(centre, 0.05, people), np.nan)
    return Cohort(
        persons=persons,
        regions=made_regions(rng, persons) if brain else made_regions(rng, persons.iloc[:0]),
        sites=made_sites(persons, networks, scanned if brain else scanned & False),
        partitions=pd.DataFrame(columns=["origin", "person", "visit", "region", "community"]),
        ledger=made_ledger(persons, social=social, brain=brain),
        problems=pd.DataFrame(
            [
                ("answers.csv", f"line {k}", "unknown-name" if k < 14 else "self-named", "x", "y", False)
                for k in range(16)
            ],
            columns=["file", "place", "kind", "found", "mend", "grave"],
        ),
        flow=made_flow(social=social, brain=brain),
        columns=columns,
        social=tuple(networks),
        region_systems={f"{system}{k}": system for system in SYSTEMS for k in range(10)} if brain else {},
    )


def made_network(site: str, here: pd.DataFrame, rng: np.random.Generator) -> SocialNetwork:
    n = len(here)
    pull = rng.gamma(1.2, 1, n)
    named = rng.random((n, n)) < 0.13 * pull[None, :]
    near = np.abs(np.subtract.outer(np.arange(n), np.arange(n))) <= 2
    named |= near & (rng.random((n, n)) < 0.5)
    named[:, n - 1] = named[n - 1] = False
    np.fill_diagonal(named, False)
    answered = rng.random(n) < 0.92
    named[~answered] = False
    roles = tuple(str(role) for role in here["role"])
    return SocialNetwork(site, "advice", tuple(here["person"]), named, answered, roles, "directed")


def made_sites(persons: pd.DataFrame, networks: Sequence[SocialNetwork], scanned: np.ndarray) -> pd.DataFrame:
    rows = []
    for number, name in enumerate(persons["site"].unique()):
        here = (persons["site"] == name).to_numpy()
        row = {"site": name, "people": int(here.sum()), "with_brain": int((here & scanned).sum())}
        if networks:
            row |= {"on_roster": row["people"], "answered": int(networks[number].answered.sum())}
            row |= {"advice.site_density": float(networks[number].named.mean()), "advice.rich_club_p": 0.0123}
        rows.append(row)
    return pd.DataFrame(rows)


def made_regions(rng: np.random.Generator, persons: pd.DataFrame) -> pd.DataFrame:
    rows = [
        (person, "1", f"{system}{k}", system, float(np.clip(rng.normal(0.3 + 0.05 * place, 0.05), 0, 1)))
        for person in persons["person"].head(20)
        for place, system in enumerate(SYSTEMS)
        for k in range(10)
    ]
    table = pd.DataFrame(rows, columns=["person", "visit", "region", "system", "rest.participation"])
    visit = dict(zip(persons["person"], persons["visit"], strict=True))
    return table[[visit[person] == "1" for person in table["person"]]].reset_index(drop=True)


def made_ledger(persons: pd.DataFrame, *, social: bool, brain: bool) -> pd.DataFrame:
    ids, rows = list(persons["person"]), []
    if social:
        rows += [("answered", "social", person, "x", "", "did not answer") for person in ids[:20]]
        rows += [("answered", "social", person, "x", "", "asked to be left out") for person in ids[20:24]]
        rows += [
            ("with usable ties", "social", person, "x", "", "no tie under the tie rule")
            for person in ids[24:27]
        ]
        rows += [("advice.constraint", "social", "", "Low Light", "", "the curve shows no club")]
    if brain:
        rows += [
            ("passed quality", "brain", person, "x", "", "head motion above 0.3 mm") for person in ids[30:39]
        ]
        rows += [("passed quality", "brain", person, "x", "", "a dead region") for person in ids[39:40]]
    return pd.DataFrame(rows, columns=["stage", "side", "person", "site", "visit", "reason"])


def made_flow(*, social: bool, brain: bool) -> pd.DataFrame:
    rows: list[tuple[object, ...]] = []
    if social:
        rows += [
            ("social", 1, "on the roster", 300, 0, ""),
            ("social", 2, "answered", 276, 24, "did not answer: 20; asked to be left out: 4"),
            ("social", 3, "with usable ties", 273, 3, "no tie under the tie rule in any question: 3"),
        ]
    if brain:
        rows += [
            ("brain", 1, "invited", 300, 0, ""),
            ("brain", 2, "scanned", 178, 122, "not scanned: 122"),
            ("brain", 3, "passed quality", 168, 10, "head motion above 0.3 mm: 9; a dead region: 1"),
        ]
    if social and brain:
        told = "only in the social branch: 121; only in the brain branch: 16"
        rows.append(("both", 1, "in both", 152, 137, told))
    return pd.DataFrame(rows, columns=["branch", "step", "label", "people", "left_out", "reasons"])


RECORD: dict[str, object] = {
    "socibrain": "0.1.0",
    "packages": {"python": "3.12.1", "numpy": "2.4.6", "statsmodels": "0.15.0"},
    "study": "made_coast",
    "study_title": "A made-up coast",
    "study_file": "/somewhere/private/study.yaml",
    "study_digest": "ab" * 32,
    "study_says": {
        "seed": 11,
        "brain": {
            "rest": {
                "edges": "fisher_z",
                "negative": "drop",
                "communities": {"resolution": 1.0, "restarts": 50},
            }
        },
        "exclusions": [{"because": "head motion above 0.3 mm"}],
    },
    "inputs": {"people.tsv": "01" * 32, "brains/sub-001.tsv": "02" * 32, "brains/sub-002.tsv": "03" * 32},
    "started": "2026-12-01T10:00:00+00:00",
    "seconds": {"measure": 31.2, "link": 2.1},
    "plan_says": {"question": "Do brokers differ?", "hypotheses": [{"id": "brokers", "adjust": ["age"]}]},
}


def made_material(**changed: object) -> ReportInput:
    material = ReportInput(
        title="Brokers at sea",
        question="Does where crew members stand among each other go with how their brains are organised?",
        study_id="made_coast",
        cohort=made_cohort(),
        findings=typical_findings(),
        record=RECORD,
    )
    return replace(material, **changed)  # type: ignore[arg-type]
