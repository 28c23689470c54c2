"""Makes catalogue.json: what steps give on given values, by scipy, scikit-learn and statsmodels.

Run in this folder: python make_catalogue.py > catalogue.json
"""

import json

import numpy as np
import scipy.interpolate as si
import scipy.sparse as sp
import scipy.sparse.linalg as sl
import scipy.stats as st
from sklearn.decomposition import PCA
from sklearn.linear_model import LinearRegression
from statsmodels.duration.hazard_regression import PHReg
from statsmodels.nonparametric.smoothers_lowess import lowess

meats = np.loadtxt("meats.csv", delimiter=",", skiprows=1)
spectra, fat = meats[:, :100], meats[:, 101]
few = spectra[:12, ::10].copy()  # 12 rows, 10 columns
axis = 850 + 2.0 * np.arange(100)
out = {}


def asymmetric(y, smoothness, asymmetry, passes=200):
    n = len(y)
    d = sp.diags([1.0, -2.0, 1.0], [0, 1, 2], shape=(n - 2, n))
    w = np.ones(n)
    for _ in range(passes):
        z = sl.spsolve((sp.diags(w) + smoothness * d.T @ d).tocsc(), w * y)
        new = np.where(y > z, asymmetry, 1 - asymmetry)
        if (new == w).all():
            break
        w = new
    return y - z


out["asymmetric_baseline"] = {
    "smoothness": 1e5,
    "asymmetry": 0.01,
    "rows": [asymmetric(spectra[i], 1e5, 0.01).tolist() for i in (0, 60)],
}

# At a smoothness of 100 the equations are well conditioned, so that two solvers agree closely.
out["asymmetric_baseline_100"] = {
    "smoothness": 1e2,
    "asymmetry": 0.05,
    "rows": [asymmetric(spectra[i], 1e2, 0.05).tolist() for i in (0, 60)],
}


def despiked(y, half, threshold):
    """The rule as it is documented, with the medians of numpy and the spread of scipy."""
    steps = np.diff(y)
    spread = st.median_abs_deviation(steps, scale="normal")
    result = y.copy()
    for at in range(len(y)):
        low, high = max(0, at - half), min(at + half, len(y) - 1)
        local = np.median(np.abs(steps[low:high])) / st.norm.ppf(0.75)
        middle = np.median(y[low : high + 1])
        if abs(y[at] - middle) > threshold * max(spread, local):
            result[at] = middle
    return result


spiky = spectra[:4].copy()
spiky[0, 17] += 0.4
spiky[1, 3] -= 0.3
spiky[2, 96] += 0.2
spiky[3, 50] += 1.0
out["spikes"] = {
    "values": spiky.tolist(),
    "half": 4,
    "threshold": 6.0,
    "rows": [despiked(y, 4, 6.0).tolist() for y in spiky],
}

positions = np.linspace(851.3, 1047.9, 23)
out["common_axis"] = {
    "positions": positions.tolist(),
    "linear_row_3": np.interp(positions, axis, spectra[3]).tolist(),
    "spline_row_3": si.CubicSpline(axis, spectra[3], bc_type="natural")(positions).tolist(),
}

t = 2 * (axis - axis.mean()) / (axis[-1] - axis[0])
reference = spectra[:60].mean(axis=0)
interferent = np.exp(-((axis - 950) ** 2) / 200)
design = np.column_stack([reference, np.ones(100), t, t**2, interferent])
c = np.linalg.lstsq(design, spectra[[0, 100]].T, rcond=None)[0]
out["extended_scatter"] = {
    "interferent": interferent.tolist(),
    "rows_0_100": ((spectra[[0, 100]].T - design[:, 1:] @ c[1:]) / c[0]).T.tolist(),
}

shares = few / few.sum(axis=1, keepdims=True)
logs = np.log(few + 0.5)
out["row"] = {
    "sum_row_2": (1e6 * shares[2]).tolist(),
    "area_row_2": (few[2] / np.trapezoid(few[2], 850 + 20.0 * np.arange(10))).tolist(),
    "centered_log_ratio_row_2": (logs[2] - logs[2].mean()).tolist(),
}

median = np.median(few[:8], axis=0)
out["quotient_rows"] = (few / np.median(few / median, axis=1, keepdims=True)).tolist()

target = np.sort(few[:8], axis=1).mean(axis=0)
ranks = st.rankdata(few, axis=1, method="average")
out["quantile_rows"] = np.interp(ranks, np.arange(1, 11), target).tolist()

order = np.array([1, 4, 6, 9, 13, 14, 20, 23, 30, 31, 38, 40.0])
quality = few[:, 0] * (1 + 0.02 * order)
smooth = lowess(quality, order, frac=0.5, it=0, delta=0, return_sorted=False)
out["drift"] = {
    "order": order.tolist(),
    "values": quality.tolist(),
    "smooth": smooth.tolist(),
    "line": np.polyval(np.polyfit(order, quality, 1), order).tolist(),
}

covariates = np.column_stack([np.sin(np.arange(12.0)), np.arange(12.0) ** 2])
fit = LinearRegression().fit(covariates[:8], few[:8])
away = (covariates - covariates[:8].mean(axis=0)) @ fit.coef_.T
out["covariate_removal"] = {"covariates": covariates.tolist(), "rows": (few - away).tolist()}

pca = PCA(n_components=3, svd_solver="full").fit(spectra[:60])
sign = np.sign(pca.components_[np.arange(3), np.abs(pca.components_).argmax(axis=1)])
scores = pca.transform(spectra) * sign
out["scores"] = {"row_0": scores[0].tolist(), "row_150": scores[150].tolist()}

holes = spectra[:40, ::5].copy()
holes[3, 4] = holes[17, 0] = holes[17, 1] = holes[30, 19] = np.nan
filled = np.where(np.isnan(holes), np.nanmean(holes, axis=0), holes)
for _ in range(20000):
    mean = filled.mean(axis=0)
    u, s, v = np.linalg.svd(filled - mean, full_matrices=False)
    filled = np.where(np.isnan(holes), mean + (u[:, :2] * s[:2]) @ v[:2], holes)
out["low_rank"] = {"cells": [[3, 4], [17, 0], [17, 1], [30, 19]], "truth": spectra[:40, ::5][[3, 17, 17, 30], [4, 0, 1, 19]].tolist(),
                   "values": filled[[3, 17, 17, 30], [4, 0, 1, 19]].tolist()}

r = np.array([np.corrcoef(spectra[:60, j], fat[:60])[0, 1] for j in range(100)])
out["relevance"] = {
    "numbers": np.sort(np.argsort(-(r**2), kind="stable")[:7]).tolist(),
    "classes": None,
}
classes = (np.arange(60) * 7) % 3
f = np.array([st.f_oneway(*[spectra[:60][classes == g, j] for g in range(3)]).statistic for j in range(100)])
out["relevance"]["classes"] = np.sort(np.argsort(-f, kind="stable")[:7]).tolist()

rossi = np.loadtxt("rossi.csv", delimiter=",", skiprows=1)
score = []
for j in range(2, 9):
    model = PHReg(rossi[:, 0], rossi[:, j : j + 1], status=rossi[:, 1], ties="breslow")
    score.append((model.score(np.zeros(1)) ** 2 / -model.hessian(np.zeros(1))[0]).item())
out["relevance"]["times_score"] = score

print(json.dumps(out, indent=0))
