"""Reference values for Read, worked out on another road: dense generalised least squares with numpy.linalg on the covariance as it
is written (not whitened, not orthogonalised), probabilities from scipy.stats, crossing dates from scipy.optimize.brentq.
The model of each history is given, not searched for. Run: python3 reference.py > reference.json"""
import json
import numpy as np
from scipy import stats, optimize

rng = np.random.default_rng(20260611)
out = []
for k in range(12):
    n = [4, 5, 6, 7, 8, 6, 5, 8, 7, 6, 8, 10][k]
    days = np.cumsum(rng.integers(200, 800, n))
    days -= days[0]
    common = 0.003 * (k % 3)
    apart = rng.uniform(0.0008, 0.0015, n)
    kind = ["none", "linear", "log", "step"][k % 4]
    t = days / 365.25
    creep = np.log10(1 + days + 30)
    cols = [np.ones(n)]
    truth = 60 + 0.0 * t
    gap = n // 2
    event = k >= 8
    if event:
        cols.append((np.arange(n) >= 2) * 1.0)
        truth = truth - 0.036 * (np.arange(n) >= 2)
        if kind == "log":
            # retensioned the day before visit 2: creep starts anew
            start = days[2] - 1
            creep = np.where(days >= start, np.log10(1 + start + 30) + np.log10(1 + np.maximum(days - start, 0)), creep)
    if kind == "linear":
        cols.append(t); truth = truth + 0.02 * t
    if kind == "log":
        cols.append(creep); truth = truth + 0.05 * creep
    if kind == "step":
        cols.append((np.arange(n) >= gap) * 1.0); truth = truth + 0.022 * (np.arange(n) >= gap)
    y = truth + apart * rng.standard_normal(n) * (0.7 if kind != "none" else 0.5)
    X = np.column_stack(cols)
    V = np.diag(apart**2) + common**2
    Vi = np.linalg.inv(V)
    C = np.linalg.inv(X.T @ Vi @ X)
    b = C @ X.T @ Vi @ y
    r = y - X @ b
    chi2 = float(r @ Vi @ r)
    rec = dict(name=f"{k+1}-{kind}{'-retensioned' if event else ''}", days=[int(d) for d in days], y=list(y),
               u=list(np.sqrt(apart**2 + common**2)), common=common, kind=kind, event_day=int(days[2] - 1) if event else None,
               gap=gap if kind == "step" else None, last=float(b[-1]), u_last=float(np.sqrt(C[-1, -1])),
               event=float(b[1]) if event else None, u_event=float(np.sqrt(C[1, 1])) if event else None, chi2=chi2,
               p=float(stats.chi2.sf(chi2, n - X.shape[1])))
    if kind == "linear":
        today = float(days[-1])
        limit = float(X[-1] @ b) + 0.1
        def row(d):
            x = np.array(X[-1]); x[-1] = d / 365.25; return x
        def edge(s):
            return optimize.brentq(lambda d: row(d) @ b + s * stats.norm.ppf(0.975) * np.sqrt(row(d) @ C @ row(d)) - limit, today, today + 40 * 365.25, xtol=1e-6)
        rec.update(limit=limit, earliest=edge(1), best=edge(0), latest=edge(-1))
    out.append(rec)
print(json.dumps(out, indent=1))
