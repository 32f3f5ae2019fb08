"""(c1) Time shift by the definition: every epoch of every site rotated by a shift of its own."""
import numpy as np

from twin import read, report, settings

S = settings()
N, F, L, T, P = S["epochs"], S["frequencies"], S["window"], S["times"], S["permutations"]
j = read("j.c64", np.complex64, (N, L, F))
k = read("k.c64", np.complex64, (N, L, F)).conj()
shifts = read("shifts.u16", np.uint16, (P, 2, N)).astype(np.intp)
kept = np.asarray(S["kept"])


def work():
    sums = np.zeros((P, T, F), np.complex64)
    for n in range(N):
        at_j = (kept[None] + shifts[:, 0, n, None]) % L
        at_k = (kept[None] + shifts[:, 1, n, None]) % L
        sums += j[n].take(at_j, axis=0) * k[n].take(at_k, axis=0)
    return (np.abs(sums) / np.float32(N)).transpose(0, 2, 1)


report(work)
