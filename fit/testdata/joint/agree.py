#!/usr/bin/env python3
"""Surveys (invented: seeded noise on exact curves), each point with its own covariance, and what scipy makes of them.

Writes surveys.csv (points with covariance) and values.csv (constant 1/curvature, its standard uncertainty with the stated
accuracy taken as true, weighted sum of squares at the minimum). Run in this folder.

Methods:
  vertical  scipy.optimize.curve_fit, errors in height alone, 1/sz weights
  odr       scipy.odr, errors in both coordinates, analytic derivatives
  joint     scipy.optimize.least_squares over the curve and all foot points at once, each point whitened by the Cholesky
            factor of its full covariance; the uncertainty is that block of the inverse of the joint normal matrix
"""
import csv, platform
import numpy as np, scipy
from scipy import odr
from scipy.optimize import curve_fit, least_squares


def catenary(s, a, s0, c):
    return c + 2 * a * np.sinh((s - s0) / (2 * a)) ** 2


def catenary_by(s, a, s0, c):
    u = (s - s0) / a
    return np.stack([2 * np.sinh(u / 2) ** 2 - u * np.sinh(u), -np.sinh(u), np.ones_like(s)])


def catenary_slope(s, a, s0, c):
    return np.sinh((s - s0) / a)


def parabola(s, a, s0, c):
    return c + (s - s0) ** 2 / (2 * a)


def parabola_by(s, a, s0, c):
    v = s - s0
    return np.stack([-v * v / (2 * a * a), -v / a, np.ones_like(s)])


def parabola_slope(s, a, s0, c):
    return (s - s0) / a


SHAPES = {"catenary": (catenary, catenary_by, catenary_slope), "parabola": (parabola, parabola_by, parabola_slope)}

# name, shape, span, low point, lowest elevation, constant, points, along sigma, up sigma, correlation, part of the span
SURVEYS = [
    ("level", "catenary", 120.0, 60.0, 10.0, 310.0, 31, 0.005, 0.005, 0.0, (0.0, 1.0)),
    ("inclined", "catenary", 200.0, -180.0, 240.0, 400.0, 25, 0.008, 0.005, 0.0, (0.05, 0.95)),
    ("taut", "catenary", 250.0, 900.0, 120.0, 6000.0, 41, 0.003, 0.002, 0.0, (0.0, 1.0)),
    ("steep", "catenary", 80.0, -12.0, 33.0, 60.0, 35, 0.020, 0.020, 0.0, (0.0, 1.0)),
    ("correlated", "catenary", 150.0, -60.0, 75.0, 240.0, 27, 0.012, 0.009, 0.7, (0.1, 0.8)),
    ("deck", "parabola", 96.0, 40.0, 21.0, 280.0, 17, 0.006, 0.004, 0.0, (0.0, 1.0)),
]


def invent(rng, shape, span, s0, c, a, n, sx, sz, rho, part):
    f = SHAPES[shape][0]
    s = np.linspace(part[0] * span, part[1] * span, n)
    z = f(s, a, s0, c)
    scale = 1 + 0.5 * np.sin(np.arange(n))  # accuracy differs from point to point
    points = []
    for i in range(n):
        sd = np.array([sx, sz]) * scale[i]
        v = np.array([[sd[0] ** 2, rho * sd[0] * sd[1]], [rho * sd[0] * sd[1], sd[1] ** 2]])
        e = np.linalg.cholesky(v) @ rng.standard_normal(2)
        points.append((round(s[i] + e[0], 4), round(z[i] + e[1], 4), v[0, 0], v[0, 1], v[1, 1]))
    return np.array(points)


def vertical(p, shape, start):
    f, by, _ = SHAPES[shape]
    s, z, sz = p[:, 0], p[:, 1], np.sqrt(p[:, 4])
    theta, cov = curve_fit(f, s, z, start, sigma=sz, absolute_sigma=True, jac=lambda s, *t: by(s, *t).T, method="lm",
                           xtol=1e-15, ftol=1e-15, gtol=1e-15, maxfev=100000)
    return theta, np.sqrt(cov[0, 0]), np.sum(((z - f(s, *theta)) / sz) ** 2)


def orthogonal(p, shape, start):
    f, by, slope = SHAPES[shape]
    data = odr.RealData(p[:, 0], p[:, 1], sx=np.sqrt(p[:, 2]), sy=np.sqrt(p[:, 4]))
    model = odr.Model(lambda b, s: f(s, *b), fjacb=lambda b, s: by(s, *b), fjacd=lambda b, s: slope(s, *b))
    o = odr.ODR(data, model, beta0=start, sstol=1e-16, partol=1e-16, maxit=10000)
    o.set_job(deriv=2)
    for _ in range(3):
        out = o.run()
        o.beta0 = out.beta
    return out.beta, np.sqrt(out.cov_beta[0, 0]), out.sum_square


def joint(p, shape, start):
    f, by, slope = SHAPES[shape]
    n = len(p)
    white = [np.linalg.inv(np.linalg.cholesky([[v, c], [c, w]])) for _, _, v, c, w in p]

    def residuals(x):
        t = x[3:]
        d = np.stack([p[:, 0] - t, p[:, 1] - f(t, *x[:3])], 1)
        return np.concatenate([white[i] @ d[i] for i in range(n)])

    def jacobian(x):
        t = x[3:]
        b, k = by(t, *x[:3]), slope(t, *x[:3])
        j = np.zeros((2 * n, 3 + n))
        for i in range(n):
            j[2 * i:2 * i + 2, :3] = -white[i] @ np.stack([np.zeros(3), b[:, i]])
            j[2 * i:2 * i + 2, 3 + i] = -white[i] @ np.array([1, k[i]])
        return j

    x = np.concatenate([start, p[:, 0]])
    x = least_squares(residuals, x, jacobian, x_scale="jac", method="lm", xtol=1e-15, ftol=1e-15, gtol=1e-15).x
    for _ in range(5):  # Gauss-Newton to the last digits
        x = x - np.linalg.lstsq(jacobian(x), residuals(x), rcond=None)[0]
    q, r = np.linalg.qr(jacobian(x))
    cov = np.linalg.inv(r)
    return x[:3], np.sqrt((cov @ cov.T)[0, 0]), np.sum(residuals(x) ** 2)


rng = np.random.default_rng(20260101)
with open("surveys.csv", "w", newline="") as fs, open("values.csv", "w", newline="") as fv:
    ws, wv = csv.writer(fs, lineterminator="\n"), csv.writer(fv, lineterminator="\n")
    ws.writerow(["survey", "s", "z", "var_s", "cov_sz", "var_z"])
    wv.writerow(["survey", "shape", "method", "constant", "u_constant", "sum", "made_by"])
    made = f"scipy {scipy.__version__}, numpy {np.__version__}, Python {platform.python_version()}"
    for name, shape, span, s0, c, a, n, sx, sz, rho, part in SURVEYS:
        p = invent(rng, shape, span, s0, c, a, n, sx, sz, rho, part)
        for row in p:
            ws.writerow([name] + [repr(float(v)) for v in row])
        methods = {"vertical": vertical, "joint": joint}
        if rho == 0:
            methods["odr"] = orthogonal
        for m, fit in methods.items():
            theta, u, total = fit(p, shape, [a, s0, c])
            wv.writerow([name, shape, m, repr(float(theta[0])), repr(float(u)), repr(float(total)), made])
