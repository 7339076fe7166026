"""Prints what numpy and scipy make of one curve: the figures frozen in tests/standards/{baselines,savitzkyGolay}.test.ts."""
import numpy as np
import scipy
from scipy.linalg import solveh_banded
from scipy.signal import savgol_filter
n = 120
i = np.arange(n)
y = 50 + 0.02 * (i - 40.0) ** 2 / 4 + 90 / (1 + ((i - 30) / 3.0) ** 2) + 60 / (1 + ((i - 75) / 5.0) ** 2) + ((i * 37) % 11 - 5) * 0.4
def smooth(w, lam):
    ab = np.zeros((3, n))
    d0 = np.full(n, 6.0); d0[[0, -1]] = 1; d0[[1, -2]] = 5
    d1 = np.full(n - 1, -4.0); d1[[0, -1]] = -2
    ab[2] = w + lam * d0; ab[1, 1:] = lam * d1; ab[0, 2:] = lam
    return solveh_banded(ab, w * y)
def asls(lam, p):
    w = np.ones(n)
    while True:
        z = smooth(w, lam); new = np.where(y > z, p, 1 - p)
        if (new == w).all(): return z
        w = new
def airpls(lam, rounds):
    w = np.ones(n)
    for t in range(1, rounds + 1):
        z = smooth(w, lam); d = y - z; s = -d[d < 0].sum()
        if s < 0.001 * np.abs(y).sum() or t == rounds: return z
        w = np.where(d >= 0, 0.0, np.exp(t * np.abs(d) / s)); w[0] = w[-1] = np.exp(t * d[d < 0].max() / s)
def arpls(lam, tol):
    w = np.ones(n)
    while True:
        z = smooth(w, lam); d = y - z; m = d[d < 0].mean(); s = d[d < 0].std(ddof=1)
        new = 1 / (1 + np.exp(2 * (d - (2 * s - m)) / s))
        if np.linalg.norm(w - new) / np.linalg.norm(w) < tol: return z
        w = new
def modpoly(order, rounds):
    cut = y.copy(); x = 2 * i / (n - 1) - 1
    for t in range(rounds):
        fit = np.polynomial.legendre.legval(x, np.polynomial.legendre.legfit(x, cut, order)); cut = np.minimum(cut, fit)
    return fit
at = [0, 1, 29, 30, 60, 75, 90, 118, 119]
for name, v in [('asls', asls(1e4, 0.01)), ('airpls', airpls(1e4, 20)), ('arpls', arpls(1e4, 1e-3)), ('modpoly', modpoly(4, 50)),
                ('sg0', savgol_filter(y, 9, 3)), ('sg1', savgol_filter(y, 11, 2, deriv=1, delta=0.5)), ('sg2', savgol_filter(y, 15, 4, deriv=2, delta=2.0))]:
    print(name, ', '.join(repr(float(v[k])) for k in at))
print("numpy", np.__version__, "scipy", scipy.__version__)
