#!/usr/bin/env python3
"""In-plane natural frequencies of hanging cables by finite elements, independent of any closed form.

Bar elements with large displacements, unstressed lengths from the exact elastic catenary, equilibrium by Newton, then the
generalised eigenproblem of tangent stiffness and lumped mass (scipy.sparse.linalg.eigsh). Bending as second differences of the
displacement across the cable, its ends pinned or clamped by mirror nodes. Prints the first two symmetric and antisymmetric modes.
"""
import numpy as np, scipy.sparse as sp
from scipy.sparse.linalg import eigsh, spsolve
from scipy.optimize import fsolve

G = 9.80665

def catenary(l, r, h, w, ea):
    """Unstressed length and upward force at A of the elastic catenary with horizontal tension h."""
    def miss(p):
        s0, va = p[0] * l, p[1] * w * l
        vb = va - w * s0            # downward pull left at B
        x = h * s0 / ea + h / w * (np.arcsinh(va / h) - np.arcsinh(vb / h))
        y = -(va * s0 - w * s0 * s0 / 2) / ea - (np.hypot(h, va) - np.hypot(h, vb)) / w
        return [x / l - 1, (y - r) / l]
    s = np.hypot(l, r)
    p, info, ok, msg = fsolve(miss, [s / l, 0.5 * s / l - h * r / l / (w * l)], full_output=True, xtol=1e-14)
    assert ok == 1 or max(abs(info['fvec'])) < 1e-11, msg
    return p[0] * l, p[1] * w * l

def modes(l, r, h, w, ea, ei, ends, n=1200):
    s0, va = catenary(l, r, h, w, ea)
    s = np.linspace(0, s0, n + 1)
    v = va - w * s
    x = h * s / ea + h / w * (np.arcsinh(va / h) - np.arcsinh(v / h))
    y = -(va * s - w * s * s / 2) / ea - (np.hypot(h, va) - np.hypot(h, v)) / w
    p = np.column_stack([x, y]); l0 = s0 / n
    load = np.zeros((n + 1, 2)); load[1:-1, 1] = -w * l0
    free = np.arange(2, 2 * n)
    def assemble(p):
        d = np.diff(p, axis=0); L = np.hypot(*d.T); e = d / L[:, None]
        t = ea * (L / l0 - 1)
        f = np.zeros_like(p); f[:-1] += t[:, None] * e; f[1:] -= t[:, None] * e
        ee = e[:, :, None] * e[:, None, :]
        k = (ea / l0) * ee + (t / L)[:, None, None] * (np.eye(2) - ee)
        rows, cols, vals = [], [], []
        for a, b, sg in ((0, 0, 1), (1, 1, 1), (0, 1, -1), (1, 0, -1)):
            for i in range(2):
                for j in range(2):
                    rows.append(2 * (np.arange(n) + a) + i); cols.append(2 * (np.arange(n) + b) + j); vals.append(sg * k[:, i, j])
        K = sp.csc_matrix((np.concatenate(vals), (np.concatenate(rows), np.concatenate(cols))), shape=(2 * n + 2,) * 2)
        return K, f
    for _ in range(20):
        K, f = assemble(p)
        res = (f + load).ravel()[free]
        if np.max(np.abs(res)) < 1e-9 * w * l: break
        p.ravel()[free] += spsolve(K[free][:, free], res)
    K, _ = assemble(p)
    if ei:
        d = np.diff(p, axis=0); hs = np.mean(np.hypot(*d.T))
        t = np.gradient(p, axis=0); t /= np.hypot(*t.T)[:, None]
        N = sp.csr_matrix((np.concatenate([-t[:, 1], t[:, 0]]), (np.tile(np.arange(n + 1), 2), np.concatenate([2 * np.arange(n + 1), 2 * np.arange(n + 1) + 1]))), shape=(n + 1, 2 * n + 2))
        C = sp.diags([1, -2, 1], [0, 1, 2], shape=(n - 1, n + 1)).tolil()
        weight = np.full(n - 1, 1.0)
        if ends == 'clamped':
            top = sp.lil_matrix((2, n + 1)); top[0, 1] = 2; top[1, n - 1] = 2
            C = sp.vstack([C, top]); weight = np.concatenate([weight, [0.5, 0.5]])
        C = C.tocsr() @ N
        K = (K + ei / hs**3 * C.T @ sp.diags(weight) @ C).tocsc()
    M = sp.diags(np.full(2 * (n - 1), w / G * l0)).tocsc()
    val, vec = eigsh(K[free][:, free], k=10, M=M, sigma=0)
    order = np.argsort(val); out = {'s': [], 'a': []}
    c = np.array([-r, l]) / np.hypot(l, r)
    for i in order:
        u = vec[:, i].reshape(-1, 2) @ c
        out['s' if u @ u[::-1] > 0 else 'a'].append(np.sqrt(val[i]) / 2 / np.pi)
    return out['s'][:2] + out['a'][:2]

print('name,l_m,rise_m,H_N,w_N_per_m,EA_N,EI_Nm2,ends,f1_Hz,f3_Hz,f2_Hz,f4_Hz')
for name, l, rise, h, w, ea in (
        ('taut level', 96, 0, 21900, 38, 14e6), ('cross-over level', 100, 0, 50000, 100, 70e6), ('deep level', 100, 0, 31250, 100, 200e6),
        ('taut guy', 38, 24, 90000, 37, 75e6), ('inclined 30 deg', 100, 57.735, 60000, 100, 40e6), ('steep stay', 60, 60, 200000, 60, 150e6)):
    for ei, ends in ((0, 'pinned'), (4e3, 'pinned'), (4e3, 'clamped')):
        print(','.join([name, *map(repr, (l, rise, h, w, ea, ei)), ends] + ['%.6f' % f for f in modes(l, rise, h, w, ea, ei, ends)]), flush=True)
