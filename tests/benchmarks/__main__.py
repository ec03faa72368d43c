"""Runs the benchmarks; see pairing.py for how one is written."""

from __future__ import annotations

import importlib
import json
import os
import platform
import sys
from pathlib import Path

from tests.benchmarks.pairing import Result

HERE = Path(__file__).parent
TARGET = HERE.parents[1] / "bench.json"


def machine() -> str:
    """What the figures were measured on."""
    return f"{os.cpu_count()} cores, {platform.machine()}, Python {platform.python_version()}"


def main(subjects: list[str]) -> int:
    """Run the named benchmarks, or all."""
    known = sorted(path.stem.removeprefix("bench_") for path in HERE.glob("bench_*.py"))
    unknown = sorted(set(subjects) - set(known))
    if unknown:
        print(f"no such benchmark: {', '.join(unknown)}; there are: {', '.join(known)}", file=sys.stderr)
        return 2
    results: list[Result] = []
    for subject in subjects or known:
        for result in importlib.import_module(f"tests.benchmarks.bench_{subject}").run():
            verdict = "met" if result.met else "NOT met"
            print(
                f"{result.name}: {result.ratio:.2f} x {result.baseline} "
                f"(goal {result.goal:g}, {verdict}; {result.seconds:.4f} s)",
                flush=True,
            )
            results.append(result)
    if not subjects:
        rows = [
            {
                "name": result.name,
                "ratio": round(result.ratio, 4),
                "baseline": result.baseline,
                "goal": result.goal,
                "met": result.met,
                "seconds": round(result.seconds, 6),
                "machine": machine(),
            }
            for result in results
        ]
        unfinished = TARGET.with_suffix(".json.tmp")
        unfinished.write_text(json.dumps(rows, indent=2) + "\n", encoding="utf-8")
        unfinished.replace(TARGET)
    return 0


if __name__ == "__main__":
    sys.exit(main(sys.argv[1:]))
