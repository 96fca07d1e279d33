"""A small set of biased windows, its maximum-likelihood reduced free energies and their covariance, all by dense algebra.

Needs Python 3.10 or later, numpy, scipy and mpmath. Writes samples.csv, windows.csv, f.csv and covariance_f.csv beside itself.

Energies are in kT, positions in nm. The reduced bias of window k is b_k(x) = k (x - c)^2 / 2 + s x with the force constant k,
center c and slope s of windows.csv. The reduced free energies f minimize
    A(f) = sum_n ln sum_k N_k exp(f_k - b_k(x_n)) - sum_k N_k f_k,    f_0 = 0,
(Kong et al. 2003, J. R. Stat. Soc. B 65, 585; Shirts & Chodera 2008, J. Chem. Phys. 129, 124105; convex form of Zhu & Hummer
2012, J. Comput. Chem. 33, 453). They are found in double precision by SciPy and again by Newton steps at 50 digits.
The covariance is the asymptotic one for independent samples, from the singular values of the matrix of weights
(Shirts & Chodera 2008, appendix D), checked against the inverse Hessian, and quoted for f_k - f_0.
"""

from pathlib import Path

import mpmath
import numpy as np
from mpmath import mp, mpf
from scipy.linalg import svd
from scipy.optimize import minimize
from scipy.special import logsumexp

FOLDER = Path(__file__).resolve().parent
SEED = 20261204
# kind, center, force constant, slope, number of samples. The last window is the unbiased one.
WINDOWS = (
    ("harmonic", -0.62, 41.0, 0.0, 170),
    ("harmonic", -0.33, 57.5, 0.0, 300),
    ("harmonic", -0.11, 83.0, -2.3, 215),
    ("harmonic", 0.14, 64.0, 0.0, 150),
    ("harmonic", 0.37, 96.5, 0.0, 260),
    ("harmonic", 0.71, 35.0, 0.0, 185),
    ("linear", 0.0, 0.0, 3.7, 230),
    ("none", 0.0, 0.0, 0.0, 275),
)


def potential(x):
    """A double well with minima near -0.5 and 0.5 nm, a barrier of 4.2 kT and a tilt."""
    y = x / 0.5
    return 4.2 * (y * y - 1) ** 2 + 0.65 * y


def bias(window, x):
    _, center, force_constant, slope, _ = window
    return force_constant * (x - center) ** 2 / 2 + slope * x


def draw_samples():
    """Inverse distribution function on a fine grid, rounded to six decimals."""
    generator = np.random.Generator(np.random.PCG64(SEED))
    grid = np.linspace(-1.6, 1.6, 320_001)
    samples = []
    for window in WINDOWS:
        weight = np.exp(-potential(grid) - bias(window, grid))
        below = np.concatenate([[0.0], np.cumsum((weight[1:] + weight[:-1]) / 2)])
        samples.append(np.round(np.interp(generator.random(window[4]), below / below[-1], grid), 6))
    return samples


def solve_in_double(energies, counts):
    """f by SciPy's trust-region method, then Newton steps until they are below 1e-12."""
    ln_counts = np.log(counts)

    def shares(f):
        exponents = ln_counts + f - energies
        return np.exp(exponents - logsumexp(exponents, axis=1, keepdims=True))

    full = lambda free: np.concatenate([[0.0], free])
    objective = lambda free: logsumexp(ln_counts + full(free) - energies, axis=1).sum() - counts @ full(free)
    gradient = lambda free: (shares(full(free)).sum(axis=0) - counts)[1:]

    def hessian(free):
        share = shares(full(free))
        return (np.diag(share.sum(axis=0)) - share.T @ share)[1:, 1:]

    free = minimize(objective, np.zeros(len(counts) - 1), jac=gradient, hess=hessian, method="trust-exact").x
    for _ in range(20):
        step = -np.linalg.solve(hessian(free), gradient(free))
        free = free + step
        if np.abs(step).max() < 1e-12:
            return full(free), hessian(free), shares(full(free))
    raise ArithmeticError("Newton steps did not shrink")


