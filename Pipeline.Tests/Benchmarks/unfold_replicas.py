"""Unfolds every replica with scipy.optimize.nnls, and times it.

Folder (argument 1) holds float64: design [cells][bins], weights [bins], penalty [cells][cells], net [replicas][bins].
Minimises sum_i w_i (net_i - sum_c A_ic x_c)^2 + x^T P x over x >= 0. Argument 2: measured runs.
Writes molecules [replicas][cells] beside them and prints the seconds of every run as JSON.
"""
import json
import pathlib
import sys
import time

import numpy as np
from scipy.linalg import qr
from scipy.optimize import nnls

folder, repeats = pathlib.Path(sys.argv[1]), int(sys.argv[2])
weights = np.fromfile(folder / "weights")
bins = len(weights)
design = np.ascontiguousarray(np.fromfile(folder / "design").reshape(-1, bins).T)
cells = design.shape[1]
penalty = np.fromfile(folder / "penalty").reshape(cells, cells)
net = np.fromfile(folder / "net").reshape(-1, bins)


def stacked():
    """Weighted rows of the response over the square root of the penalty."""
    root = np.sqrt(weights)
    return np.vstack([root[:, None] * design, np.linalg.cholesky(penalty).T]), np.hstack([net * root, np.zeros((len(net), cells))])


def solve_stacked():
    """One stacked problem for each replica."""
    matrix, right = stacked()
    return np.array([nnls(matrix, b)[0] for b in right])


def solve_reduced():
    """The same after one orthogonal reduction of the rows that all replicas share: as many rows as cells are left."""
    matrix, right = stacked()
    q, r = qr(matrix, mode="economic")
    return np.array([nnls(r, b)[0] for b in right @ q])


def measure(solve):
    molecules = solve()
    seconds = []
    for _ in range(repeats):
        start = time.perf_counter()
        solve()
        seconds.append(time.perf_counter() - start)
    return molecules, seconds


answers = {name: measure(solve) for name, solve in (("stacked", solve_stacked), ("reduced", solve_reduced))}
for name, (molecules, _) in answers.items():
    molecules.tofile(folder / name)
json.dump({name: seconds for name, (_, seconds) in answers.items()}, sys.stdout)
