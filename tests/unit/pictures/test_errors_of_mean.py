"""The standard error: its table against scipy, its formula against numpy, and how often the truth lies within it."""

from __future__ import annotations

import numpy as np
import pytest
from scipy import stats

from renderer.frames.round_ranges import by_replicate
from renderer.pictures.errors_of_mean import STUDENT_T, frame_error, standard_error

ONE_SIGMA = float(stats.norm.cdf(1.0))


def test_quantiles_of_student_agree_with_scipy() -> None:
    expected = [float(stats.t.ppf(ONE_SIGMA, freedom)) for freedom in range(1, 8)]
    np.testing.assert_allclose(STUDENT_T, expected, rtol=1e-7)
    assert STUDENT_T[0] == pytest.approx(np.tan(np.pi * (ONE_SIGMA - 0.5)), rel=1e-7)  # closed form for one degree


def test_equal_counts_give_the_error_of_the_mean_of_means() -> None:
    means = np.random.default_rng(3).integers(0, 2**40, (8, 5, 6))
    error = standard_error(means * 4, np.full(8, 4))
    expected = stats.t.ppf(ONE_SIGMA, 7) * means.std(axis=0, ddof=1) / np.sqrt(8)
    np.testing.assert_allclose(error, expected, rtol=1e-6)


def test_one_replicate_has_no_error() -> None:
    assert standard_error(np.ones((8, 2, 2), dtype=np.int64), by_replicate(((0, 1),))) is None
    assert standard_error(np.ones((8, 2, 2), dtype=np.int64), np.array([0, 0, 9, 0, 0, 0, 0, 0])) is None


def test_equal_replicates_have_an_error_of_nothing() -> None:
    counts = by_replicate(((0, 13),))
    sums = counts[:, None, None] * np.full((8, 2, 3), 1000)
    np.testing.assert_array_equal(standard_error(sums, counts), np.zeros((2, 3)))


@pytest.mark.parametrize("rounds", [2, 3, 7, 8, 13, 64, 100])
@pytest.mark.parametrize("law", ["normal", "uniform"])
def test_the_truth_lies_within_it_68_percent_of_the_time(rounds: int, law: str) -> None:
    """Over 100 seeds of 256 pixels each; 5 % is ten times the noise of such a share (0.29 %), and 25,600 are drawn."""
    draw = np.random.default_rng([rounds, len(law)])
    counts = by_replicate(((0, rounds),))
    inside = []
    for _ in range(100):
        samples = draw.normal(100.0, 30.0, (rounds, 16, 16)) if law == "normal" else draw.random((rounds, 16, 16)) * 200
        quanta = np.rint(samples * 2.0**30).astype(np.int64)
        sums = np.zeros((8, 16, 16), dtype=np.int64)
        for number in range(rounds):
            sums[number & 7] += quanta[number]
        error = standard_error(sums, counts)
        assert error is not None
        inside.append(np.abs(sums.sum(axis=0) / rounds - 100.0 * 2.0**30) <= error)
    if law == "uniform" and rounds < 8:
        assert 0.60 < np.mean(inside) < 0.76  # few replicates of one sample each are not normal, and t assumes it
    else:
        assert abs(np.mean(inside) - 0.6827) < 0.05 * 0.6827 / 2.0  # half of what is asked of the renderer


def test_a_frames_error_holds_19_of_20_pixels() -> None:
    mean = np.full((10, 10), 50.0)
    error = np.linspace(0.01, 1.0, 100).reshape(10, 10)
    assert frame_error(error, mean) == pytest.approx(0.96 / 50.0)
    assert np.mean(error / mean <= frame_error(error, mean)) >= 0.95


def test_dark_pixels_count_against_a_hundredth_of_the_mean() -> None:
    mean = np.array([[99.0, 1.0 - 1e-9, 0.0, 0.0]])
    error = np.array([[0.0, 0.0, 0.0, 0.005]])
    assert frame_error(error, mean) == pytest.approx(0.005 / (0.01 * mean.mean()))
    assert frame_error(np.zeros((3, 3)), np.zeros((3, 3))) == 0.0
