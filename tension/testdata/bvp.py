#!/usr/bin/env python3
"""Make elastic-bvp.csv: elastic cables under self weight, deck load, temperature and a point load, solved as a two-point
boundary-value problem by collocation (scipy.integrate.solve_bvp), independently of any closed form or quadrature.

Unknown functions of the unstressed length s: x, y (run and rise from support A), t = V/H (slope); H is a parameter.
  x' = g (1/sqrt(1+t^2) + H/EA),  y' = t x',  t' = (w + q x')/H,  g = 1 + alpha dt
A point load P at the fraction fp of the unstressed length makes t jump by P/H. Units N and m.
"""
import csv
import itertools
import numpy as np
import scipy
from scipy.integrate import solve_bvp


def solve(span, rise, s0, w, q, ea, alpha, dt, p, fp):
    g, cut = 1 + alpha * dt, (fp if p else 0.5)
    len1, len2 = cut * s0, (1 - cut) * s0

    def rhs(_, v, par):
        h = par[0] * 1e4
        out = []
        for k, length in ((0, len1), (3, len2)):
            t = v[k + 2]
            dx = g * (1 / np.sqrt(1 + t * t) + h / ea)
            out += [dx * length, t * dx * length, (w + q * dx) / h * length]
        return np.array(out)

    def bc(a, b, par):
        h = par[0] * 1e4
        return np.array([a[0], a[1], a[3] - b[0], a[4] - b[1], a[5] - b[2] - load / h, b[3] - span, b[4] - rise])

    u = np.linspace(0, 1, 41)
    k = 8 * 0.05 / span
    h0 = (w + q) / k
    f = lambda x: rise / span * x + k / 2 * x * (x - span)
    x1, x2 = u * cut * span, cut * span + u * (1 - cut) * span
    v = np.array([x1, f(x1), rise / span + k * (x1 - span / 2), x2, f(x2), rise / span + k * (x2 - span / 2)])
    par = np.array([h0 / 1e4])
    for part in np.linspace(0, 1, 6) if p else [1.0]:
        load = p * part
        r = solve_bvp(rhs, bc, u, v, p=par, tol=1e-9, max_nodes=200000)
        if not r.success:
            raise SystemExit(r.message)
        u, v, par = r.x, r.y, r.p
    h = par[0] * 1e4
    return [h, -h * v[2, 0], h * v[5, -1], v[3, 0], v[4, 0]]


if __name__ == "__main__":
    cols = "id span rise s0 w q EA alpha dt P fp H V_left V_right x_cut y_cut".split()
    rows, n = [], 0
    for (span, rise), (w, q), (dt, p, fp), over in itertools.product(
            [(100, 0), (80, 35)], [(0, 900), (60, 700), (300, 250)], [(0, 0, 0.5), (30, 0, 0.5), (-20, 9000, 0.3)], [0.004, 0.03]):
        n += 1
        s0 = round(np.hypot(span, rise) * (1 + over), 6)
        state = solve(span, rise, s0, w, q, 9e7, 1.2e-5, dt, p, fp)
        rows.append([f"B{n:03d}", span, rise, s0, w, q, 9e7, 1.2e-5, dt, p, fp] + [f"{s:.13g}" for s in state])
    with open("elastic-bvp.csv", "w", newline="") as out:
        csv.writer(out, lineterminator="\n").writerows([cols] + rows)
    print(f"{n} states, scipy {scipy.__version__}, numpy {np.__version__}")
