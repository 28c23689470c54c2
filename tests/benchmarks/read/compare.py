"""Times the reading of wide and long tables: Widefold, pandas and polars in one run.

Usage: compare.py WIDEFOLD_BENCH [TIMES]. Called by `run`, which makes the Python environment.
Every reader gets every file in a fresh process, TIMES times; the best time and the largest peak of
memory count. Times include reading the file from the (warm) disk cache.
"""

import pathlib, subprocess, sys, tempfile

import numpy as np

bench = sys.argv[1]
times = int(sys.argv[2]) if len(sys.argv) > 2 else 3
SHAPES = [(100, 20_000), (20_000, 100), (200_000, 100), (100, 200_000)]
PYTHON = """
import sys, time, resource
start = None
if sys.argv[1] == "polars":
    import polars as pl
    start = time.perf_counter(); t = pl.read_csv(sys.argv[2])
elif sys.argv[1] == "pandas":
    import pandas as pd
    start = time.perf_counter(); t = pd.read_csv(sys.argv[2])
print(time.perf_counter() - start, resource.getrusage(resource.RUSAGE_SELF).ru_maxrss * 1024, t.shape[0] * (t.shape[1] - 1))
"""


def make(path, n, p, form):
    rng = np.random.default_rng(n + p)
    with open(path, "w") as out:
        out.write("sample," + ",".join(f"x{k}" for k in range(p)) + "\n")
        for i in range(n):
            row = rng.normal(size=p)
            out.write(f"S{i:06d}," + ",".join(map(form, row)) + "\n")


def once(command):
    words = subprocess.run(command, check=True, capture_output=True, text=True).stdout.split()
    return float(words[0]), float(words[1]), int(words[2])


def best(command):
    runs = [once(command) for _ in range(times)]
    return min(r[0] for r in runs), max(r[1] for r in runs), runs[0][2]


digits = {"six digits": lambda v: f"{v:.6g}", "all digits": lambda v: repr(float(v))}
print(f"{'table':>16} {'text':>11} {'MB':>5} | {'widefold':>8} {'pandas':>8} {'polars':>8} s | "
      f"{'pandas/':>8} {'polars/':>8} | peak as a multiple of the table: widefold (without the file's bytes), pandas, polars")
with tempfile.TemporaryDirectory() as folder:
    for n, p in SHAPES:
        for name, form in digits.items():
            path = pathlib.Path(folder) / "table.csv"
            make(path, n, p, form)
            size, table = path.stat().st_size, n * p * 8
            ours = best([bench, str(path), "2", "1"])
            assert ours[2] == n * p, f"{ours[2]} of {n * p} values were read"
            pandas = best([sys.executable, "-c", PYTHON, "pandas", str(path)])
            polars = best([sys.executable, "-c", PYTHON, "polars", str(path)])
            print(f"{n:>8} × {p:<7} {name:>11} {size / 1e6:5.0f} | {ours[0]:8.3f} {pandas[0]:8.3f} {polars[0]:8.3f}   | "
                  f"{pandas[0] / ours[0]:8.2f} {polars[0] / ours[0]:8.2f} | "
                  f"{ours[1] / table:.2f} ({(ours[1] - size) / table:.2f}), {pandas[1] / table:.2f}, {polars[1] / table:.2f}", flush=True)
