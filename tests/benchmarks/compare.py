"""Times of the solver beside scikit-learn: same data, same objective, same run, same machine.

Called by `run` in this folder with the path of the solver benchmark. Prints a table of ratios, then
one of readings of the matrix and of memory. With `--alone` the peers are left out.
Both sides are timed with everything included: means, scaling where the method scales, copies,
certificates. The peer works on columns that are scaled beforehand, outside its time.
"""
import subprocess, sys, tempfile, time, warnings
from pathlib import Path

import numpy as np
from sklearn.linear_model import LassoCV, LogisticRegression, RidgeCV, enet_path, lasso_path

# The peer says so when it stops short of its tolerance; its time is taken as it is.
warnings.filterwarnings("ignore")

solver = sys.argv[1]
chosen = set(sys.argv[2:])
names = {word for word in chosen if not word.startswith("--")}
folder = Path(tempfile.mkdtemp())


def design(kind, n, p, seed=1):
    g = np.random.default_rng(seed)
    if kind == "independent":
        x = g.standard_normal((n, p))
    elif kind == "neighbours 0.95":
        x = np.empty((n, p))
        x[:, 0] = g.standard_normal(n)
        for j in range(1, p):
            x[:, j] = 0.95 * x[:, j - 1] + np.sqrt(1 - 0.95**2) * g.standard_normal(n)
    elif kind == "factors":
        x = g.standard_normal((n, p)) + g.standard_normal((n, 10)) @ g.standard_normal((10, p))
        for j in range(0, p, 100):
            x[:, j : j + 100] += 2 * g.standard_normal((n, 1))
    elif kind == "markers 0/1/2":
        x = g.binomial(2, g.uniform(0.1, 0.5, p), (n, p)).astype(float)
    else:
        at = np.linspace(0, 1, p)
        x = np.zeros((n, p))
        for _ in range(40):
            bump = np.exp(-0.5 * ((at - g.uniform()) / g.uniform(0.02, 0.2)) ** 2)
            x += np.outer(g.standard_normal(n), bump)
        x += 1e-4 * g.standard_normal((n, p))
    z = (x - x.mean(0)) / np.where(x.std(0) > 0, x.std(0), 1)
    beta = np.zeros(p)
    beta[g.choice(p, 20, replace=False)] = g.standard_normal(20)
    signal = z @ beta
    y = signal + g.standard_normal(n) * signal.std() / 1.67
    return x, z, y


def ours(case, x, y, repeats):
    file = folder / "case.bin"
    with open(file, "wb") as out:
        out.write(np.asfortranarray(x).tobytes(order="F"))
        out.write(y.tobytes())
    n, p = x.shape
    line = subprocess.run([solver, case, str(file), str(n), str(p), str(repeats)], stdout=subprocess.PIPE, text=True, check=True).stdout
    file.unlink()
    seconds, passes, gap, count, settled, peak, busy = line.split()
    return float(seconds), float(passes), float(gap), int(count), settled, float(peak), float(busy)


def timed(function):
    start = time.perf_counter()
    function()
    return time.perf_counter() - start


def lambdas(z, y, count, ratio, share=1.0):
    top = np.abs(z.T @ (y - y.mean())).max() / len(y) / share
    return np.geomspace(top, top * ratio, count)


CASES = [
    # name, design, n, p, case of the solver, repeats, peer
    ("lasso path", "independent", 100, 20000, "lasso", 11, "lasso 1e-6"),
    ("lasso path", "neighbours 0.95", 100, 20000, "lasso", 11, "lasso 1e-6"),
    ("lasso path", "factors", 100, 20000, "lasso", 11, "lasso 1e-6"),
    ("lasso path", "markers 0/1/2", 100, 20000, "lasso", 11, "lasso 1e-6"),
    ("lasso path", "spectra", 100, 2000, "lasso", 11, "lasso 1e-6"),
    ("lasso path", "independent", 100, 200000, "lasso", 5, "lasso 1e-4"),
    ("lasso, 10 parts and fit", "independent", 100, 20000, "parts", 5, "LassoCV"),
    ("elastic net 0.5", "independent", 100, 20000, "enet05", 5, "enet 0.5"),
    ("elastic net 0.1", "independent", 100, 20000, "enet01", 5, "enet 0.1"),
    ("ridge, leave-one-out", "independent", 100, 20000, "ridge", 11, "RidgeCV"),
    ("ridge, 10 parts and fit", "independent", 100, 20000, "ridge-parts", 5, "RidgeCV parts"),
    ("logistic lasso path", "independent", 100, 20000, "logistic", 5, "liblinear"),
    ("Cox lasso path", "independent", 100, 20000, "cox", 5, None),
    ("100 halves, 50 strengths", "independent", 100, 20000, "halves", 3, "halves"),
    ("lasso path", "independent", 1000, 20000, "lasso", 3, "lasso 1e-4"),
    ("logistic lasso path", "independent", 1000, 20000, "logistic", 1, None),
    ("nested 5 x 10, 10 x 5", "independent", 100, 20000, "nested", 1, None),
]


