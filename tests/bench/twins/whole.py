"""The whole null of pairs: matrix product, z, maximum, clusters of both signs."""
import numpy as np
import scipy.ndimage as nd

from twin import read, report, settings

S = settings()
C, N, NA, F, T, P = (S[k] for k in ("sites", "epochs", "epochsA", "frequencies", "times", "permutations"))
V = F * T
u = read("phasors.f32", np.float32, (C, N, 2, V))
u = np.ascontiguousarray((u[:, :, 0] + 1j * u[:, :, 1]).astype(np.complex64))
labels = read("labels.f32", np.float32, (N, P))
pairs = [(a, b) for a in range(C) for b in range(a + 1, C)][: S["pairs"]]
structure = np.zeros((3, 3, 3), int)
structure[1] = nd.generate_binary_structure(2, 1)
BLOCK = 128
FORMING = np.float32(S["formingZ"])


def differences(a, b, d):
    z = a * b.conj()
    parts = np.ascontiguousarray(np.stack([z.real.T, z.imag.T], 1))
    total = parts.sum(2)
    for v in range(0, V, BLOCK):
        e = min(V, v + BLOCK)
        s = (parts[v:e].reshape(-1, N) @ labels).reshape(e - v, 2, P)
        r = total[v:e, :, None] - s
        np.multiply(s, s, out=s)
        np.multiply(r, r, out=r)
        x = np.sqrt(s[:, 0] + s[:, 1])
        x *= np.float32(1 / NA)
        y = np.sqrt(r[:, 0] + r[:, 1])
        y *= np.float32(1 / (N - NA))
        x -= y
        d[v:e] = x


def masses(z, largest):
    for sign in (1, -1):
        marked = z > FORMING if sign > 0 else z < -FORMING
        names, count = nd.label(marked, structure=structure)
        at = names[marked]
        mass = np.abs(np.bincount(at, z[marked], minlength=count + 1))
        owner = np.empty(count + 1, int)
        owner[at] = np.repeat(np.arange(P), marked.reshape(P, -1).sum(1))
        np.maximum.at(largest, owner[1:], mass[1:])


def work():
    best = np.zeros(P)
    largest = np.zeros(P)
    d = np.empty((V, P), np.float32)
    for a, b in pairs:
        differences(u[a], u[b], d)
        d -= d.mean(1)[:, None]
        d /= d.std(1, ddof=1)[:, None]
        np.maximum(best, np.abs(d).max(0), out=best)
        masses(np.ascontiguousarray(d.T).reshape(P, F, T), largest)
    return np.stack([best, largest])


report(work)
