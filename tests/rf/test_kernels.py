"""Ring kernels and rules against deliberately dumb second ways to the same numbers."""

from math import log, pi

import numpy as np
import pytest
from scipy.integrate import quad

from boomwright.rf.kernels import averaged_kernel, dynamic_ring_kernels, spherical_wave, static_ring_kernels
from boomwright.rf.quadrature import corner_rule, from_start, gauss_unit, interpolation, self_rule, smooth_rule


@pytest.mark.parametrize(
    "axial, radius, source", [(0.3, 1.0, 1.0), (2.0, 1.0, 0.4), (50.0, 1.0, 1.0), (0.01, 1.0, 0.9)]
)
def test_static_harmonics_are_azimuth_means(axial, radius, source):
    found = static_ring_kernels(np.array(axial), np.array(radius), np.array(source))
    for order, value in enumerate(found):

        def integrand(psi, order=order):
            return np.cos(order * psi) / np.sqrt(axial**2 + radius**2 + source**2 - 2 * radius * source * np.cos(psi))

        expected = quad(integrand, 0, pi, limit=400, epsabs=1e-13)[0] / pi
        assert float(value) == pytest.approx(expected, rel=2e-3, abs=1e-9)
        if order < 2:
            assert float(value) == pytest.approx(expected, rel=1e-8, abs=1e-11)


def test_static_kernel_is_logarithmic_where_rings_meet():
    """g0 -> ln(8 a / u) / (pi a)."""
    near, radius = 1e-6, 0.7
    g0 = float(static_ring_kernels(np.array(near), np.array(radius), np.array(radius))[0])
    assert g0 == pytest.approx(log(8 * radius / near) / (pi * radius), rel=1e-9)


def test_static_and_dynamic_make_the_whole_wave():
    k, axial, a, b = 2.0, 0.9, 0.3, 0.25
    psi = (np.arange(400) + 0.5) * pi / 400
    distance = np.sqrt(axial**2 + a * a + b * b - 2 * a * b * np.cos(psi))
    static = static_ring_kernels(np.array(axial), np.array(a), np.array(b))
    dynamic = dynamic_ring_kernels(np.array(axial), np.array(a), np.array(b), k, 8)
    for order in range(3):
        expected = (np.cos(order * psi) * np.exp(-1j * k * distance) / distance).mean()
        assert complex(static[order] + dynamic[order]) == pytest.approx(expected, rel=1e-4, abs=1e-6)


@pytest.mark.parametrize("turn", [0.0, 0.7])
def test_averaged_kernel_is_the_mean_over_both_rings(turn):
    """Rings ten radii apart, parallel and turned, against 64 x 64 points."""
    k, centre = 1.0, np.array([1.0, 0.4, 0.2])
    a, b = 0.1, 0.08
    first, second = np.array([0.0, 1.0, 0.0]), np.array([np.sin(turn), np.cos(turn), 0.0])
    across = np.array([np.cos(turn), -np.sin(turn), 0.0])
    phi = np.arange(64) * 2 * pi / 64
    up = np.array([0.0, 0.0, 1.0])
    one = a * (np.outer(np.cos(phi), [1.0, 0.0, 0.0]) + np.outer(np.sin(phi), up))
    two = b * (np.outer(np.cos(phi), across) + np.outer(np.sin(phi), up))
    distances = np.linalg.norm(centre + one[:, None] - two[None], axis=2)
    expected = spherical_wave(distances, k).mean()
    away = np.linalg.norm(centre)
    along = (np.array(centre @ first / away), np.array(centre @ second / away))
    found = complex(averaged_kernel(np.array(away), k, along, (np.array(a), np.array(b))))
    assert found == pytest.approx(expected, rel=2e-4)
    assert abs(complex(spherical_wave(np.array(away), k)) - expected) > 1e-3 * abs(expected)


def integral(rule, function):
    return float((rule.weight * function(rule.first, rule.second)).sum())


def test_rules_take_the_logarithm():
    """Integrals over the unit square: ln|s - t| is -3/2; ln(s + t) is 2 ln 2 - 3/2 (closed forms)."""
    assert integral(self_rule(), lambda s, t: np.log(np.abs(s - t))) == pytest.approx(-1.5, abs=1e-6)
    corner = 2 * log(2) - 1.5
    assert integral(corner_rule(), lambda s, t: np.log(1 - s + t)) == pytest.approx(corner, abs=1e-6)
    assert integral(from_start(corner_rule()), lambda s, t: np.log(s + t)) == pytest.approx(corner, abs=1e-6)
    assert integral(smooth_rule(5), lambda s, t: s**4 * t**7) == pytest.approx(1 / 40, rel=1e-12)


@pytest.mark.parametrize("rule", [self_rule(), corner_rule(), smooth_rule(3)], ids=["self", "corner", "smooth"])
def test_moments_sum_to_the_area(rule):
    moments = rule.moments.sum(axis=1)
    assert moments[4] == pytest.approx(1.0, rel=1e-6)
    assert moments[:4].sum() == pytest.approx(1.0, rel=1e-6)


def test_interpolation_is_exact_for_polynomials_and_at_nodes():
    nodes, places = gauss_unit(7)[0], np.array([0.1, 0.5, 0.93, *gauss_unit(7)[0][:2]])
    shares = interpolation(nodes, places)
    assert shares @ nodes**6 == pytest.approx(places**6, rel=1e-12)
    assert shares.sum(axis=1) == pytest.approx(1.0)
