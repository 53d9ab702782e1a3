#!/usr/bin/env python3
"""Mean dwell times by SciPy's sparse LU in double precision, as reference values.

Run by hand:   python3 scipy_reference.py > scipy_reference.json
With --time it prints, instead, how long SciPy takes for the latch at 100 and 200
copies, one factorisation a direction.

The generator of each network is written down here a second time, on a fixed box;
leaving the box ends a dwell as entering the other core does. Ordinary elimination
loses a digit for every power of ten in the dwell time; the condition is noted
as the expected relative error, 1e-15 times the dwell time times the fastest rate.
"""
import json
import sys
import time

import numpy as np
import scipy
from scipy.linalg import solve_continuous_lyapunov
from scipy.sparse import csc_matrix
from scipy.sparse.linalg import splu


def generator(shape, reactions):
    """Negative generator on the whole box [0, shape), leaving it counted as lost."""
    n = int(np.prod(shape))
    points = np.indices(shape).reshape(len(shape), -1)
    index = np.arange(n)
    rows, cols, values, total = [], [], [], np.zeros(n)
    for change, rate in reactions:
        a = rate(*points)
        q = points + np.array(change)[:, None]
        total += a
        ok = (a > 0)
        for k, size in enumerate(shape):
            ok &= (q[k] >= 0) & (q[k] < size)
        j = np.ravel_multi_index(tuple(q[:, ok]), shape)
        rows.append(index[ok])
        cols.append(j)
        values.append(-a[ok])
    rows.append(index)
    cols.append(index)
    values.append(total)
    m = csc_matrix((np.concatenate(values), (np.concatenate(rows), np.concatenate(cols))), shape=(n, n))
    return m, points, total.max()


def dwell(m, cores, starts, a):
    """Mean dwell from start a, and where it ends, core by core."""
    inside = np.ones(m.shape[0], bool)
    for b, core in enumerate(cores):
        if b != a:
            inside &= ~core
    keep = np.flatnonzero(inside)
    lu = splu(m[keep][:, keep].tocsc())
    at = np.searchsorted(keep, starts[a])
    ends = [0.0 if b == a else float(lu.solve(np.asarray(-m[keep][:, np.flatnonzero(c)].sum(axis=1)).ravel())[at])
            for b, c in enumerate(cores)]
    return float(lu.solve(np.ones(len(keep)))[at]), ends


def latch(copies, shape):
    leak, drive, half, b, k, a = 0.02, 1.0, 1.0, 1.0, 1.0, 0.45
    w = copies
    reactions = [
        ((1, 0), lambda m, p: w * (leak + drive * (p / w) ** 2 / (half**2 + (p / w) ** 2))),
        ((-1, 0), lambda m, p: b * m * 1.0),
        ((0, 1), lambda m, p: k * m * 1.0),
        ((0, -1), lambda m, p: a * p * 1.0),
    ]
    m, points, fastest = generator(shape, reactions)
    roots = np.roots([a * b, -(leak + drive) * k, a * b * half**2, -leak * k * half**2])
    cores, starts = [], []
    for x in (min(roots.real), max(roots.real)):
        centre = np.array([a * x / k, x]) * w
        slope = drive * 2 * x * half**2 / (half**2 + x**2) ** 2
        jac = np.array([[-b, slope], [k, -a]])
        noise = np.diag([2 * b * centre[0], 2 * a * centre[1]])
        shape_matrix = np.linalg.inv(solve_continuous_lyapunov(jac, -noise))
        d = points - centre[:, None]
        cores.append(np.einsum("in,ij,jn->n", d, shape_matrix, d) <= 1)
        starts.append(np.ravel_multi_index(tuple(np.rint(centre).astype(int)), shape))
    return m, cores, starts, fastest


def trio(top, shape):
    def make(x, y):
        return top / (1.0 + x.astype(float) ** 2) / (1.0 + y.astype(float) ** 2)
    reactions = [
        ((1, 0, 0), lambda u, v, w: make(v, w)), ((-1, 0, 0), lambda u, v, w: 1.0 * u),
        ((0, 1, 0), lambda u, v, w: make(u, w)), ((0, -1, 0), lambda u, v, w: 1.1 * v),
        ((0, 0, 1), lambda u, v, w: make(u, v)), ((0, 0, -1), lambda u, v, w: 1.2 * w),
    ]
    m, points, fastest = generator(shape, reactions)
    cores, starts = [], []
    for s in range(3):
        low, high, start = np.zeros(3, int), np.full(3, 2), np.zeros(3, int)
        low[s], high[s], start[s] = 4, 9, 5
        cores.append(np.all((points >= low[:, None]) & (points <= high[:, None]), axis=0))
        starts.append(np.ravel_multi_index(tuple(start), shape))
    return m, cores, starts, fastest


def main():
    if "--time" in sys.argv:
        for copies, shape in ((100, (180, 381)), (200, (316, 676))):
            m, cores, starts, _ = latch(copies, shape)
            for a in range(2):
                begin = time.time()
                t, _ = dwell(m, cores, starts, a)
                print(f"copies {copies}, {m.shape[0]} states, direction {a}: {t:.10g}, {time.time() - begin:.2f} s")
        return
    out = {"versions": {"python": sys.version.split()[0], "numpy": np.__version__, "scipy": scipy.__version__}, "cases": []}
    cases = [("latch", c, shape, latch(c, shape)) for c, shape in ((20, (61, 131)), (40, (91, 191)), (80, (151, 311)))]
    cases.append(("trio", 5, (17, 16, 15), trio(5, (17, 16, 15))))
    for name, copies, shape, (m, cores, starts, fastest) in cases:
        means, ends = zip(*(dwell(m, cores, starts, a) for a in range(len(cores))))
        out["cases"].append({
            "network": name, "copies": copies, "high": [s - 1 for s in shape], "core_points": [int(c.sum()) for c in cores],
            "mean": means, "end": ends, "expected_error": [1e-15 * t * fastest for t in means],
        })
    json.dump(out, sys.stdout, indent=1)
    print()


main()
