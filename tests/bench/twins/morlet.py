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
# Bins from -M/2 to M/2 - 1, those within 5 sd of a kernel's spectrum: low kernels reach below zero.
# It leaves out the ripple of the cut-off Gaussian, which ours keeps.
signed = np.fft.fftshift(kernels, axes=1)
turn = np.exp(2j * np.pi * np.arange(-M // 2, M // 2) * FIRST / M).astype(np.complex64)
bands = []
for f in range(NF):
    reach = 5 * S["sigmaBins"][f]
    centre = M // 2 + S["centreBins"][f]
    bands.append((int(np.ceil(centre - reach)), int(np.floor(centre + reach)) + 1))
LOWEST = min(start for start, _ in bands)


def work():
    half = sf.rfft(x, M, axis=1)
    spectra = np.empty((E, M), np.complex64)
    spectra[:, M // 2 :] = half[:, : M // 2]
    if LOWEST < M // 2:
        spectra[:, LOWEST : M // 2] = half[:, M // 2 - LOWEST : 0 : -1].conj()
    products = np.zeros((E, NF, FOLDED), np.complex64)
    for f, (k, end) in enumerate(bands):
        while k < end:
            place = (k - M // 2) % FOLDED
            e = min(end, k + FOLDED - place)
            products[:, f, place : place + e - k] += spectra[:, k:e] * (signed[f, k:e] * turn[k:e])
            k = e
    y = sf.ifft(products, axis=2, overwrite_x=True)[:, :, :NT]
    y /= np.abs(y)
    return y.view(np.float32)


report(work)
