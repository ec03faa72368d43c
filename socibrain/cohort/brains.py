"""From matrix files to measured brains, one task a file."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from pathlib import Path

import numpy as np
from numpy.typing import NDArray

from socibrain.errors import Fault, Faults
from socibrain.measures.brain.at_hand import BrainAtHand
from socibrain.measures.catalogue import Measure, all_measures
from socibrain.networks.brain import BrainNetwork, build_brain
from socibrain.sources.matrices import read_matrix
from socibrain.sources.records import MatrixFile, RegionTable
from socibrain.sources.study import Study
from socibrain.streams import small_seed
from socibrain.tasks.finished import Arrays, Finished, digest, file_digest
from socibrain.tasks.work import run_tasks

Array = NDArray[np.float64]


@dataclass(frozen=True)
class BrainTask:
    """One matrix file to read, check and, when ``measuring``, measure."""

    study: Study
    origin: MatrixFile
    regions: RegionTable | None
    version: str
    memory: Path | None
    measuring: bool


@dataclass(frozen=True)
class MeasuredBrain:
    """What one matrix file gave.

    ``person_values`` and ``region_values`` are by measure name; ``partition`` numbers each
    region's community from 1 (0 where not measured).  ``left_out`` is the reason why the scan
    cannot be used, '' when it can.
    """

    origin: MatrixFile
    left_out: str
    faults: tuple[Fault, ...]
    person_values: dict[str, float]
    region_values: dict[str, Array]
    partition: NDArray[np.int64]
    region_names: tuple[str, ...]

    @property
    def key(self) -> tuple[str, str, str]:
        """Input, person and visit."""
        return self.origin.source, self.origin.person, self.origin.visit


def brain_measures(scale: str) -> list[Measure]:
    """Measures of the brain side at one scale."""
    return [each for each in all_measures().values() if each.side == "brain" and each.scale == scale]


def measure_brains(
    tasks: list[BrainTask], *, workers: int, done: Callable[[int], None]
) -> list[MeasuredBrain]:
    """Read (and measure) every file, in the order of the tasks."""
    return run_tasks(measure_brain, tasks, workers=workers, done=done)


def measure_brain(task: BrainTask) -> MeasuredBrain:
    """Read one file and measure it; what was measured before is recalled."""
    faults = Faults()
    network, left_out = read_brain(task, faults)
    if network is None or not task.measuring:
        names = network.regions.names if network else ()
        nothing = np.zeros(len(names), dtype=np.int64)
        return MeasuredBrain(task.origin, left_out, tuple(faults), {}, {}, nothing, names)
    arrays = _recall_or_measure(task, network)
    person = {each.name: float(arrays[each.name]) for each in brain_measures("person")}
    region = {each.name: np.asarray(arrays[each.name], np.float64) for each in brain_measures("region")}
    partition = np.asarray(arrays["partition"], dtype=np.int64)
    names = network.regions.names
    return MeasuredBrain(task.origin, "", tuple(faults), person, region, partition, names)


def read_brain(task: BrainTask, faults: Faults) -> tuple[BrainNetwork | None, str]:
    """The checked network of one file, or None with the reason ('' when a fault says it)."""
    n_regions = len(task.regions) if task.regions else None
    record = read_matrix(task.study, task.origin, n_regions, faults)
    if record is None:
        return None, ""
    reading = build_brain(task.study, record, task.regions, faults)
    return reading.network, reading.left_out


def _recall_or_measure(task: BrainTask, network: BrainNetwork) -> Arrays:
    says, origin = task.study.says, task.origin
    options = says.brain[origin.source].communities
    if task.memory is None:
        return _measure(task, network)
    key = digest(
        task.version,
        says.seed,
        [origin.source, origin.person, origin.visit],
        says.brain[origin.source].model_dump(mode="json"),
        file_digest(task.study.path(origin.file)),
        [network.regions.names, network.regions.systems],
        options.model_dump(mode="json"),
    )
    wanted = {each.name for scale in ("person", "region") for each in brain_measures(scale)} | {"partition"}
    return Finished(task.memory).once(key, wanted, lambda: _measure(task, network))


def _measure(task: BrainTask, network: BrainNetwork) -> Arrays:
    says, origin = task.study.says, task.origin
    options = says.brain[origin.source].communities
    seed = small_seed(says.seed, "communities", origin.source, origin.person, origin.visit)
    at_hand = BrainAtHand(network, options.resolution, options.restarts, seed)
    arrays: Arrays = {
        each.name: np.asarray(each.function(at_hand), dtype=np.float64)
        for scale in ("person", "region")
        for each in brain_measures(scale)
    }
    arrays["partition"] = np.asarray(at_hand.communities.consensus, dtype=np.int64)
    return arrays
