#!/usr/bin/env python3
"""Make curves.csv: mixed curves z'' = k (mu sqrt(1 + z'^2) + 1 - mu) through (0, 0) and (span, rise), integrated step by step
by scipy's DOP853 and aimed by the slope at the left end, independently of any closed form or quadrature. Invented cases.

Columns: span, rise, k, mu (inputs); z at a quarter, the middle and three quarters of the span, slope at both ends, arc length.
Run in this folder.
"""
import csv, platform
import numpy as np, scipy
from scipy.integrate import solve_ivp

CASES = [
    (100, 0, 0.004, 0.5), (100, 0, 0.02, 0.1), (100, 0, 0.02, 0.9), (80, 60, 0.01, 0.3), (80, -90, 0.006, 0.7), (60, 100, 0.02, 0.5),
    (300, 25, 0.0001, 0.4), (250, -180, 0.00003, 0.6), (40, 10, 0.05, 0.25), (500, 50, 0.0015, 0.75), (30, 0, 0.09, 0.5), (120, 40, -0.004, 0.5),
]


def shoot(t0, span, k, mu, dense=False):
    def rhs(s, v):
        z, t, _, dz, dt = v  # height, slope, arc, and the first two by the slope at the left end
        root = np.hypot(1, t)
        return [t, k * (mu * root + 1 - mu), root, dt, k * mu * t / root * dt]

    return solve_ivp(rhs, (0, span), [0, t0, 0, 0, 1], method="DOP853", rtol=1e-13, atol=1e-13, dense_output=dense,
                     t_eval=None if dense else [span], max_step=span / 50)


with open("curves.csv", "w", newline="") as f:
    w = csv.writer(f, lineterminator="\n")
    w.writerow(["span", "rise", "k", "mu", "z_quarter", "z_mid", "z_three_quarter", "slope_left", "slope_right", "length", "made_by"])
    made = f"scipy {scipy.__version__}, Python {platform.python_version()}"
    for span, rise, k, mu in CASES:
        t0 = rise / span - k * span / 2
        for _ in range(60):
            end = shoot(t0, span, k, mu).y[:, -1]
            step = (rise - end[0]) / end[3]
            t0 += np.clip(step, -1, 1)
            if abs(step) < 1e-14 * (1 + abs(t0)):
                break
        out = []
        for part in (0.25, 0.5, 0.75):
            out.append(shoot(t0, part * span, k, mu).y[0, -1])
        end = shoot(t0, span, k, mu).y[:, -1]
        w.writerow([span, rise, k, mu] + [f"{float(v):.14g}" for v in out + [t0, end[1], end[2]]] + [made])
