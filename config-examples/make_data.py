#!/usr/bin/env python3
"""Writes the invented series in data/ that the jobs here use. Needs Python 3.8 or later and nothing else.

Every window is drawn from exp(-(F + U)/RT), where F is one of the free energies below (so that the true profile is known)
and U the bias of its job. Frames are correlated: a Gaussian sequence with correlation RHO from frame to frame is mapped
through its own distribution function and the inverse of the window's, which leaves each frame with exactly the window's
distribution (on a grid of positions that is far finer than any bin).
"""

import gzip
import math
import random
from bisect import bisect_left
from pathlib import Path
from statistics import NormalDist

TEMPERATURE = 310.0  # kelvin
RT = 8.31446261815324e-3 * TEMPERATURE  # kJ/mol
RHO = 0.6
GRID = 20_000
DATA = Path(__file__).resolve().parent / "data"
NORMAL = NormalDist()


def pore(z):
    """Free energy along a pore in kJ/mol, z in nm: a barrier of 6 beside a shallow well of 3."""
    return 6.0 * math.exp(-((z / 0.3) ** 2)) - 3.0 * math.exp(-(((z - 0.45) / 0.15) ** 2))


def two_wells(z):
    """Two equal wells at 0.35 nm on either side of a barrier of 7 kJ/mol, made unequal by a slope of 4 kJ/mol/nm."""
    return 7.0 * ((z / 0.35) ** 2 - 1.0) ** 2 + 4.0 * z


def torsion(degrees):
    """Free energy of a torsion in kJ/mol: three wells, one deeper than the others."""
    angle = math.radians(degrees)
    return 4.0 * (1.0 + math.cos(3.0 * angle)) + 2.0 * (1.0 + math.cos(angle - 0.4))


def draw(energy, lower, upper, count, seed):
    """Correlated positions between lower and upper, each distributed as exp(-energy/RT); the seed is a text."""
    step = (upper - lower) / GRID
    edges = [lower + i * step for i in range(GRID + 1)]
    weights = [math.exp(-energy(lower + (i + 0.5) * step) / RT) for i in range(GRID)]
    sums = [0.0]
    for weight in weights:
        sums.append(sums[-1] + weight)
    generator = random.Random(seed)
    gauss = generator.gauss(0.0, 1.0)
    positions = []
    for _ in range(count):
        target = NORMAL.cdf(gauss) * sums[-1]
        cell = min(max(bisect_left(sums, target) - 1, 0), GRID - 1)
        positions.append(edges[cell] + step * (target - sums[cell]) / weights[cell])
        gauss = RHO * gauss + math.sqrt(1.0 - RHO * RHO) * generator.gauss(0.0, 1.0)
    return positions


def harmonic(center, force_constant):
    return lambda z: 0.5 * force_constant * (z - center) ** 2


def total(free_energy, bias):
    return lambda z: free_energy(z) + bias(z)


def rows(positions, first_frame=0, interval=2.0, digits=4):
    lines = (f"{interval * (first_frame + i):.1f} {z:.{digits}f}\n" for i, z in enumerate(positions))
    return "".join(lines)


def write(name, text):
    path = DATA / name
    path.parent.mkdir(parents=True, exist_ok=True)
    path.write_text(text, encoding="ascii", newline="\n")


def write_gzip(name, text):
    path = DATA / name
    path.parent.mkdir(parents=True, exist_ok=True)
    # Without a name and a time in its header the file is the same on every run.
    with open(path, "wb") as raw, gzip.GzipFile(filename="", mode="wb", fileobj=raw, mtime=0) as packed:
        packed.write(text.encode("ascii"))


def make_pore():
    """windows-one-by-one, windows-from-table, mixed-units: time in ps, z in nm."""
    for i in range(9):
        center = -0.6 + 0.15 * i
        energy = total(pore, harmonic(center, 500.0))
        positions = draw(energy, center - 0.8, center + 0.8, 500, f"pore {i}")
        write(f"pore/z{i}.txt", "# time/ps z/nm\n" + rows(positions))


