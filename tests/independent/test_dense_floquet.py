"""The dense route's thresholds against the Mathieu curves."""

import math

import numpy as np
import pytest
from scipy.special import mathieu_a, mathieu_b

from tests.independent.dense_floquet import thresholds


@pytest.mark.parametrize("level", [-0.1, -0.6, 0.5])
def test_mathieu_edges(level):
    # y'' + (level - 2 q cos 2x) y = 0 with y = sum y_n exp(i p_n x), p_n = 2n or 2n + 1:
    # (level - p_n^2) y_n = q (y_(n-1) + y_(n+1)).
    even = thresholds(level - (2.0 * np.arange(-12, 13)) ** 2)
    odd = thresholds(level - (2.0 * np.arange(-12, 12) + 1) ** 2)
    # DLMF 28.2: solutions of period pi carry a_0, b_2, a_2, ...; those of period 2 pi carry a_1, b_1, ...
    curves = [mathieu_a(0, even[0]), mathieu_a(2, even[0]), mathieu_b(2, even[0])]
    assert min(abs(curve - level) for curve in curves) < 1e-8
    assert level > 0 or abs(curves[0] - level) < 1e-8
    assert mathieu_b(1, odd[0]) == pytest.approx(level, abs=1e-8)


def test_scaling_and_refusals():
    a_n = 0.3 - (2.0 * np.arange(-6, 6) + 1) ** 2
    assert np.allclose(thresholds(5.0 * a_n), 5.0 * thresholds(a_n), rtol=1e-9)
    for bad in (np.array([1.0]), np.ones((2, 2)), np.array([1.0, 0.0, 1.0]), np.array([1.0, math.nan])):
        with pytest.raises(ValueError, match="finite, nonzero"):
            thresholds(bad)
