"""The pool as a column of water: density, the profile between samples, levelling.

SI throughout: m, degC, mg/L, kg/m3. Written from the methods text alone, apart from the
program it is held against, so that one misreading cannot hide in both.
"""

from bisect import bisect_right

import numpy as np
from scipy.optimize import brentq

# Tanaka et al. 2001, Metrologia 38:301-309 (standard), 0-40 C.
A1, A2, A3, A4, A5 = -3.983035, 301.797, 522528.9, 69.34881, 999.974950

# Exact for polynomials up to degree 15, and far past round-off for the density of water
# between two samples.
GAUSS_X, GAUSS_W = np.polynomial.legendre.leggauss(8)

# Points per interval between samples on which the slope of density is searched for a sign
# change; density bends once in temperature, so a few would do (choice).
SLOPE_POINTS = 17


def density(temperature_c, solids_mg_l=None):
    """Density in kg/m3 at surface pressure; floats or arrays alike.

    Dissolved solids in mg/L, turned to g/kg by the density of pure water; their slope is
    Chen & Millero 1986, Limnol. Oceanogr. 31:657-662 (standard).
    """
    t = temperature_c
    u = t + A1
    pure = A5 * (1.0 - u * u * (t + A2) / (A3 * (t + A4)))
    if solids_mg_l is None:
        return pure
    return pure + (0.8181 + t * (4.96e-5 * t - 3.85e-3)) * solids_mg_l / pure


def given(value, _solids=None):
    """Stands in for `density` where the first quantity already is density (closed forms)."""
    # plus nothing: levelling must not write into the quantity itself
    return value + 0.0