def make_replicas():
    """replicas-and-segments: two starts, each in two segments; the second repeats the last frame of the first."""
    for i, name in enumerate("abcde"):
        center = -0.3 + 0.15 * i
        energy = total(pore, harmonic(center, 500.0))
        for replica in (1, 2):
            positions = draw(energy, center - 0.8, center + 0.8, 400, f"replicas {name} {replica}")
            write(f"replicas/{name}-start{replica}-part1.txt", rows(positions[:200]))
            write(f"replicas/{name}-start{replica}-part2.txt", rows(positions[199:], first_frame=199))


def make_comma_separated():
    """comma-separated-gzip: a header, the position in the third column, packed."""
    for i in range(7):
        center = -0.45 + 0.15 * i
        energy = total(pore, harmonic(center, 500.0))
        positions = draw(energy, center - 0.8, center + 0.8, 500, f"comma {i}")
        lines = [f"{2 * frame},equilibrium,{z:.4f}\n" for frame, z in enumerate(positions)]
        write_gzip(f"comma/z{i}.csv.gz", "frame,stage,height\n" + "".join(lines))


def make_torsion():
    """periodic-torsion: degrees from -180 to 180; the bias acts on the nearest image."""
    force_constant = 60.0 * math.radians(1.0) ** 2
    for i in range(15):
        center = -168 + 24 * i

        def energy(angle, center=center):
            distance = (angle - center + 180.0) % 360.0 - 180.0
            return torsion(angle) + 0.5 * force_constant * distance**2

        positions = draw(energy, center - 180.0, center + 180.0, 400, f"torsion {i}")
        wrapped = [(angle + 180.0) % 360.0 - 180.0 for angle in positions]
        write(f"torsion/angle{center:+04d}.txt", rows(wrapped, digits=2))


def make_tabulated():
    """tabulated-bias: quartic restraints as tables that reach all windows, with straight lines between the rows."""
    for i, center in enumerate((-0.4, -0.2, 0.0, 0.2, 0.4)):
        positions = [round(-1.05 + 0.02 * row, 2) for row in range(106)]
        energies = [round(900.0 * (z - center) ** 4, 4) for z in positions]
        table = "".join(f"{z:.2f} {energy:.4f}\n" for z, energy in zip(positions, energies))
        write(f"tabulated/bias{i}.txt", "# z/nm energy/(kJ/mol)\n" + table)

        def bias(z, positions=positions, energies=energies):
            row = min(max(bisect_left(positions, z), 1), len(positions) - 1)
            fraction = (z - positions[row - 1]) / (positions[row] - positions[row - 1])
            return energies[row - 1] + fraction * (energies[row] - energies[row - 1])

        drawn = draw(total(two_wells, bias), positions[0] + 1e-4, positions[-1] - 1e-4, 500, f"tabulated {i}")
        write(f"tabulated/z{i}.txt", rows(drawn))


def make_walls():
    """walls: flat bottoms side by side, and one window between two one-sided walls."""
    for i, center in enumerate((-0.45, -0.15, 0.15, 0.45)):

        def flat(z, center=center):
            return 0.5 * 800.0 * max(abs(z - center) - 0.15, 0.0) ** 2

        write(f"walls/flat{i}.txt", rows(draw(total(two_wells, flat), -1.2, 1.2, 500, f"flat {i}")))

    def between(z):
        return 0.5 * 1000.0 * (max(z - 0.25, 0.0) ** 2 + max(-0.25 - z, 0.0) ** 2)

    write("walls/between.txt", rows(draw(total(two_wells, between), -1.2, 1.2, 500, "between")))


def make_constant_force():
    """constant-force: four slopes."""
    for slope in (-24, -8, 8, 24):
        energy = total(two_wells, lambda z, slope=slope: slope * z)
        write(f"force/slope{slope:+03d}.txt", rows(draw(energy, -1.2, 1.2, 500, f"slope {slope}")))


def make_unbiased():
    """unbiased-window: a free run and three restrained ones over the barrier."""
    write("unbiased/free.txt", rows(draw(two_wells, -1.2, 1.2, 1000, "free")))
    for i, center in enumerate((-0.15, 0.0, 0.15)):
        energy = total(two_wells, harmonic(center, 300.0))
        write(f"unbiased/barrier{i}.txt", rows(draw(energy, -1.2, 1.2, 500, f"barrier {i}")))


if __name__ == "__main__":
    make_pore()
    make_replicas()
    make_comma_separated()
    make_torsion()
    make_tabulated()
    make_walls()
    make_constant_force()
    make_unbiased()
