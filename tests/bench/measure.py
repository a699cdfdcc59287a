"""Speed, side by side in one run: ``python -m tests.bench.measure`` prints what the README reports."""

from __future__ import annotations

import json
import os
import subprocess
import sys
import tempfile
import time
import tracemalloc
from dataclasses import replace
from pathlib import Path

import numpy as np

from harvest.futures import Rule, find_quota, pick_question, project
from harvest.futures.engine import run, workers
from harvest.futures.prepared import prepare
from harvest.rates import draw_rates
from harvest.record import demo_folder, read_record
from harvest.record.model import CurveChoice
from tests.bench import whole_arrays

REPLICATES, YEARS = 100_000, 50
RULE = (1200.0, 2200.0, 0.14)


def best_of(times, call):
    """The best of several wall times of a call, in seconds."""
    taken = []
    for _ in range(times):
        start = time.perf_counter()
        call()
        taken.append(time.perf_counter() - start)
    return min(taken)


def logistic_deer():
    """The deer demo with the logistic curve alone, so that plain numpy needs no branches."""
    record = read_record(demo_folder("deer"))
    return replace(record, curves=(CurveChoice("logistic"),))


def projection_ratio(rounds=3):
    """Closed loop under the ramp with all noises: plain numpy on one thread over Harvest on two."""
    record = logistic_deer()
    rates = draw_rates(record, 1, REPLICATES)
    prepared = prepare(record, rates)
    rule = Rule("ramp", RULE)

    def ours():
        project(record, rates, rule, YEARS, threads=2)

    ours()
    theirs = {}
    settings = (rates.table, record, RULE, prepared.tau, prepared.implementation, YEARS, 1)
    seconds = best_of(rounds, ours)
    theirs["whole arrays"] = best_of(rounds, lambda: whole_arrays.whole(*settings))
    for chunk in (1000, 5000, 20_000):
        theirs[f"chunks of {chunk:,}"] = best_of(rounds, lambda c=chunk: whole_arrays.chunked(*settings, c))
    seconds = min(seconds, best_of(rounds, ours))
    return {"harvest, two threads": seconds, **theirs, "ratio": min(theirs.values()) / seconds}


def events_only_ratio(rounds=3):
    """The same loop without quantiles by year on either side: risk of the rule alone."""
    record = logistic_deer()
    rates = draw_rates(record, 1, REPLICATES)
    prepared = prepare(record, rates)
    rule = Rule("ramp", RULE)
    settings = (record, RULE, prepared.tau, prepared.implementation, YEARS)
    with workers(2) as pool:

        def ours():
            run(prepared, rule, YEARS, pool, seed=1, histograms=False)

        ours()
        seconds = best_of(rounds, ours)
        generators = [np.random.Generator(np.random.SFC64(s)) for s in np.random.SeedSequence(1).spawn(20)]

        def chunks():
            for i, rng in enumerate(generators):
                whole_arrays.project(rates.table.iloc[i * 5000 : (i + 1) * 5000], *settings, rng)

        theirs = min(
            best_of(rounds, lambda: whole_arrays.project(rates.table, *settings, np.random.default_rng(1))),
            best_of(rounds, chunks),
        )
    return {"harvest, two threads": seconds, "best plain numpy": theirs, "ratio": theirs / seconds}


def memory_per_future():
    """Bytes of peak memory that one more future costs, 10,000 draws with 10 and with 60 futures each."""
    record = logistic_deer()
    rates = draw_rates(record, 1, 10_000)
    rule = Rule("ramp", RULE)
    project(record, rates, rule, 5, threads=2)
    peaks = []
    for futures in (10, 60):
        tracemalloc.start()
        project(record, rates, rule, 20, futures_per_draw=futures, threads=2)
        peaks.append(tracemalloc.get_traced_memory()[1])
        tracemalloc.stop()
    return (peaks[1] - peaks[0]) / 500_000


def recommendation_seconds(rounds=5):
    """The recommended quota of a demo, warm: 50 quotas × 10,000 futures × 20 years, and those of the refinement."""
    record = read_record(demo_folder("deer"))
    rates = draw_rates(record, 1, 10_000)

    def ours():
        find_quota(record, rates, pick_question(record, rates), points=50)

    ours()
    return best_of(rounds, ours)


def command_seconds():
    """The main command as a whole process: the very first run (kernels compiled) and a later one."""
    with tempfile.TemporaryDirectory() as place:
        environment = {**os.environ, "HARVEST_CACHE": place}
        command = [
            sys.executable,
            "-m",
            "harvest",
            "quota",
            str(demo_folder("deer")),
            "--out",
            str(Path(place) / "out"),
        ]

        def run():
            subprocess.run(command, env=environment, check=True, capture_output=True)

        return {"first run": best_of(1, run), "later run": best_of(3, run)}


if __name__ == "__main__":
    found = {
        f"projection with quantiles by year, {REPLICATES:,} × {YEARS}, seconds": projection_ratio(),
        f"projection, events only, {REPLICATES:,} × {YEARS}, seconds": events_only_ratio(),
        "memory per future, bytes": memory_per_future(),
        "recommended quota, warm, seconds": recommendation_seconds(),
        "harvest quota, whole process, seconds": command_seconds(),
    }
    print(json.dumps(found, indent=1, ensure_ascii=False))