def solve_in_fifty_digits(samples, start):
    mp.dps = 50
    # The printed decimals themselves, not their nearest doubles.
    windows = [(kind, *(mpf(str(number)) for number in numbers)) for kind, *numbers in WINDOWS]
    positions = [mpf(f"{x:.6f}") for series in samples for x in series]
    weights = [[window[4] * mpmath.exp(-bias(window, x)) for window in windows] for x in positions]
    size = len(windows)
    f = [mpf(0)] + [mpf(float(value)) for value in start[1:]]
    for _ in range(10):
        boltzmann = [mpmath.exp(value) for value in f]
        gradient = [-window[4] for window in windows]
        hessian = mpmath.zeros(size, size)
        for row in weights:
            terms = [weight * factor for weight, factor in zip(row, boltzmann)]
            total = mpmath.fsum(terms)
            share = [term / total for term in terms]
            for i in range(size):
                gradient[i] += share[i]
                hessian[i, i] += share[i]
                for j in range(i + 1):
                    hessian[i, j] -= share[i] * share[j]
        for i in range(size):
            for j in range(i):
                hessian[j, i] = hessian[i, j]
        step = mpmath.lu_solve(hessian[1:, 1:], mpmath.matrix([-value for value in gradient[1:]]))
        f = [f[0]] + [value + change for value, change in zip(f[1:], step)]
        if max(abs(change) for change in step) < mpf("1e-40"):
            return f
    raise ArithmeticError("Newton steps did not shrink")


def covariance_of_free_energies(share, counts, hessian):
    """Asymptotic covariance of f_k - f_0 for independent samples."""
    weight = share / counts
    _, singular, right = svd(weight, full_matrices=False)
    middle = np.eye(len(counts)) - (singular[:, None] * right) @ np.diag(counts) @ (right.T * singular)
    theta = (right.T * singular) @ np.linalg.pinv(middle, rcond=1e-10, hermitian=True) @ (singular[:, None] * right)
    covariance = theta - theta[0][None, :] - theta[:, 0][:, None] + theta[0, 0]
    # The same from the inverse Hessian, less what fixed numbers of samples take away.
    other = np.linalg.inv(hessian) - np.diag(1 / counts[1:]) - 1 / counts[0]
    print(f"covariance: largest difference of the two formulas {np.abs(covariance[1:, 1:] - other).max():.1e}")
    assert np.abs(covariance[1:, 1:] - other).max() < 1e-12
    return covariance


def write(name, header, rows):
    (FOLDER / name).write_text("\n".join([header, *rows]) + "\n")


def main():
    samples = draw_samples()
    positions = np.concatenate(samples)
    counts = np.array([window[4] for window in WINDOWS], dtype=float)
    energies = np.stack([bias(window, positions) for window in WINDOWS], axis=1)
    double, hessian, share = solve_in_double(energies, counts)
    exact = solve_in_fifty_digits(samples, double)
    difference = max(abs(float(value) - other) for value, other in zip(exact, double))
    print(f"f: largest difference of the two solutions {difference:.1e}")
    assert difference < 1e-12
    covariance = covariance_of_free_energies(share, counts, hessian)

    lines = [f"{k},{x:.6f}" for k, series in enumerate(samples) for x in series]
    write("samples.csv", "window,x_nm", lines)
    lines = [f"{k},{kind},{c},{force},{slope},{n}" for k, (kind, c, force, slope, n) in enumerate(WINDOWS)]
    write("windows.csv", "window,kind,center_nm,force_constant_kT_per_nm2,slope_kT_per_nm,n_samples", lines)
    write("f.csv", "window,f_kT", [f"{k},{mpmath.nstr(value, 20)}" for k, value in enumerate(exact)])
    header = ",".join(f"window_{k}" for k in range(len(WINDOWS)))
    write("covariance_f.csv", header, [",".join(f"{value:.15e}" for value in row) for row in covariance])


if __name__ == "__main__":
    main()
