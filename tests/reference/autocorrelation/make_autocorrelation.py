"""Autocorrelations of three short series and quantiles of Student's t, by general-purpose libraries.

Needs Python 3.10 or later, numpy, scipy and statsmodels. Writes series.csv, acf.csv and student_t.csv beside itself.

acf is statsmodels.tsa.stattools.acf with its default normalization by 1/n, once by direct products (fft=False) and once by a
transform (fft=True); the script demands that both agree with each other and with the sum of its definition. Quantiles are
scipy.stats.t.ppf, checked by putting them back into scipy.stats.t.cdf and, for one and two degrees of freedom, against
tan(pi (p - 1/2)) and (2p - 1) / sqrt(2 p (1 - p)).
"""

from pathlib import Path

import numpy as np
from scipy.signal import lfilter
from scipy.stats import t as student
from statsmodels.tsa.stattools import acf

FOLDER = Path(__file__).resolve().parent
SEED = 20261207
N = 301  # odd, and no power of two, so that the padding of a transform matters


def series(random):
    noise = random.standard_normal((3, N))
    autoregression = 2.5 + 0.7 * lfilter([1.0], [1.0, -0.83], noise[0])
    moving_average = -41.0 + lfilter([1.0, 0.9, -0.4, 0.6], [1.0], noise[1])
    drifting = 1000.0 + 0.02 * np.arange(N) + 0.3 * noise[2]
    return {"autoregression": autoregression, "moving_average": moving_average, "drifting": drifting}


def by_definition(x, lag):
    centered = x - x.mean()
    return np.dot(centered[: N - lag], centered[lag:]) / np.dot(centered, centered)


def main():
    # Rounded before anything is computed, so that the printed numbers are the data.
    data = {name: np.round(x, 6) for name, x in series(np.random.default_rng(SEED)).items()}
    with open(FOLDER / "series.csv", "w", newline="\n") as out:
        out.write(",".join(data) + "\n")
        for row in zip(*data.values()):
            out.write(",".join(f"{value:.6f}" for value in row) + "\n")

    table, largest = {}, 0.0
    for name, x in data.items():
        direct, transformed = acf(x, nlags=N - 1, fft=False), acf(x, nlags=N - 1, fft=True)
        defined = np.array([by_definition(x, lag) for lag in range(N)])
        largest = max(largest, np.abs(direct - transformed).max(), np.abs(direct - defined).max())
        table[name] = direct
    assert largest < 1e-12, largest
    with open(FOLDER / "acf.csv", "w", newline="\n") as out:
        out.write("lag," + ",".join(table) + "\n")
        for lag in range(N):
            out.write(f"{lag}," + ",".join(f"{values[lag]:.17g}" for values in table.values()) + "\n")

    worst = 0.0
    with open(FOLDER / "student_t.csv", "w", newline="\n") as out:
        out.write("degrees_of_freedom,probability,quantile\n")
        for degrees in (1.0, 2.0, 2.7, 6.5, 11.0, 34.0, 99.0, 787.3):
            for probability in (0.841344746068543, 0.975, 0.9995):
                quantile = student.ppf(probability, degrees)
                worst = max(worst, abs(student.cdf(quantile, degrees) - probability))
                exact = {1.0: np.tan(np.pi * (probability - 0.5)),
                         2.0: (2 * probability - 1) / np.sqrt(2 * probability * (1 - probability))}.get(degrees)
                assert exact is None or abs(quantile / exact - 1) < 1e-11, (degrees, probability)
                out.write(f"{degrees},{probability},{quantile:.17g}\n")
    assert worst < 1e-13, worst
    print(f"autocorrelations agree within {largest:.1e}, quantiles within {worst:.1e}")


if __name__ == "__main__":
    main()
