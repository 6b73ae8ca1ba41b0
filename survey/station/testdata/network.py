"""Independent adjustment of network.csv with scipy.optimize.least_squares; prints network-expected.csv. Invented data, seed 11."""
import csv, math, random
import numpy as np
from scipy.optimize import least_squares

random.seed(11)
R, K = 6371e3, 0.13
SA, SD, PPM = 3 / 3600 * math.pi / 180, 0.002, 2e-6
marks = {"M1": (0, 0, 10), "M2": (150, 20, 12), "M3": (60, 140, 11)}
setups = {"S1": (40, 50, 11.5, 0.4), "S2": (110, 80, 13.0, 2.1), "S3": (75, 20, 12.2, 4.0)}
points = {"T1": (70, 60, 20), "T2": (100, 50, 22), "P": (80, 90, 30)}
known = dict(marks)


def model(setup, p):
    de, dn = p[0] - setup[0], p[1] - setup[1]
    hd = math.hypot(de, dn)
    dz = p[2] - setup[2] - (1 - K) * hd * hd / (2 * R)
    return math.atan2(de, dn) - setup[3], math.atan2(hd, dz), math.hypot(hd, dz)


rows = []
for s, pos in setups.items():
    for t, p in {**marks, **points}.items():
        h, z, d = model(pos, p)
        h, z, d = h + random.gauss(0, SA), z + random.gauss(0, SA), d + random.gauss(0, SD + PPM * d)
        rows.append([s, t, round(h % (2 * math.pi), 9), round(z, 9), 0.0 if t == "P" else round(d, 5)])
with open("network.csv", "w", newline="") as f:
    w = csv.writer(f); w.writerow(["setup", "target", "horizontal_rad", "zenith_rad", "slope_m"]); w.writerows(rows)

free = list(points)
U = 0.001


def unpack(x):
    st = {s: x[4 * i:4 * i + 4] for i, s in enumerate(setups)}
    names = list(marks) + free
    return st, {n: x[12 + 3 * i:15 + 3 * i] for i, n in enumerate(names)}


def resid(x):
    st, pts = unpack(x)
    out = []
    for s, t, h, z, d in rows:
        mh, mz, md = model(st[s], pts[t])
        out += [math.remainder(h - mh, 2 * math.pi) / SA, (z - mz) / SA]
        if d > 0:
            out.append((d - md) / (SD + PPM * d))
    for n, p in marks.items():
        out += [(p[k] - pts[n][k]) / U for k in range(3)]
    return np.array(out)


x0 = np.array([v for s in setups.values() for v in s] + [v for p in {**marks, **points}.values() for v in p], float)
# scaled and differenced centrally: the answer must not rest on derivatives written twice by the same hand
sol = least_squares(resid, x0, jac="3-point", x_scale="jac", xtol=1e-15, ftol=1e-15, gtol=1e-15)
cov = np.linalg.inv(sol.jac.T @ sol.jac)
st, pts = unpack(sol.x)
with open("network-expected.csv", "w") as f:
    f.write("name,e_m,n_m,z_m,orientation_rad,u_e_m,u_n_m,u_z_m\n")
    for i, s in enumerate(setups):
        u = np.sqrt(np.diag(cov))[4 * i:4 * i + 3]
        f.write(",".join([s] + [f"{v:.10f}" for v in st[s]] + [f"{v:.10f}" for v in u]) + "\n")
    for n in pts:
        f.write(",".join([n] + [f"{v:.10f}" for v in pts[n]] + ["", "", "", ""]) + "\n")
    f.write(f"sum_of_squares,{2 * sol.cost:.10f},,,,,,\ndegrees_of_freedom,{len(sol.fun) - len(sol.x)},,,,,,\n")
