"""Prints the benchmark report: the engine against NumPy and SciPy, the core's peak, two threads and
the cost over sizes. Every ratio is of medians of repetitions that take turns in this one run.

Single-threaded figures are processor time, so that other work on the machine counts little; those
on two threads are wall-clock time.
"""

import argparse
import os
import time
from statistics import median

import numpy as np
import scipy

import numpy_ladder as nl
import scipy_job
from engine import Engine, in_seconds, machine

MIXED = [("series", "C"), ("shunt", "L"), ("series", "L"), ("shunt", "C"), ("series", "C")]
REAL_PARTS = {"L": {"q": (60, 150e6, 0.5), "self_resonance_hz": 1.2e9},
              "C": {"esr_ohm": 0.15, "self_inductance_h": 0.4e-9}}


def table(title, heads, rows):
    print(f"\n### {title}\n\n| {' | '.join(heads)} |\n|{'---|' * len(heads)}")
    for row in rows:
        print(f"| {' | '.join(str(cell) for cell in row)} |")


def verdict(value, target):
    return "met" if value >= target else "missed"


def processor_seconds(work, repetitions=1):
    start = time.process_time()
    for _ in range(repetitions):
        work()
    return (time.process_time() - start) / repetitions


def evaluation(engine, turns):
    """One network's worst return loss, four lossless elements, 104 frequencies."""
    file, from_hz, to_hz, _ = nl.ANTENNAS["whip"]
    grid = np.linspace(from_hz, to_hz, 104)
    reflection = nl.load_reflection(file, grid)
    ladder = nl.Ladder(MIXED[:4], reflection, grid)
    load_ohm = nl.SOURCE_OHM * (1 + reflection) / (1 - reflection)
    values = [20e-12, 47e-9, 47e-9, 20e-12]
    careful = lambda: ladder.worst_return_loss_db(values)
    textbook = lambda: nl.chain_matrix_return_loss_db(MIXED[:4], values, load_ohm, grid)
    assert abs(careful() - textbook()) < 1e-6
    ours, numpy, chain = [], [], []
    for _ in range(turns):
        ours.append(engine.one("lossless/elements:4/points:104")["cpu_s"])
        numpy.append(processor_seconds(careful, 2000))
        chain.append(processor_seconds(textbook, 500))
    rows = []
    for name, theirs in (("V/I walk, tables made once", numpy), ("chain matrices", chain)):
        ratio = median(theirs) / median(ours)
        rows.append((name, f"{1 / median(ours):,.0f}", f"{1 / median(theirs):,.0f}",
                     f"{ratio:.0f}", "500", verdict(ratio, 500)))
    table("Evaluations a second: 4 lossless elements, 104 frequencies, one core",
          ("NumPy script", "engine", "NumPy", "ratio", "target", ""), rows)


def whole_job(engine, turns):
    """All ladders of three E24 parts with the yield over 10,000 boards."""
    rows = []
    for number, antenna in enumerate(nl.ANTENNAS):
        ours, five, two, scipy_s, population_s = [], [], [], [], []
        for _ in range(turns):
            name = f"job/antenna:{number}/designs:"
            mine = engine.one(f"{name}1/threads:1")
            ours.append(mine["cpu_s"])
            five.append(engine.one(f"{name}5/threads:1")["cpu_s"])
            two.append(engine.one(f"{name}1/threads:2")["real_s"])
            results = {}
            scipy_s.append(processor_seconds(
                lambda: results.update(plain=scipy_job.run(antenna))))
            population_s.append(processor_seconds(
                lambda: results.update(population=scipy_job.run(antenna, whole_population=True))))
        for what, theirs, result in (("one network a call", scipy_s, results["plain"]),
                                     ("a population a call", population_s, results["population"])):
            ratio = median(theirs) / median(ours)
            good = mine["return_loss_db"] >= result["return_loss_db"] - 1e-3
            rows.append((antenna, what, f"{median(ours):.3f}", f"{median(theirs):.2f}",
                         f"{ratio:.0f}", "100", verdict(ratio, 100 if good else np.inf),
                         f"{mine['return_loss_db']:.3f}", f"{result['return_loss_db']:.3f}",
                         f"{mine['yield']:.4f}", f"{result['yield']:.4f}"))
        print(f"\n{antenna}: the same job with five designs and the physical limit "
              f"{median(five):.3f} s; one design on two threads {median(two):.3f} s on the clock.")
    table("A whole job: every ladder of 3 elements, E24, 10,000 boards; seconds, one core",
          ("load", "SciPy side", "engine s", "SciPy s", "ratio", "target", "",
           "engine dB", "SciPy dB", "engine yield", "SciPy yield"), rows)


def peak_share(engine, turns):
    """The kernel's arithmetic against multiply-adds on registers alone."""
    results = engine.measure("^peak$|elements:4/points:(104|1000)$", 0.02, turns)
    peak = median(run["operations"] for run in results["peak"])
    targets = {"lossless": 50, "lossy_q": 35, "lossy_real": 35}
    rows = [("multiply-adds on registers", "", "", f"{peak / 1e9:.1f}", "100", "", "")]
    for kind, target in targets.items():
        for points in (104, 1000):
            runs = results[f"{kind}/elements:4/points:{points}"]
            share = 100 * median(run["operations"] for run in runs) / peak
            rows.append((kind, points, f"{runs[0]['operations_per_point']:.0f}",
                         f"{share * peak / 1e11:.1f}", f"{share:.0f}", target,
                         verdict(share, target)))
    table(f"Share of the core's multiply-add peak, 4 elements ({results_label(results)}); "
          "operations counted in operation_count.h",
          ("ladder", "points", "operations a point", "GFLOP/s", "%", "target %", ""), rows)