class Column:
    """A profile from bed to surface, ready to be asked.

    `z` rises from bed to surface and holds every place where a slope may change: samples,
    stationary points of density, ends of levelled blocks. Temperature, oxygen and solids
    are linear between nodes; density follows from them at the elevation asked for, except
    inside a levelled block, where it is the block's mean.
    """

    def __init__(self, bed, surface, samples, law=density):
        """`samples`: rows of elevation, temperature, oxygen and, where known, solids."""
        rows = np.array(sorted(map(tuple, samples)), dtype=float)
        solids = rows[:, 3] if rows.shape[1] == 4 else None
        z = rows[:, 0]
        if len(z) < 2 or np.any(np.diff(z) <= 0.0):
            raise ValueError("a column needs two samples or more, each at its own elevation")
        if not bed < surface:
            raise ValueError("the surface must lie above the bed")
        self.law = law
        self.bed, self.surface = float(bed), float(surface)
        self._samples = (z, rows[:, 1], rows[:, 2], solids)
        inside = z[(z > bed) & (z < surface)]
        self.blocks = []
        self._settle(np.concatenate(([bed], inside, [surface])))
        self._settle(np.union1d(self.z, self._stationary()))
        self.blocks = self._level()
        ends = [end for low, high, _ in self.blocks for end in (low, high)]
        self._settle(np.union1d(self.z, ends))

    def _settle(self, z):
        """Take `z` as the nodes and hold what is asked for often."""
        sample_z, temperature, oxygen, solids = self._samples
        self.z = z
        # np.interp holds the last value beyond the samples
        self.temperature = np.interp(z, sample_z, temperature)
        self.oxygen = np.interp(z, sample_z, oxygen)
        self.solids = None if solids is None else np.interp(z, sample_z, solids)
        # scalar work is faster on plain lists than on arrays
        self.node_z = z.tolist()
        self._t = self.temperature.tolist()
        self._t_slope = (np.diff(self.temperature) / np.diff(z)).tolist()
        if self.solids is not None:
            self._s = self.solids.tolist()
            self._s_slope = (np.diff(self.solids) / np.diff(z)).tolist()
        middle = 0.5 * (z[1:] + z[:-1])
        self._flat = [None] * len(middle)
        for low, high, mean in self.blocks:
            for i in np.flatnonzero((middle > low) & (middle < high)):
                self._flat[i] = mean
        self.node_density = self.water(z)[2].tolist()

    def interval(self, z):
        """Index of the interval that holds elevation `z`."""
        return min(max(bisect_right(self.node_z, z) - 1, 0), len(self._flat) - 1)

    def density_in(self, i, z):
        """Levelled density at `z` inside interval `i`, kg/m3; a single elevation."""
        if self._flat[i] is not None:
            return self._flat[i]
        dz = z - self.node_z[i]
        t = self._t[i] + self._t_slope[i] * dz
        if self.solids is None:
            return self.law(t)
        return self.law(t, self._s[i] + self._s_slope[i] * dz)

    def water(self, z):
        """Temperature, oxygen and levelled density at an array of elevations."""
        t = np.interp(z, self.z, self.temperature)
        solids = None if self.solids is None else np.interp(z, self.z, self.solids)
        rho = self.law(t, solids)
        for low, high, mean in self.blocks:
            rho[(z >= low) & (z <= high)] = mean
        return t, np.interp(z, self.z, self.oxygen), rho

    def _stationary(self):
        """Elevations between nodes where density neither rises nor falls with elevation."""
        found = []
        for i, (low, high) in enumerate(zip(self.node_z, self.node_z[1:])):
            t_slope = self._t_slope[i]
            s_slope = 0.0 if self.solids is None else self._s_slope[i]

            def slope(z):
                # complex step: a derivative without cancellation
                t = self._t[i] + t_slope * (z - low)
                if self.solids is None:
                    return self.law(t + 1e-30j * t_slope).imag
                s = self._s[i] + s_slope * (z - low)
                return self.law(t + 1e-30j * t_slope, s + 1e-30j * s_slope).imag

            if t_slope == 0.0 and s_slope == 0.0:
                continue
            grid = np.linspace(low, high, SLOPE_POINTS)
            sign = [slope(z) for z in grid.tolist()]
            for a, b, at_a, at_b in zip(grid, grid[1:], sign, sign[1:]):
                if (at_a < 0.0) != (at_b < 0.0):
                    found.append(brentq(slope, a, b, xtol=1e-12))
        # one that falls on a sample is a node already
        return [z for z in found if np.min(np.abs(self.z - z)) > 1e-9]

    def _level(self):
        """Blocks (low, high, mean density) that leave no density falling with depth.

        Pooling of neighbours weighted by thickness, carried to the limit of endless thin
        slices: a block's mean equals the density of the water it ends in, so the levelled
        density has no step (least-squares monotone fit; Barlow et al. 1972, from memory).
        """
        rho, blocks = self.node_density, []
        i = 0
        while i < len(rho) - 1:
            if rho[i + 1] <= rho[i]:
                i += 1
                continue
            first = i
            while i < len(rho) - 1 and rho[i + 1] > rho[i]:
                i += 1
            core = (first, i)
            block = self._pool(core)
            # a lower block lighter than this one is an inversion still: pool both
            while blocks and blocks[-1][1][2] <= block[2]:
                core = (blocks.pop()[0][0], core[1])
                block = self._pool(core)
            blocks.append((core, block))
        return [block for _, block in blocks]

    def _pool(self, core):
        """The block that grows out of nodes `core` until its mean meets its neighbours."""
        rho, z = self.node_density, self.node_z
        first, last = core
        # how far density keeps rising below the core and falling above it
        bottom, top = first, last
        while bottom > 0 and rho[bottom - 1] >= rho[bottom]:
            bottom -= 1
        while top < len(rho) - 1 and rho[top + 1] <= rho[top]:
            top += 1

        def ends(mean):
            low = first
            while low > bottom and rho[low - 1] < mean:
                low -= 1
            high = last
            while high < top and rho[high + 1] > mean:
                high += 1
            z_low = z[low] if low == bottom else self._crossing(low - 1, mean)
            z_high = z[high] if high == top else self._crossing(high, mean)
            return z_low, z_high

        def surplus(mean):
            low, high = ends(mean)
            edges = [low, *(node for node in z if low < node < high), high]
            return integral(lambda y: self.water(y)[2] - mean, edges)

        span = rho[bottom : top + 1]
        mean = brentq(surplus, min(span), max(span), xtol=1e-11)
        return (*ends(mean), mean)

    def _crossing(self, i, value):
        """Where density passes `value` inside interval `i`, where it falls with elevation."""
        low, high = self.node_z[i], self.node_z[i + 1]
        if self.node_density[i] <= value:
            return low
        if self.node_density[i + 1] >= value:
            return high
        return brentq(lambda z: self.density_in(i, z) - value, low, high, xtol=1e-12)


def gauss(edges):
    """Points and weights of Gauss-Legendre in each piece between `edges`; one row a piece."""
    edges = np.asarray(edges)
    half = 0.5 * (edges[1:] - edges[:-1])[:, None]
    middle = 0.5 * (edges[1:] + edges[:-1])[:, None]
    return middle + half * GAUSS_X, half * GAUSS_W


def integral(f, edges):
    """Integral of `f` over pieces inside each of which it is smooth."""
    z, weight = gauss(edges)
    return float(np.sum(weight * f(z)))
