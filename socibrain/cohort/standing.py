"""Where everyone stands in the two branches: who is at each step, and why the others are not."""

from __future__ import annotations

from collections.abc import Sequence

from socibrain.cohort.brains import MeasuredBrain
from socibrain.cohort.gather import Gathered
from socibrain.cohort.ledger import Branch, Leaving

ROSTER, ANSWERED, TIES = "on the roster", "answered", "with usable ties"
INVITED, SCANNED, QUALITY = "invited", "scanned", "passed quality"


def social_branch(gathered: Gathered) -> tuple[Branch, list[Leaving]]:
    """Roster, answered, usable ties (at least one tie in at least one question)."""
    site = {entry.person: entry.site for entry in gathered.roster}
    by_rule = {each.person: each.reason for each in gathered.left_out if each.leaves_out_of != "brain"}
    answered, tied = set(), set()
    for network in gathered.networks:
        ties = network.ties
        has_tie = (ties + ties.T).sum(axis=1) > 0
        for person, spoke, linked in zip(network.people, network.answered, has_tie, strict=True):
            answered |= {person} if spoke else set()
            tied |= {person} if linked else set()
    tied &= answered
    leavings = [
        Leaving(ROSTER, "social", person, gathered.site(person), "", "not on the roster")
        for person in gathered.people.ids
        if person not in site
    ]
    for person in sorted(site):
        if person not in answered:
            reason = by_rule.get(person, "did not answer")
            leavings.append(Leaving(ANSWERED, "social", person, site[person], "", reason))
        elif person not in tied:
            reason = "no tie under the tie rule in any question"
            leavings.append(Leaving(TIES, "social", person, site[person], "", reason))
    steps = ((ROSTER, frozenset(site)), (ANSWERED, frozenset(answered)), (TIES, frozenset(tied)))
    return Branch("social", steps), leavings


def brain_branch(gathered: Gathered, brains: Sequence[MeasuredBrain]) -> tuple[Branch, list[Leaving]]:
    """Invited, scanned, passed quality (at least one usable network)."""
    reasons = lost_scans(gathered, brains)
    usable = {b.origin.person for b in brains if b.key not in reasons}
    with_file = {b.origin.person for b in brains}
    scanned = with_file & gathered.scanned
    leavings = [
        Leaving(INVITED, "brain", person, gathered.site(person), "", "not invited to be scanned")
        for person in gathered.people.ids
        if person not in gathered.invited
    ]
    for person in sorted(gathered.invited):
        site = gathered.site(person)
        if person not in scanned:
            reason = (
                "not scanned" if person not in gathered.scanned else "scanned, but there is no network file"
            )
            reason = "has a file, but the study says not scanned" if person in with_file else reason
            leavings.append(Leaving(SCANNED, "brain", person, site, "", reason))
        elif person not in usable:
            mine = [reason for (_, who, _), reason in sorted(reasons.items()) if who == person]
            leavings.append(Leaving(QUALITY, "brain", person, site, "", mine[0]))
    invited = frozenset(gathered.invited)
    steps = (
        (INVITED, invited),
        (SCANNED, frozenset(scanned & invited)),
        (QUALITY, frozenset(usable & scanned & invited)),
    )
    return Branch("brain", steps), leavings


def single_scans(gathered: Gathered, brains: Sequence[MeasuredBrain]) -> list[Leaving]:
    """Single visits, or single inputs of a visit, that cannot be used of people with a scan that can."""
    lost = lost_scans(gathered, brains)
    usable = {brain.key for brain in brains} - lost.keys()
    for _, person, visit in usable:
        for source in gathered.study.says.brain:
            if (source, person, visit) not in usable:
                lost.setdefault((source, person, visit), "there is no network file")
    has_another = {person for _, person, _ in usable}
    return [
        Leaving(f"{QUALITY} in {source}", "brain", person, gathered.site(person), visit, reason)
        for (source, person, visit), reason in sorted(lost.items())
        if person in has_another
    ]


def lost_scans(gathered: Gathered, brains: Sequence[MeasuredBrain]) -> dict[tuple[str, str, str], str]:
    """Reason by (input, person, visit) for every scan that cannot be used."""
    by_rule = {
        (each.person, each.visit): each.reason for each in gathered.left_out if each.leaves_out_of != "social"
    }
    lost = {}
    for brain in brains:
        person, visit = brain.origin.person, brain.origin.visit
        reason = by_rule.get((person, "")) or by_rule.get((person, visit)) or brain.left_out
        if not reason and any(fault.grave for fault in brain.faults):
            reason = "the file cannot be used (see problems.csv)"
        if not reason and person not in gathered.scanned:
            reason = "has a file, but the study says not scanned"
        if not reason and person not in gathered.invited:
            reason = "scanned, but not invited"
        if reason:
            lost[brain.key] = reason
    return lost
