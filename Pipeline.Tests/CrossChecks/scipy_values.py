"""Values that the program computes too, by SciPy and NumPy: printed as JSON, compared in ScipyTests.cs.

Each entry is a list of rows: arguments first, results last. Nothing here is taken from the program.
"""
import json

import numpy as np
from scipy import optimize, special, stats


def poisson_intervals():
    """count, confidence, central low and high, one-sided upper: Garwood by quantiles of the gamma distribution."""
    rows = []
    for n in (0, 1, 2, 5, 17, 100, 1234, 9000):
        for confidence in (0.5, 0.6827, 0.9, 0.99, 0.9999):
            tail = 0.5 * (1 - confidence)
            low = stats.gamma.ppf(tail, n) if n else 0.0
            rows.append([n, confidence, low, stats.gamma.isf(tail, n + 1), stats.gamma.isf(1 - confidence, n + 1)])
    return rows


def chi_square_tails():
    """x, degrees of freedom, chance of more."""
    return [[k * f, k, stats.chi2.sf(k * f, k)] for k in (1, 2, 3.5, 10, 77, 900) for f in (0.2, 0.9, 1, 1.3, 2, 4)]


def noncentral_tails():
    """x, degrees of freedom, noncentrality, chance of more."""
    return [[x, k, n, stats.ncx2.sf(x, k, n)] for k in (1, 4, 30) for n in (0.3, 5, 60) for x in (0.5 * (k + n), k + n, 1.7 * (k + n))]


def student_tails():
    """t, degrees of freedom, two-sided chance."""
    return [[t, k, 2 * stats.t.sf(t, k)] for k in (1, 2.5, 9, 40, 3000) for t in (0.3, 1, 2, 6)]


def voigt():
    """x, sigma of the Gaussian, half width of the Lorentzian, density."""
    return [[x, s, g, special.voigt_profile(x, s, g)] for s in (0.3, 1, 4) for g in (1e-3, 0.2, 1, 20) for x in (0, 0.1, 1, 3, 10, 50)]


def exponential_gaussian():
    """time, width, tail, density, integral."""
    return [[x * (s + t), s, t, *(f(x * (s + t), t / s, scale=s) for f in (stats.exponnorm.pdf, stats.exponnorm.cdf))]
            for s, t in ((1, 2), (1, 0.2), (0.1, 3), (2e-5, 5e-5)) for x in (-1, 0, 0.3, 1, 4)]


def on_off():
    """on, off, alpha, one-sided chance of the exact conditional test."""
    return [[on, off, a, stats.binom.sf(on - 1, on + off, a / (1 + a))]
            for on, off, a in ((3, 2, 0.5), (40, 61, 0.3), (12, 300, 0.1), (700, 600, 1), (5, 90, 0.2))]


def unified(n, background, confidence, step=0.002, most=25.0):
    """Feldman and Cousins by a grid over the signal and a sorted list of counts."""
    signal = np.arange(0, most, step)[:, None]
    counts = np.arange(0, 70)
    chance = stats.poisson.pmf(counts, signal + background)
    best = stats.poisson.pmf(counts, np.maximum(counts - background, 0) + background)
    order = np.argsort(-chance / best, axis=1, kind="stable")
    before = np.take_along_axis(chance, order, axis=1).cumsum(axis=1) - np.take_along_axis(chance, order, axis=1)
    accepted = np.any((order == n) & (before < confidence), axis=1)
    return [n, background, confidence, float(signal[accepted].min()), float(signal[accepted].max())]


def nonnegative():
    """Matrix, right-hand side and solution of non-negative least squares."""
    random = np.random.default_rng(20260304)
    problems = []
    for rows, columns in ((12, 8), (40, 25), (20, 20)):
        a, b = random.normal(size=(rows, columns)), random.normal(size=rows)
        problems.append({"a": a.tolist(), "b": b.tolist(), "x": optimize.nnls(a, b)[0].tolist()})
    return problems


def gaussian(p, x):
    """Molecules of a Gaussian, integrated over unit bins about x."""
    return p[0] * (stats.norm.cdf(x + 0.5, p[1], p[2]) - stats.norm.cdf(x - 0.5, p[1], p[2]))


def decay(p, x):
    return p[0] * np.exp(-x / p[2]) + p[1]


def poisson_fit(name, model, x, counts, start):
    """Maximum likelihood by a simplex, then errors from the expected information with central differences."""
    counts = np.asarray(counts, float)
    x = np.asarray(x, float)

    def deviance(p):
        m = np.maximum(model(p, x), 1e-12)
        return 2 * np.sum(m - counts + special.xlogy(counts, counts / m))

    best = np.asarray(start, float)
    for _ in range(4):
        best = optimize.minimize(deviance, best, method="Nelder-Mead", options={"xatol": 1e-10, "fatol": 1e-13, "maxiter": 20000, "maxfev": 20000}).x
    slopes = np.array([(model(best + h, x) - model(best - h, x)) / (2 * h.sum()) for h in np.diag(1e-5 * np.abs(best))])
    covariance = np.linalg.inv((slopes / model(best, x)) @ slopes.T)
    return {"name": name, "x": x.tolist(), "counts": counts.tolist(), "start": list(start), "parameters": best.tolist(),
            "errors": np.sqrt(np.diag(covariance)).tolist(), "deviance": deviance(best)}


if __name__ == "__main__":
    random = np.random.default_rng(7)
    times = np.arange(0.5, 30.5)
    print(json.dumps({
        "poisson_intervals": poisson_intervals(), "chi_square": chi_square_tails(), "noncentral": noncentral_tails(), "student": student_tails(),
        "voigt": voigt(), "exponential_gaussian": exponential_gaussian(), "on_off": on_off(), "nonnegative": nonnegative(),
        "unified": [unified(*case) for case in ((0, 0.7, 0.9), (2, 1.3, 0.9), (4, 2.8, 0.95), (9, 3.1, 0.6827), (15, 4.4, 0.99), (3, 6.5, 0.9))],
        "poisson_fits": [
            poisson_fit("gaussian", gaussian, range(10), [0, 1, 3, 7, 12, 9, 4, 2, 0, 1], [35, 4, 1.4]),
            poisson_fit("gaussian", gaussian, range(40), random.poisson(gaussian([300, 17, 4.5], np.arange(40.0))), [280, 16, 4]),
            poisson_fit("decay", decay, times, random.poisson(decay([40, 3, 6], times)), [35, 2, 5]),
        ],
    }))
