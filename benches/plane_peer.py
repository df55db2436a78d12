"""The same fourth-order step in numpy with scipy.fft on one thread, as one would write it with a two-dimensional transform.

Argument: points per axis. For every line it reads it takes one step, or the step's bare transforms where the line says so,
and answers with the seconds it took, so that benches/plane.rs can take turns with it: TDSE_PEER=1 cargo bench -p tdse-core --bench plane
"""

import os
import sys
import time

os.environ["OMP_NUM_THREADS"] = "1"
import numpy as np  # noqa: E402
import scipy.fft  # noqa: E402


def peer(n, spacing=0.4, tau=0.1, softening=0.8):
    x = (np.arange(n) - (n - 1) / 2) * spacing
    r = np.hypot(x[None, :], x[:, None])
    v = -1 / np.hypot(r, softening)
    slope = 1 / np.hypot(r, softening) ** 3
    gx, gy = slope * x[None, :], slope * x[:, None]
    k = 2 * np.pi * np.fft.fftfreq(n, spacing)
    kinetic = np.exp(-0.25j * tau * (k[None, :] ** 2 + k[:, None] ** 2))
    absorber = np.exp(-tau * 0.01 * np.clip(r - x[-1] + 40, 0, 40) ** 2 / 1600)
    outer = np.exp(-1j * tau * v / 3) * absorber
    corrected = np.exp(-2j / 3 * tau * (v - tau**2 / 48 * (gx**2 + gy**2)))
    inner = r < x[-1] - 40
    psi = np.exp(-(r**2) / 8).astype(complex)
    ex, ey = 0.05, -0.02

    def kick(psi):
        f = scipy.fft.fft2(psi, workers=1, overwrite_x=True)
        f *= kinetic
        return scipy.fft.ifft2(f, workers=1, overwrite_x=True)

    def step(psi):
        density = psi.real**2 + psi.imag**2
        moments = (density.sum(), (density * gx).sum(), (density * gy).sum(), density[inner].sum())
        psi = psi * outer
        psi *= np.exp(-1j * tau / 3 * ex * x)[None, :]
        psi *= np.exp(-1j * tau / 3 * ey * x)[:, None]
        psi = kick(psi)
        psi *= corrected
        psi *= np.exp(-2j / 3 * tau * ex * x)[None, :]
        psi *= np.exp(-2j / 3 * tau * ey * x)[:, None]
        psi *= np.exp(1j * tau**3 / 36 * (ex * gx + ey * gy))
        return kick(psi), moments

    noise = np.exp(1j * r)

    def bare():
        for _ in range(2):
            f = scipy.fft.fft2(noise, workers=1, overwrite_x=True)
            noise[:] = scipy.fft.ifft2(f, workers=1, overwrite_x=True)

    for line in sys.stdin:
        start = time.perf_counter()
        if line.strip() == "bare":
            bare()
        else:
            psi, _ = step(psi)
        print(time.perf_counter() - start, flush=True)


peer(int(sys.argv[1]))
