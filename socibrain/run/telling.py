"""What the terminal is told of a finding."""

from __future__ import annotations

from socibrain.link.finding import Finding


def finding_lines(finding: Finding, *, alpha: float) -> list[str]:
    """A finding in a few lines, the first of which names the hypothesis."""
    asked = finding.hypothesis
    head = f"{asked.id}: {asked.predictor} -> {asked.outcome}"
    if finding.status in ("refused", "failed"):
        return [head, f"{finding.status}: {finding.reason}"]
    sites = "1 site" if finding.n_sites == 1 else f"{finding.n_sites} sites"
    interval = f"{100 * (1 - alpha):g} % interval {finding.ci_low:.3f} to {finding.ci_high:.3f}"
    test = f"one-sided, {asked.direction}" if asked.one_sided else "two-sided"
    return [
        head,
        f"standardised slope {finding.estimate:.3f} ({interval})",
        f"p {finding.p_permutation:.3g}, in its family {finding.p_family:.3g} ({test}); "
        f"{finding.n} people in {sites}; {asked.role}",
        *finding.notes,
    ]
