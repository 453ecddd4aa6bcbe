"""What the peer must get right before anything is held against it."""

import unittest
from math import pi, sqrt

import numpy as np

from column import Column, density, gauss, given
from withdrawal import GRAVITY, Sink, mix, release, shares, wall_factor, zone

SAMPLES = [
    (0, 6.0, 1.0), (20, 6.5, 3.0), (30, 8.0, 5.0), (40, 11.0, 6.0),
    (45, 15.0, 7.0), (50, 20.0, 8.0), (54, 24.0, 8.4), (60, 24.0, 8.4),
]

# port, flow, angle; lower, upper, peak, degC, mg/L, Q_b up, Q_b down (worked cases, section 3)
WORKED = [
    (45, 30, pi, 34.316, 53.786, 45.536, 15.544, 7.047, 115.95, 1233.9),
    (45, 30, 2 * pi, 36.745, 52.029, 45.347, 15.386, 7.034, 231.90, 2467.8),
    (40, 60, pi, 23.450, 51.602, 41.363, 12.150, 6.210, 269.26, 580.14),
    (35, 20, pi, 22.972, 44.362, 35.748, 9.717, 5.531, 484.07, 319.52),
    (50, 40, pi, 39.708, 60.0, 50.083, 19.650, 7.809, 29.867, 2308.9),
]


def linear(buoyancy, half_depth=100.0):
    """A column of linear density about elevation 0, buoyancy frequency in 1/s."""
    rho0 = 1000.0
    fall = rho0 * buoyancy**2 / GRAVITY * half_depth
    ends = [(-half_depth, rho0 + fall, 1.0), (half_depth, rho0 - fall, 1.0)]
    return Column(-half_depth, half_depth, ends, law=given)


