"""Exact density of states of the periodic square-lattice Ising model, and its free energies.

Needs Python 3.10 or later and mpmath. Writes density_<n>.csv and free_energy.csv beside itself.

Density of states: Kaufman's partition function of an n x n torus (Phys. Rev. 76, 1232, 1949) is written, as by Beale
(Phys. Rev. Lett. 76, 78, 1996), as a polynomial in x = exp(-2K), whose coefficients are the numbers of states. The cosines
in it are irrational, the coefficients are not: the whole computation is done modulo primes in which cos(pi k/n) exists, and
the integers are put together by the Chinese remainder theorem. No rounding occurs anywhere.

Free energies: Kaufman's product of hyperbolic functions at 60 digits, not by way of the density of states, and Onsager's
integral (Phys. Rev. 65, 117, 1944) for the infinite lattice.
"""

from pathlib import Path

import mpmath
from mpmath import mp, mpf

SIZES = (16, 32)
COUPLINGS = ("0.1", "0.25", "0.35", "0.41", "0.43", "0.44068679350977151", "0.45", "0.47", "0.55", "0.7")
FOLDER = Path(__file__).resolve().parent
mp.dps = 60


def is_prime(number):
    """Miller-Rabin with the first twelve primes as bases: no error below 3.1e23 (Sorenson & Webster 2017)."""
    small = (2, 3, 5, 7, 11, 13, 17, 19, 23, 29, 31, 37)
    if any(number % p == 0 for p in small):
        return number in small
    odd, twos = number - 1, 0
    while odd % 2 == 0:
        odd, twos = odd // 2, twos + 1
    for base in small:
        power = pow(base, odd, number)
        if power in (1, number - 1):
            continue
        for _ in range(twos - 1):
            power = power * power % number
            if power == number - 1:
                break
        else:
            return False
    return True


def primes_with_roots(order):
    """Primes p = 1 (mod order), from 2^61 downward; order is a power of two."""
    candidate = 2**61 - order + 1
    while True:
        if is_prime(candidate):
            yield candidate
        candidate -= order


