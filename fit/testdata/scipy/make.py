#!/usr/bin/env python3
"""Make the surveys and reference fits of this folder: invented catenaries with normal errors, fitted by scipy.

vertical: scipy.optimize.least_squares on the vertical residuals, parameters a, s0, z0, tolerances at rounding.
odr: scipy.odr with standard deviations along and up, sstol and partol at rounding; a refinement from its own answer.
Columns of fits.csv: survey, sigma_s, sigma_z, vertical a and u (unit weights scaled by the stated sigma_z), odr a and u
(cov_beta, that is with the stated standard deviations and not scaled by the residual variance).
"""
import csv
import numpy as np
import scipy
from scipy import odr
from scipy.optimize import least_squares

rng = np.random.default_rng(20)
cases = {  # name: a, span, low-point station, points, sigma_s, sigma_z
    "level": (310.0, 120.0, 60.0, 31, 0.004, 0.005),
    "inclined": (180.0, 90.0, -70.0, 25, 0.006, 0.003),
    "taut": (4200.0, 60.0, 400.0, 21, 0.002, 0.002),
    "deep": (40.0, 100.0, 45.0, 40, 0.01, 0.01),
}
rows = []
for name, (a, span, low, n, ss, sz) in cases.items():
    x = np.linspace(0.5, span - 0.5, n)
    z = 50 + a * (np.cosh((x - low) / a) - 1)
    s, z = np.round(x + rng.normal(0, ss, n), 5), np.round(z + rng.normal(0, sz, n), 5)
    with open(name + ".csv", "w", newline="") as f:
        csv.writer(f, lineterminator="\n").writerows([["s", "z"]] + [[f"{u:.5f}", f"{v:.5f}"] for u, v in zip(s, z)])
    # height over the point at mid-survey, in product form; parameters curvature k, slope measure p at mid, height c
    m = (s[0] + s[-1]) / 2
    sinhc = lambda u: np.where(np.abs(u) < 1e-5, 1 + u * u / 6, np.sinh(u) / np.where(u == 0, 1, u))
    f = lambda b, u: b[2] + 2 * np.sinh(b[0] * (u - m) / 2 + b[1]) * (u - m) / 2 * sinhc(b[0] * (u - m) / 2)
    q = np.polyfit(s - m, z, 2)
    b0 = [2 * q[0] / np.hypot(1, q[1]), np.arcsinh(q[1]), q[2]]
    r = least_squares(lambda b: (f(b, s) - z) / sz, b0, xtol=1e-15, ftol=1e-15, gtol=1e-15, x_scale="jac", method="lm")
    for _ in range(5):
        r = least_squares(lambda b: (f(b, s) - z) / sz, r.x, xtol=1e-15, ftol=1e-15, gtol=1e-15, x_scale="jac", jac="cs")
    cov = np.linalg.inv(r.jac.T @ r.jac)
    beta = r.x
    for _ in range(6):
        o = odr.ODR(odr.RealData(s, z, sx=ss, sy=sz), odr.Model(f), beta0=beta, sstol=1e-16, partol=1e-16, maxit=2000)
        o.set_job(deriv=1)
        out = o.run()
        beta = out.beta
    va, oa = 1 / r.x[0], 1 / beta[0]
    rows.append([name, ss, sz, f"{va:.12g}", f"{np.sqrt(cov[0, 0]) * va**2:.6g}", f"{oa:.12g}", f"{np.sqrt(out.cov_beta[0, 0]) * oa**2:.6g}", f"{out.sum_square:.9g}"])
with open("fits.csv", "w", newline="") as f:
    csv.writer(f, lineterminator="\n").writerows([["survey", "sigma_s", "sigma_z", "vertical_a", "vertical_u", "odr_a", "odr_u", "odr_sum"]] + rows)
print("scipy", scipy.__version__, "numpy", np.__version__)
