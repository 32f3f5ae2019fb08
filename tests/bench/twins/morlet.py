"""(e) Morlet phases: spectra of real epochs, products inside each kernel's band only, folded so that
a short inverse transform yields the kept samples alone."""
import numpy as np
import scipy.fft as sf

from twin import read, report, settings

S = settings()
E, L, M, NF, NT, STEP = S["epochs"], S["samples"], S["size"], S["frequencies"], S["times"], S["step"]
x = read("epochs.f32", np.float32, (E, L))
kernels = read("kernels.f32", np.float32, (NF, M))
FIRST = S["first"]
FOLDED = M // STEP
bands = []
for f in range(NF):
    band = np.flatnonzero(np.abs(kernels[f]) > 1e-6 * np.abs(kernels[f]).max())
    bands.append((band[0], band[-1] + 1))


def work():
    spectra = sf.rfft(x, M, axis=1)
    turned = spectra * np.exp(2j * np.pi * np.arange(M // 2 + 1) * FIRST / M).astype(np.complex64)
    products = np.zeros((E, NF, FOLDED), np.complex64)
    for f, (k, end) in enumerate(bands):
        end = min(end, M // 2 + 1)
        while k < end:
            e = min(end, (k // FOLDED + 1) * FOLDED)
            into = slice(k % FOLDED, k % FOLDED + e - k)
            products[:, f, into] += turned[:, k:e] * kernels[f, k:e]
            k = e
    y = sf.ifft(products, axis=2, overwrite_x=True)[:, :, :NT]
    y /= np.abs(y)
    return y.view(np.float32)


report(work)
