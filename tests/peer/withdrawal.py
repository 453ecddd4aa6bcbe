"""The withdrawal zone of one level and the water it releases.

Limits: Bohan & Grace 1973, WES TR H-73-4 (from memory); angle and wall factor: WES TR E-87-2,
1987 (from memory), phi derived anew as the part of a raised-cosine layer left by a wall.
The cube root of Q_b/Q in phi and the weight of the two shapes are the project's own choice.
Equation numbers are those of the project's methods. SI throughout; uniform width.
"""

from bisect import bisect_left
from dataclasses import dataclass
from math import pi, sin, sqrt

import numpy as np
from scipy.optimize import brentq

from column import gauss

GRAVITY = 9.80665

# Below this difference (kg/m3) between peak and limit, distance alone shapes the side, so
# that noise does not decide (choice).
LEAST_DIFFERENCE = 0.001

# Limits are found to far better than a centre-line is known, m.
LIMIT_TOLERANCE = 1e-10


@dataclass(frozen=True)
class Sink:
    """One level: centre-line (m), flow (m3/s), withdrawal angle (rad)."""

    centre: float
    flow: float
    angle: float = pi


@dataclass(frozen=True)
class Side:
    """One side of the centre-line: limit (m), Q_b (m3/s), and whether a boundary ends it."""

    limit: float
    boundary_flow: float
    bounded: bool


@dataclass(frozen=True)
class Zone:
    """Both sides of a sink and the elevation of greatest velocity (m)."""

    lower: Side
    upper: Side
    peak: float


@dataclass(frozen=True)
class Release:
    """What one sink draws: its zone, temperature (degC) and oxygen (mg/L)."""

    zone: Zone
    temperature: float
    oxygen: float


def wall_factor(r):
    """phi of (3.2): part of the layer left when a wall stands at `r` of its half-thickness."""
    return 1.0 if r >= 1.0 else 0.5 * (1.0 + r + sin(pi * r) / pi)


class _Search:
    """The search for limits on either side of one sink."""

    def __init__(self, column, sink):
        self.column, self.sink = column, sink
        self.home = column.interval(sink.centre)
        self.rho0 = column.density_in(self.home, sink.centre)
        self.scale = sink.angle / pi * sqrt(GRAVITY / self.rho0)

    def flow(self, distance, rho, wall=None):
        """F(Z), or phi F(Z) with `wall` = (its distance, cube root of Q_b/Q), m3/s."""
        # rounding may leave a levelled difference a hair below zero
        difference = abs(rho - self.rho0)
        flow = self.scale * distance * distance * sqrt(distance * difference)
        if wall is None or distance <= 0.0:
            return flow
        return flow * wall_factor(max(wall[0] / distance, wall[1]))

    def boundary_flow(self, up):
        """Q_b: the flow whose free limit just meets the boundary on that side."""
        end = -1 if up else 0
        return self.flow(self.reach(up), self.column.node_density[end])

    def reach(self, up):
        """Distance from centre-line to surface or bed."""
        return self.column.surface - self.sink.centre if up else self.sink.centre - self.column.bed

    def limit(self, up, wall=None):
        """Elevation of the limit on one side, or None where the boundary comes first."""
        z, rho, centre = self.column.node_z, self.column.node_density, self.sink.centre
        last = len(z) - 1
        # flow grows outwards, so the interval is found by halving the list of nodes
        if up:
            outward = range(self.home + 1, last + 1)
        else:
            outward = range(self.home, -1, -1)
        k = bisect_left(
            outward, self.sink.flow, key=lambda i: self.flow(abs(z[i] - centre), rho[i], wall)
        )
        # a flow that only just meets the boundary has its limit there
        if k == len(outward):
            return None
        outer = outward[k]
        inner = abs(z[outward[k - 1]] - centre) if k else 0.0
        sign, i = (1.0, outer - 1) if up else (-1.0, outer)

        def excess(distance):
            # the cube root makes the curve nearly straight: half the iterations
            here = self.column.density_in(i, centre + sign * distance)
            return (self.flow(distance, here, wall) / self.sink.flow) ** (1.0 / 3.0) - 1.0

        outermost = abs(z[outer] - centre)
        return centre + sign * brentq(excess, inner, outermost, xtol=LIMIT_TOLERANCE)


