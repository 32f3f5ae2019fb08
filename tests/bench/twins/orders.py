"""(b) Trial order: every site in an order of its own, all pairs of a permutation as one product.

`cherk` makes the lower triangle only, half the work of a general product.
"""
import numpy as np
from scipy.linalg.blas import cherk

from twin import read, report, settings

S = settings()
F, C, N, P = S["features"], S["sites"], S["epochs"], S["permutations"]
u = read("phasors.c64", np.complex64, (F, C, N))
orders = read("orders.u16", np.uint16, (P, C, N)).astype(np.intp)
j, k = np.triu_indices(C, 1)
rows = np.arange(C)[:, None]


def work():
    sums = np.zeros((len(j), F))
    squares = np.zeros((len(j), F))
    for p in range(P):
        shuffled = u[:, rows, orders[p]]
        for f in range(F):
            product = cherk(1.0, shuffled[f].T, trans=2)
            r = np.abs(product[j, k]) / np.float32(N)
            sums[:, f] += r
            squares[:, f] += r * r
    return np.stack([sums, squares])


report(work)
