"""Runs `cargo bench` and the same work by SciPy, one after the other, and prints both with their ratio.

    python3 benches/beside_scipy.py [PATH-OF-THE-RELEASE-BINARY]

Needs SciPy and NumPy. With the binary's path, whole processes are timed too: one plan, and 1,000 plans.
"""

import os
import pathlib
import statistics
import subprocess
import sys
import tempfile
import time

import numpy as np
import scipy
from scipy.stats import binom

HERE = pathlib.Path(__file__).resolve().parent.parent


def median_ms(work, runs=7):
    work()
    times = []
    for _ in range(runs):
        begun = time.perf_counter()
        work()
        times.append((time.perf_counter() - begun) * 1e3)
    return statistics.median(times)


def smallest():
    """Every n up to 200,000 at once for each acceptance number: size and power, first n and the last that fails."""
    n = np.arange(1, 200_001)
    accepted = np.full(n.shape, -1)
    for c in range(0, 30):
        fits = binom.cdf(c, n, 0.0002) <= 0.05
        if not fits.any():
            break
        accepted[fits] = c
    will_do = (accepted >= 0) & (binom.cdf(accepted, n, 0.00005) >= 0.95)
    return int(n[will_do][0]), int(n[~will_do][-1]) + 1


def table(limit, highest):
    p = np.arange(1, 1001) * highest / 1000
    return binom.cdf(limit, 1_000_000, p).sum()


PLAN = """assize: 1
plan: {{id: B-{i}, revision: A, title: Bench}}
characteristic: {{name: fault, counts: faults, unit: unit}}
test:
  family: binomial
  parameter_space: 0 <= p <= 1
  null_subset: p >= {p}
  alpha: 0.05
  sample_size: smallest
power:
  - {{where: p <= {q}, at_least: 0.9}}
decision: {{accept_when: null_rejected}}
"""


def whole_processes(binary):
    with tempfile.TemporaryDirectory() as folder:
        plans = pathlib.Path(folder) / "plans"
        plans.mkdir()
        for i in range(1000):
            p = 0.01 + i * 0.0001
            text = PLAN.format(i=i, p=round(p, 6), q=round(p / 8, 8))
            (plans / f"plan-{i:04}.yaml").write_text(text)
        out = pathlib.Path(folder) / "one"
        one = [binary, "compile", str(plans / "plan-0500.yaml"), "--out", str(out), "--replace"]
        quiet = {"stdout": subprocess.DEVNULL, "stderr": subprocess.DEVNULL}
        print(f"one plan, whole process: {median_ms(lambda: subprocess.run(one, check=False, **quiet)):.1f} ms")
        python = [sys.executable, "-c", "from scipy.stats import binom; binom.cdf(1, 93, 0.05)"]
        print(f"SciPy, import and one value, whole process: {median_ms(lambda: subprocess.run(python, check=False, **quiet)):.1f} ms")
        begun = time.perf_counter()
        all_of_them = [binary, "compile", str(plans), "--out", str(pathlib.Path(folder) / "all")]
        process = subprocess.Popen(all_of_them, **quiet)
        _, _, usage = os.wait4(process.pid, 0)
        elapsed = time.perf_counter() - begun
        print(f"1,000 plans, whole process: {elapsed:.2f} s, at most {usage.ru_maxrss / 1024:.0f} MiB")


def main():
    print(f"SciPy {scipy.__version__}, NumPy {np.__version__}, Python {sys.version.split()[0]}")
    bench = subprocess.run(
        ["cargo", "bench", "--bench", "figures"], cwd=HERE, capture_output=True, text=True, check=True
    )
    ours = dict(line.rsplit("\t", 2)[:2] for line in bench.stdout.splitlines() if "\t" in line)
    theirs = {
        "smallest n near 6e4, every larger one included": smallest,
        "1,000-point power table, n = 1e6, p to 0.02": lambda: table(9_800, 0.02),
        "1,000-point power table, n = 1e6, p to 0.6": lambda: table(300_000, 0.6),
    }
    for name, figure in ours.items():
        line = f"{name}: {float(figure):.2f} ms"
        if name in theirs:
            scipys = median_ms(theirs[name])
            line += f"; SciPy {scipys:.2f} ms; SciPy / assize {scipys / float(figure):.1f}"
        print(line)
    print("smallest and every larger, by SciPy:", smallest())
    if len(sys.argv) > 1:
        whole_processes(sys.argv[1])


if __name__ == "__main__":
    main()