def peer(name, z, y):
    if name is None:
        return None
    z = np.asfortranarray(z)
    yc = y - y.mean()
    if name.startswith("lasso"):
        grid, tol = lambdas(z, y, 100, 0.01), float(name.split()[1])
        return timed(lambda: lasso_path(z, yc, alphas=grid, tol=tol, max_iter=100000))
    if name.startswith("enet"):
        share = float(name.split()[1])
        grid = lambdas(z, y, 100, 0.01, share)
        return timed(lambda: enet_path(z, yc, l1_ratio=share, alphas=grid, tol=1e-6, max_iter=100000))
    if name == "LassoCV":
        return timed(lambda: LassoCV(alphas=lambdas(z, y, 100, 0.01), cv=10, n_jobs=2, tol=1e-4, max_iter=100000).fit(z, y))
    if name == "RidgeCV":
        return timed(lambda: RidgeCV(alphas=100 * 10 ** (5 - 0.06 * np.arange(100))).fit(z, y))
    if name == "RidgeCV parts":
        return timed(lambda: RidgeCV(alphas=100 * 10 ** (5 - 0.06 * np.arange(100)), cv=10).fit(z, y))
    if name == "liblinear":
        c = (y > np.median(y)).astype(int)
        grid = lambdas(z, c.astype(float), 100, 0.01)

        def path():
            for lam in grid:
                LogisticRegression(solver="liblinear", l1_ratio=1, C=1 / (len(y) * lam), intercept_scaling=100).fit(z, c)

        return timed(path)
    if name == "halves":
        from joblib import Parallel, delayed

        grid = lambdas(z, y, 50, 0.1)
        g = np.random.default_rng(0)
        halves = [np.sort(g.choice(len(y), len(y) // 2, replace=False)) for _ in range(100)]
        one = lambda h: lasso_path(np.asfortranarray(z[h]), y[h] - y[h].mean(), alphas=grid, tol=1e-4)[2].max()
        return timed(lambda: Parallel(n_jobs=2)(delayed(one)(h) for h in halves))
    raise ValueError(name)


print("Ratios: same data, same objective, same run; everything included on our side.\n")
print(f"{'case':26} {'predictors':16} {'n x p':>13} {'peer':>14} {'ours s':>9} {'peer s':>9} {'ratio':>7} {'gap':>8} {'chosen':>6}")
second = []
for name, kind, n, p, case, repeats, other in CASES:
    if names and case not in names:
        continue
    x, z, y = design(kind, n, p)
    mine, passes, gap, count, settled, peak, busy = ours(case, x, y, repeats)
    theirs = None if "--alone" in chosen else peer(other, z, y)
    shape = f"{n:>5} x {p:<6}"
    print(
        f"{name:26} {kind:16} {shape:>13} {str(other):>14} {mine:9.4f} "
        + (f"{theirs:9.3f} {theirs / mine:6.0f}x" if theirs else f"{'':9} {'':7}")
        + f" {gap:8.0e} {count:6d}"
        + ("" if settled == "true" else "  NOT SETTLED"),
        flush=True,
    )
    second.append(f"{name:26} {kind:16} {shape:>13} {passes:14.1f} {peak:13.2f}x {busy:14.4f}")

print("\nReadings of the matrix (in double precision, all fits of the case together), peak memory of the")
print("runs as a multiple of the matrix (itself included), running time of the first thread.\n")
print(f"{'case':26} {'predictors':16} {'n x p':>13} {'readings':>14} {'memory':>14} {'thread s':>14}")
print("\n".join(second))