def results_label(results):
    return next(run["label"] for runs in results.values() for run in runs if run.get("label"))


def two_threads(engine, turns):
    """A search over every ladder of five elements on one and two threads."""
    seconds = {1: [], 2: []}
    for _ in range(turns):
        for threads in seconds:
            seconds[threads].append(
                engine.one(f"search/elements:5/threads:{threads}", 0.001)["real_s"])
    ratio = median(seconds[1]) / median(seconds[2])
    table("A search over every ladder of 5 elements, wall-clock seconds",
          ("1 thread", "2 threads", "ratio", "target", ""),
          [(f"{median(seconds[1]):.2f}", f"{median(seconds[2]):.2f}", f"{ratio:.2f}", "1.8",
            verdict(ratio, 1.8))])


def boards(engine, turns):
    """10,000 boards of five real parts at 101 frequencies."""
    file, from_hz, to_hz, _ = nl.ANTENNAS["whip"]
    grid = np.linspace(from_hz, to_hz, 101)
    ladder = nl.Ladder(MIXED, nl.load_reflection(file, grid), grid, REAL_PARTS)
    nominal = [20e-12, 47e-9, 33e-9, 10e-12, 47e-12]
    tolerances = [0.02 if kind == "C" else 0.05 for _, kind in MIXED]
    rng = np.random.default_rng(1)
    work = lambda: ladder.worst_of_boards_db(nl.drawn_boards(nominal, tolerances, 10000, rng))
    ours, numpy = [], []
    for _ in range(turns):
        ours.append(engine.one("boards/samples:10000/points:101")["cpu_s"])
        numpy.append(processor_seconds(work))
    ratio = median(numpy) / median(ours)
    table("10,000 boards x 101 frequencies x 5 real parts, milliseconds, one core",
          ("engine", "NumPy", "ratio", "target", ""),
          [(f"{median(ours) * 1e3:.2f}", f"{median(numpy) * 1e3:.0f}", f"{ratio:.0f}", "100",
            verdict(ratio, 100))])


def costs(engine, turns):
    """How the cost grows."""
    results = engine.measure("^lossless|^lossy|^smooth", 0.01, turns)

    def nanoseconds(kind, elements, points):
        runs = results.get(f"{kind}/elements:{elements}/points:{points}")
        return f"{median(run['cpu_time'] for run in runs):.0f}" if runs else ""

    kinds = ("lossless", "lossy_q", "lossy_real")
    table("Nanoseconds an evaluation over elements, 104 frequencies", ("elements", *kinds),
          [(n, *(nanoseconds(kind, n, 104) for kind in kinds)) for n in range(1, 9)])
    table("Nanoseconds an evaluation over frequencies, 4 elements", ("frequencies", *kinds),
          [(p, *(nanoseconds(kind, 4, p) for kind in kinds))
           for p in (16, 32, 64, 104, 208, 416, 1000, 4000)])
    print(f"\nA power mean over the points (4 lossless elements, 104 frequencies): "
          f"{nanoseconds('smooth', 4, 104)} ns.")
    searches = engine.measure("^search/.*threads:1/", 0.001, 1)
    table("A search over every ladder of n elements, one core",
          ("elements", "topologies", "evaluations", "ms", "ms a topology"),
          [(n, f"{run['topologies']:.0f}", f"{run['evaluations']:,.0f}", f"{run['cpu_time']:.1f}",
            f"{run['cpu_time'] / run['topologies']:.2f}")
           for n in range(1, 6)
           for run in searches[f"search/elements:{n}/threads:1/real_time"]])
    runs = engine.measure("^boards", 0.02, 3)
    table("Boards of 5 real parts at 101 frequencies, one core", ("boards", "ms", "us a board"),
          [(f"{count:,}", f"{ms:.2f}", f"{ms * 1e3 / count:.3f}")
           for count in (100, 1000, 10000, 100000, 1000000)
           for ms in [median(in_seconds(r)["cpu_s"] * 1e3
                             for r in runs[f"boards/samples:{count}/points:101"])]])


def main():
    parser = argparse.ArgumentParser(description=__doc__)
    parser.add_argument("program", help="the engine's benchmark program")
    engine = Engine(parser.parse_args().program)
    start = time.time()
    print(f"# Benchmark\n\n{machine()}; {os.uname().sysname} {os.uname().release}; "
          f"NumPy {np.__version__}, SciPy {scipy.__version__}")
    evaluation(engine, 15)
    peak_share(engine, 25)
    boards(engine, 7)
    two_threads(engine, 5)
    whole_job(engine, 5)
    costs(engine, 5)
    print(f"\nTook {(time.time() - start) / 60:.1f} minutes.")


if __name__ == "__main__":
    main()