class Peer(unittest.TestCase):
    def test_published_density_of_pure_water(self):
        for t, rho in [(0, 999.8428), (10, 999.7027), (15, 999.1026), (20, 998.2067), (25, 997.0470)]:
            self.assertAlmostEqual(density(float(t)), rho, delta=6e-5)

    def test_scenario_density_with_solids(self):
        self.assertAlmostEqual(density(20.0, 1500.0), 999.35021, delta=1e-4)
        self.assertAlmostEqual(density(4.0, 1000.0), 1000.77846, delta=1e-4)

    def test_law_wall_factor(self):
        for r, phi in [(0, 0.5), (0.25, 0.737540), (0.5, 0.909155), (0.75, 0.987540), (1, 1), (3, 1)]:
            self.assertAlmostEqual(wall_factor(r), phi, delta=5e-7)

    def test_law_linear_density(self):
        for flow, buoyancy, z in [
            (10, 0.01, 10.0), (50, 0.02, 13.572088), (100, 0.03, 14.938016), (1, 0.05, 2.714418),
        ]:
            drawn = zone(linear(buoyancy), Sink(0.0, flow))
            for limit in (-drawn.lower.limit, drawn.upper.limit):
                self.assertAlmostEqual(limit, (flow / buoyancy) ** (1 / 3), delta=1e-8)
                self.assertAlmostEqual(limit, z, delta=1e-6)

    def test_law_parabolic_tracer_about_a_centred_port(self):
        column, sink = linear(0.02), Sink(0.0, 50.0)
        points, part, _, _ = shares(column, sink, zone(column, sink))
        drawn = float((part * (9.0 + 0.3 * points + 0.02 * points**2)).sum())
        self.assertAlmostEqual(drawn, 9.0 + 0.02 * 2500.0 ** (2 / 3) / 7.0, delta=1e-9)

    def test_law_constant_tracer_comes_back(self):
        samples = [(z, t, 7.25) for z, t, _ in SAMPLES]
        for port, flow, angle, *_ in WORKED:
            drawn = release(Column(0, 60, samples), Sink(port, flow, angle))
            self.assertAlmostEqual(drawn.oxygen, 7.25, delta=1e-12)

    def test_scenario_worked_cases(self):
        column = Column(0, 60, SAMPLES)
        for port, flow, angle, lower, upper, peak, t, oxygen, qb_up, qb_down in WORKED:
            with self.subTest(port=port, flow=flow):
                drawn = release(column, Sink(port, flow, angle))
                ends = drawn.zone
                self.assertAlmostEqual(ends.lower.limit, lower, delta=0.002)
                self.assertAlmostEqual(ends.upper.limit, upper, delta=0.002)
                self.assertAlmostEqual(ends.peak, peak, delta=0.002)
                self.assertAlmostEqual(drawn.temperature, t, delta=0.002)
                self.assertAlmostEqual(drawn.oxygen, oxygen, delta=0.002)
                self.assertLess(abs(ends.upper.boundary_flow / qb_up - 1), 1e-4)
                self.assertLess(abs(ends.lower.boundary_flow / qb_down - 1), 1e-4)

    def test_law_free_limit_gives_back_the_flow(self):
        column = Column(0, 60, SAMPLES)
        for flow in (0.05, 1.0, 12.0, 80.0):
            ends = zone(column, Sink(42.0, flow, pi / 2))
            for limit in (ends.lower.limit, ends.upper.limit):
                reach = abs(limit - 42.0)
                rho = column.water(np.array([limit, 42.0]))[2]
                back = 0.5 * reach**2.5 * sqrt(GRAVITY * abs(rho[0] - rho[1]) / rho[1])
                self.assertAlmostEqual(back / flow, 1.0, delta=1e-8)

    def test_law_release_is_continuous_where_a_limit_first_touches(self):
        column = Column(0, 60, SAMPLES)
        # from 40 the free side reaches farther than the wall: there Q_b, not distance, rules phi
        for port in (50.0, 40.0):
            with self.subTest(port=port):
                touch = zone(column, Sink(port, 40.0)).upper.boundary_flow
                below = release(column, Sink(port, touch * (1 - 1e-9)))
                above = release(column, Sink(port, touch * (1 + 1e-9)))
                self.assertFalse(below.zone.upper.bounded)
                self.assertTrue(above.zone.upper.bounded)
                self.assertAlmostEqual(below.temperature, above.temperature, delta=1e-6)
                self.assertAlmostEqual(below.zone.lower.limit, above.zone.lower.limit, delta=1e-5)

    def test_scenario_flow_too_large_for_both_sides_draws_the_whole_column(self):
        ends = zone(Column(0, 60, SAMPLES), Sink(30.0, 1e5))
        self.assertEqual((ends.lower.limit, ends.upper.limit), (0.0, 60.0))
        self.assertAlmostEqual(ends.peak, 30.0, delta=1e-12)

    def test_law_density_bends_at_its_greatest_value(self):
        column = Column(0, 30, [(0, 2.0, 5.0), (30, 8.0, 5.0)])
        # pure water is densest at 3.983035 C by the formula, up to its small linear terms
        turn = float(np.interp(3.98, [2.0, 8.0], [0.0, 30.0]))
        self.assertLess(float(np.min(np.abs(column.z - turn))), 0.05)

    def test_law_levelled_density_never_falls_with_depth_and_keeps_its_mass(self):
        # two inversions that must be pooled into one, one alone, one at the surface
        cast = [
            (0, 6.4, 1), (8, 6.0, 2), (13, 6.3, 3), (20, 5.7, 3), (28, 7.5, 4), (31, 7.1, 4),
            (34, 9.0, 5), (40, 16.0, 7), (46, 16.3, 8), (50, 15.9, 8),
        ]
        column = Column(0, 50, cast)
        self.assertEqual(len(column.blocks), 3)
        fine = column.water(np.linspace(0, 50, 20001))[2]
        self.assertLess(float(np.max(np.diff(fine))), 1e-9)
        points, weight = gauss(column.z)
        measured = density(np.interp(points, *np.array(cast).T[:2]))
        levelled = column.water(points)[2]
        self.assertAlmostEqual(float((weight * (levelled - measured)).sum()), 0.0, delta=1e-8)

    def test_law_blend_is_weighted_by_flow(self):
        column = Column(0, 60, SAMPLES)
        drawn, temperature, oxygen = mix(column, [Sink(45.0, 30.0), Sink(10.0, 10.0)])
        self.assertAlmostEqual(4 * temperature, 3 * drawn[0].temperature + drawn[1].temperature)
        self.assertAlmostEqual(4 * oxygen, 3 * drawn[0].oxygen + drawn[1].oxygen)


if __name__ == "__main__":
    unittest.main()
