"""(a) Label permutations as a matrix product in blocks that stay in cache, statistics in place."""
import numpy as np

from twin import read, report, settings

S = settings()
V, N, P, NA = S["features"], S["epochs"], S["permutations"], S["epochsA"]
z = np.ascontiguousarray(read("terms.f32", np.float32, (2, V, N)))
labels = read("labels.f32", np.float32, (N, P))
observed = read("observed.f32", np.float32, (V, 1))
tolerance = np.float32(S["tolerance"])
total = z.sum(2)
BLOCK = 64


def work():
    upper = np.empty(V)
    lower = np.empty(V)
    sums = np.empty(V)
    squares = np.empty(V)
    for v in range(0, V, BLOCK):
        e = min(V, v + BLOCK)
        a = z[:, v:e].reshape(-1, N) @ labels
        b = total[:, v:e].reshape(-1, 1) - a
        np.multiply(a, a, out=a)
        np.multiply(b, b, out=b)
        n = e - v
        d = a[:n]
        d += a[n:]
        np.sqrt(d, out=d)
        d *= np.float32(1 / NA)
        r = b[:n]
        r += b[n:]
        np.sqrt(r, out=r)
        r *= np.float32(1 / (N - NA))
        d -= r
        sums[v:e] = d.sum(1)
        squares[v:e] = np.einsum("ij,ij->i", d, d)
        upper[v:e] = np.count_nonzero(d >= observed[v:e] - tolerance, axis=1)
        lower[v:e] = np.count_nonzero(d <= observed[v:e] + tolerance, axis=1)
    return np.stack([upper, lower, sums, squares])


report(work)
