"""Runs the engine's benchmark program and reads its figures."""

import json
import os
import subprocess


class Engine:
    def __init__(self, program):
        self.program = program

    def measure(self, pattern, seconds=0.05, repetitions=1):
        """A list of results for each benchmark that matches: name -> [result, ...]."""
        command = [self.program, f"--benchmark_filter={pattern}", "--benchmark_format=json",
                   f"--benchmark_min_time={seconds}", f"--benchmark_repetitions={repetitions}",
                   "--benchmark_enable_random_interleaving=true"]
        answer = subprocess.run(command, check=True, stdout=subprocess.PIPE,
                                stderr=subprocess.DEVNULL)
        results = {}
        for run in json.loads(answer.stdout)["benchmarks"]:
            if run["run_type"] == "iteration":
                results.setdefault(run["run_name"], []).append(run)
        return results

    def one(self, name, seconds=0.05):
        """One result of one benchmark, its times in seconds as `cpu_s` and `real_s`."""
        # Wall-clock benchmarks carry that in their name.
        (runs,) = self.measure(f"^{name}(/real_time)?$", seconds).values()
        return in_seconds(runs[0])


def in_seconds(run):
    unit = {"ns": 1e-9, "us": 1e-6, "ms": 1e-3, "s": 1}[run["time_unit"]]
    return {**run, "cpu_s": run["cpu_time"] * unit, "real_s": run["real_time"] * unit}


def machine():
    """One line about the machine."""
    model = "unknown processor"
    with open("/proc/cpuinfo", encoding="ascii", errors="replace") as info:
        for line in info:
            if line.startswith("model name"):
                model = line.split(":", 1)[1].strip()
                break
    load = os.getloadavg()[0]
    return f"{model}, {os.cpu_count()} cores, {os.uname().machine}, load average {load:.1f}"
