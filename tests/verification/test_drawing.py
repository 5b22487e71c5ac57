"""Random boards: their distributions by moments and ends, and networks that track."""

from __future__ import annotations

import numpy as np
import pytest
from sampling import DIVIDER, Real, drawn
from scipy import integrate, stats

BOARDS = 4000
SIGMAS = 5.0  # how far a mean of so many boards may lie from its expectation


def parts(first: str, second: str) -> str:
    return f"parts: {{R1: {{resistance: 1000, {first}}}, R2: {{resistance: 2000, {second}}}}}\n"


def check_moments(values: Real, mean: float, variance: float) -> None:
    """Assert that mean and variance are those of a distribution with these."""
    assert abs(values.mean() - mean) < SIGMAS * np.sqrt(variance / BOARDS)
    # The variance of a sample variance is at most that of a two-point distribution of the
    # same range: with a fourth moment of at most 3 variance^2 for all that are drawn here.
    assert abs(values.var() / variance - 1) < SIGMAS * np.sqrt(2.0 / BOARDS)


def test_uniform_values_fill_the_tolerance() -> None:
    found = drawn(parts("tolerance: 5 %", "tolerance: [-20 %, +80 %]") + DIVIDER, BOARDS)

    # Between a and b: mean (a + b)/2, variance (b - a)^2/12.
    check_moments(found["R1"], 1000.0, 100.0**2 / 12)
    check_moments(found["R2"], 2600.0, 2000.0**2 / 12)
    for name, low, high in (("R1", 950.0, 1050.0), ("R2", 1600.0, 3600.0)):
        assert low <= found[name].min() < low + 0.01 * (high - low)
        assert high - 0.01 * (high - low) < found[name].max() <= high
    assert stats.kstest((found["R1"] - 950) / 100, "uniform").pvalue > 1e-3


def test_normal_values_have_three_standard_deviations_of_tolerance() -> None:
    normal = "tolerance: 6 %, distribution: normal"
    found = drawn(parts(normal, normal) + DIVIDER, BOARDS)["R1"]

    cut = stats.truncnorm(-3, 3)
    check_moments(found, 1000.0, 20.0**2 * cut.var())
    assert found.min() >= 940.0
    assert found.max() <= 1060.0
    assert stats.kstest((found - 1000.0) / 20.0, cut.cdf).pvalue > 1e-3


def test_two_sided_values_have_no_inner_half() -> None:
    sorted_out = "tolerance: 6 %, distribution: two-sided"
    found = drawn(parts(sorted_out, sorted_out) + DIVIDER, BOARDS)["R1"]

    # |z| from 1.5 to 3: the second moment over the mass that is left.
    mass, _ = integrate.quad(stats.norm.pdf, 1.5, 3)
    second, _ = integrate.quad(lambda z: z * z * stats.norm.pdf(z), 1.5, 3)
    check_moments(found, 1000.0, 20.0**2 * second / mass)
    off = np.abs(found - 1000.0)
    assert off.min() >= 30.0 * (1 - 1e-9)
    assert off.max() <= 60.0 * (1 + 1e-9)
    assert abs((found > 1000.0).mean() - 0.5) < SIGMAS * 0.5 / np.sqrt(BOARDS)


def test_a_normal_part_with_unequal_tolerance_stays_within_it() -> None:
    lopsided = "tolerance: [-20 %, +80 %], distribution: normal"
    found = drawn(parts(lopsided, lopsided) + DIVIDER, BOARDS)["R1"]

    assert 800.0 <= found.min() < 850.0
    assert 1600.0 < found.max() <= 1800.0
    assert abs((found > 1000.0).mean() - 0.5) < SIGMAS * 0.5 / np.sqrt(BOARDS)


def test_parts_are_drawn_independently() -> None:
    found = drawn(parts("tolerance: 5 %", "tolerance: 5 %") + DIVIDER, BOARDS)

    assert abs(np.corrcoef(found["R1"], found["R2"])[0, 1]) < SIGMAS / np.sqrt(BOARDS)


@pytest.mark.parametrize("distribution", ["uniform", "normal", "two-sided"])
def test_parts_of_a_network_track(distribution: str) -> None:
    tracked = f"tolerance: 5 %, network: RN, track: 0.1 %, distribution: {distribution}"
    found = drawn(parts(tracked, tracked) + DIVIDER, BOARDS)
    ratio = found["R2"] / found["R1"] / 2

    assert (ratio <= 1.001 / 0.999 * (1 + 1e-9)).all()
    assert (ratio >= 0.999 / 1.001 * (1 - 1e-9)).all()
    assert np.ptp(ratio) > 0.002  # two-sided: 0.5 and 1 parts of the track to either side
    for name, nominal in (("R1", 1000.0), ("R2", 2000.0)):
        assert (np.abs(found[name] / nominal - 1) <= 0.05 * (1 + 1e-9)).all()
        assert np.ptp(found[name]) > 0.08 * nominal
    assert np.corrcoef(found["R1"], found["R2"])[0, 1] > 0.99


def test_a_network_that_may_stray_as_far_as_its_tolerance_does_not_track() -> None:
    loose = "tolerance: 1 %, network: RN, track: 2 %"
    found = drawn(parts(loose, loose) + DIVIDER, BOARDS)

    assert (np.abs(found["R1"] / 1000.0 - 1) <= 0.01 * (1 + 1e-9)).all()
    assert abs(np.corrcoef(found["R1"], found["R2"])[0, 1]) < SIGMAS / np.sqrt(BOARDS)