def zone(column, sink):
    """The withdrawal zone of `sink`, by (3.1), (3.2) and (3.3)."""
    if not (column.bed <= sink.centre <= column.surface and sink.flow > 0.0):
        raise ValueError("a sink lies between bed and surface and its flow is above zero")
    search = _Search(column, sink)
    at_bed, at_surface = search.boundary_flow(up=False), search.boundary_flow(up=True)
    lower, upper = search.limit(up=False), search.limit(up=True)
    # one pass: the other side moves outwards and may reach its own boundary
    if upper is None and lower is not None:
        wall = (search.reach(up=True), (at_surface / sink.flow) ** (1.0 / 3.0))
        lower = search.limit(up=False, wall=wall)
    elif lower is None and upper is not None:
        wall = (search.reach(up=False), (at_bed / sink.flow) ** (1.0 / 3.0))
        upper = search.limit(up=True, wall=wall)
    below = Side(column.bed if lower is None else lower, at_bed, lower is None)
    above = Side(column.surface if upper is None else upper, at_surface, upper is None)
    thickness = above.limit - below.limit
    share = (sink.centre - below.limit) / thickness
    return Zone(below, above, below.limit + thickness * sin(0.5 * pi * share) ** 2)


def _velocity(side, peak, rho_peak, rho_limit, z, rho, flow):
    """v/V of (3.4) at the points of one side."""
    x = (z - peak) / (side.limit - peak)
    difference = rho_limit - rho_peak
    if abs(difference) >= LEAST_DIFFERENCE:
        x = x * ((rho - rho_peak) / difference)
    if not side.bounded:
        return (1.0 - x) ** 2
    w = min(1.0, side.boundary_flow / flow)
    # w (1 - x)^2 + (1 - w)(1 - x^2), with the common (1 - x) taken out
    return (1.0 - x) * (1.0 + x - 2.0 * w * x)


def shares(column, sink, drawn):
    """Elevations, their shares of the flow (sum one), their temperature and oxygen.

    Cut at every node and at the peak, so that the velocity is smooth in each piece.
    """
    z, peak = column.z, drawn.peak
    low, high = drawn.lower.limit, drawn.upper.limit
    first, top = z.searchsorted(low, "right"), z.searchsorted(high, "left")
    middle = z.searchsorted(peak)
    edges = np.concatenate(([low], z[first:middle], [peak], z[middle:top], [high]))
    points, weight = gauss(edges)
    temperature, oxygen, rho = column.water(points)
    rho_low, rho_peak, rho_high = (
        column.density_in(column.interval(at), at) for at in (low, peak, high)
    )
    split = middle - first + 1
    velocity = np.empty_like(points)
    # a side of no thickness has no weight, and no shape
    for side, rows, rho_limit in (
        (drawn.lower, slice(0, split), rho_low),
        (drawn.upper, slice(split, None), rho_high),
    ):
        velocity[rows] = (
            _velocity(side, peak, rho_peak, rho_limit, points[rows], rho[rows], sink.flow)
            if side.limit != peak
            else 0.0
        )
    part = velocity * weight
    return points, part / part.sum(), temperature, oxygen


def release(column, sink):
    """Zone and flow-weighted temperature and oxygen of one sink."""
    drawn = zone(column, sink)
    _, part, temperature, oxygen = shares(column, sink, drawn)
    return Release(drawn, float((part * temperature).sum()), float((part * oxygen).sum()))


def mix(column, sinks):
    """The release of each sink, and the flow-weighted temperature and oxygen of all."""
    drawn = [release(column, sink) for sink in sinks]
    total = sum(sink.flow for sink in sinks)
    temperature = sum(s.flow * r.temperature for s, r in zip(sinks, drawn)) / total
    oxygen = sum(s.flow * r.oxygen for s, r in zip(sinks, drawn)) / total
    return drawn, temperature, oxygen