def primitive_root_of_unity(order, p):
    """An element whose order is exactly the power of two `order`."""
    for base in range(2, 1000):
        root = pow(base, (p - 1) // order, p)
        if pow(root, order // 2, p) == p - 1:
            return root
    raise ArithmeticError("no root of unity found")


SLOT = 20  # bytes: products of two 61-bit numbers, added up at most 2^13 times, stay below 2^135


def multiply(left, right, p):
    """Product of two polynomials modulo p, by packing the coefficients into two long integers."""
    pack = lambda poly: int.from_bytes(b"".join(c.to_bytes(SLOT, "little") for c in poly), "little")
    length = len(left) + len(right) - 1
    packed = (pack(left) * pack(right)).to_bytes(SLOT * length, "little")
    return [int.from_bytes(packed[i * SLOT : (i + 1) * SLOT], "little") % p for i in range(length)]


def power(poly, exponent, p):
    result = [1]
    for _ in range(exponent):
        result = multiply(result, poly, p)
    return result


def combine(left, right, factor, p):
    """left + factor * right."""
    length = max(len(left), len(right))
    padded = lambda poly: poly + [0] * (length - len(poly))
    return [(a + factor * b) % p for a, b in zip(padded(left), padded(right))]


def degeneracies_modulo(n, p):
    """Coefficients of x^N Z(x), N = n^2, modulo p: the coefficient of x^(E/2 + N) is g(E).

    With b = 2x(1 - x^2) and a_k = (1 + x^2)^2 - b cos(pi k/n), Kaufman's cosh(gamma_k) is a_k/b, and
    b^n (2 cosh(n gamma_k) +- 2) = U_n +- 2 b^n, where U_0 = 2, U_1 = 2 a_k, U_(j+1) = 2 a_k U_j - b^2 U_(j-1).
    """
    root = primitive_root_of_unity(2 * n, p)
    half = pow(2, -1, p)
    b = [0, 2, 0, p - 2]
    b_squared = multiply(b, b, p)
    b_to_n = power(b, n, p)

    def pair(k, sign):
        cosine = (pow(root, k, p) + pow(root, -k, p)) * half % p
        a = combine([1, 0, 2, 0, 1], b, p - cosine, p)
        double_a = [2 * c % p for c in a]
        before, current = [2], double_a
        for _ in range(n - 1):
            before, current = current, combine(multiply(double_a, current, p), multiply(b_squared, before, p), p - 1, p)
        return combine(current, b_to_n, 2 * sign, p)

    def single(first, second, sign):
        """2^(n/2) [first^n +- x^n second^n]."""
        shifted = [0] * n + power(second, n, p)
        return [pow(2, n // 2, p) * c % p for c in combine(power(first, n, p), shifted, sign, p)]

    minus, plus = [1, p - 1], [1, 1]
    total = [0]
    for sign in (1, -1):
        odd = [1]
        for k in range(1, n, 2):
            odd = multiply(odd, pair(k, sign), p)
        even = multiply(single(minus, plus, sign), single(plus, minus, sign), p)
        for k in range(2, n, 2):
            even = multiply(even, pair(k, sign), p)
        total = combine(combine(total, odd, 1, p), even, 1, p)
    scale = pow(2, -(n * n // 2 + 1), p)
    coefficients = [c * scale % p for c in total]
    return coefficients + [0] * (2 * n * n + 1 - len(coefficients))


def density_of_states(n):
    """Energies and exact degeneracies, in units of J."""
    sites = n * n
    modulus, values = 1, [0] * (2 * sites + 1)
    for p in primes_with_roots(2 * n):
        residues = degeneracies_modulo(n, p)
        inverse = pow(modulus, -1, p)
        values = [v + modulus * ((r - v) * inverse % p) for v, r in zip(values, residues)]
        modulus *= p
        # One prime more than needed: a wrong formula would leave coefficients of the size of the modulus.
        if modulus > 2 ** (sites + 62):
            break
    g = {2 * i - 2 * sites: value for i, value in enumerate(values) if value}
    assert all(energy % 4 == 0 for energy in g)
    assert sum(g.values()) == 2**sites
    assert all(g[energy] == g[-energy] for energy in g)
    assert g[-2 * sites] == 2 and g[-2 * sites + 8] == 2 * sites
    assert -2 * sites + 4 not in g and 2 * sites - 4 not in g
    # The next levels, counted by hand: a flipped pair of neighbors; two separate spins, a chain of three, a square of four.
    assert g[-2 * sites + 12] == 2 * (2 * sites)
    assert g[-2 * sites + 16] == 2 * (sites * (sites - 5) // 2 + 6 * sites + sites)
    return g


def kaufman(n, coupling):
    """-ln Z of the n x n torus."""
    two_k = 2 * coupling
    gamma = [mpmath.acosh(mpmath.cosh(two_k) * mpmath.coth(two_k) - mpmath.cos(mp.pi * k / n)) for k in range(2 * n)]
    gamma[0] = two_k + mpmath.log(mpmath.tanh(coupling))
    total = mpf(0)
    for first in (0, 1):
        for function in (mpmath.cosh, mpmath.sinh):
            total += mpmath.fprod(2 * function(n * gamma[k] / 2) for k in range(first, 2 * n, 2))
    return -mpmath.log((2 * mpmath.sinh(two_k)) ** (mpf(n * n) / 2) * total / 2)


def onsager(coupling):
    """-ln Z per site of the infinite lattice."""
    modulus = 2 * mpmath.sinh(2 * coupling) / mpmath.cosh(2 * coupling) ** 2
    integrand = lambda angle: mpmath.log((1 + mpmath.sqrt(1 - (modulus * mpmath.sin(angle)) ** 2)) / 2)
    points = [0, 0.5, 1, 1.4, 1.5, 1.56, mp.pi / 2]
    return -(mpmath.log(2 * mpmath.cosh(2 * coupling)) + mpmath.quad(integrand, points) / mp.pi)


def write(name, header, rows):
    (FOLDER / name).write_text("\n".join([header, *rows]) + "\n")


def main():
    digits = lambda value: mpmath.nstr(value, 20, strip_zeros=False)
    finite = {}
    for n in SIZES:
        g = density_of_states(n)
        rows = [f"{energy},{mpmath.nstr(mpmath.log(count), 18)},{count}" for energy, count in sorted(g.items())]
        write(f"density_{n}.csv", "energy,ln_degeneracy,degeneracy", rows)
        for text in COUPLINGS:
            coupling = mpf(text)
            finite[n, text] = kaufman(n, coupling)
            summed = -mpmath.log(mpmath.fsum(count * mpmath.exp(-coupling * energy) for energy, count in g.items()))
            difference = abs(summed - finite[n, text])
            print(f"n {n} K {text}: sum over states minus product formula {mpmath.nstr(difference, 3)}")
            assert difference < mpf("1e-12")
    rows = []
    for text in COUPLINGS:
        infinite = onsager(mpf(text))
        rows.append(",".join([text, *(digits(finite[n, text]) for n in SIZES), digits(infinite)]))
    header = "coupling,minus_ln_z_16,minus_ln_z_32,minus_ln_z_per_site_infinite"
    write("free_energy.csv", header, rows)


if __name__ == "__main__":
    main()
