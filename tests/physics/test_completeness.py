"""The count of growing exponents: against every multiplier of the time-stepped route, near neutral points, and edges."""

import numpy as np
import pytest

from containment.physics.completeness import INTEGER_TOLERANCE, count_growing
from containment.physics.dispersion import Layer
from containment.physics.edges import first_roots
from containment.physics.floquet import exponents, growing_exponents, static_growth_rate
from containment.physics.hill import Half, rows_needed
from tests.independent import time_stepping

LAYERS = {
    "syrup": Layer(density=1410.0, viscosity=10.0, surface_tension=0.08, depth=0.03),
    "oil": Layer(density=960.0, viscosity=0.1, surface_tension=0.021, depth=0.004),
    "water": Layer(density=998.2, viscosity=1.002e-3, surface_tension=0.0728, depth=0.02),
    "stiff": Layer(density=1400.0, viscosity=120.0, surface_tension=0.08, depth=0.1),
}


def drive_points(count, seed, modes):
    """Draw layers, modes and drive points over the whole range of the tool, to 60 mm of amplitude."""
    rng = np.random.default_rng(seed)
    for _ in range(count):
        layer = Layer(
            density=rng.uniform(700, 1600), viscosity=10.0 ** rng.uniform(-3.3, 2.3), surface_tension=rng.uniform(0.02, 0.1),
            depth=10.0 ** rng.uniform(-3, -0.7),
        )  # fmt: skip
        w = 2.0 * np.pi * 10.0 ** rng.uniform(0.7, 3.3)
        yield layer, 10.0 ** rng.uniform(1.0, 3.8, modes), w, w * w * 10.0 ** rng.uniform(-5.0, np.log10(0.06))


@pytest.mark.parametrize("growth", [0.0, 1.0])
def test_count_is_zero_exactly_where_both_determinants_say_so(growth):
    """6,000 modes: none growing where both are positive, an odd number where one is negative."""
    unproven = both = 0
    for layer, k, w, a in drive_points(150, seed=int(growth) + 1, modes=40):
        count = count_growing(layer, k, w, a, growth=growth)
        rows = rows_needed(a / (w * w), float(k.max()))
        harmonic, subharmonic = (
            Half.of(layer, k, np.full(len(k), w), growth, rows, subharmonic=sub).margin(np.full(len(k), a)) < 0.0
            for sub in (False, True)
        )
        doubt = ~count.proven
        if doubt.any():  # a doubt must be owned up to, and more rows must settle it
            unproven += np.count_nonzero(doubt)
            more = count_growing(layer, k[doubt], w, a, growth=growth, extra_rows=20)
            assert more.proven.all()
            count.growing[doubt] = more.growing
        np.testing.assert_array_equal(count.growing % 2 == 1, harmonic != subharmonic)
        # a pair of growing exponents of one kind leaves both signs alone; only the count sees it
        pairs = (count.growing > 0) & ~harmonic & ~subharmonic
        both += np.count_nonzero(pairs)
        assert (count.growing[harmonic | subharmonic] > 0).all()
        assert np.count_nonzero(count.distance > INTEGER_TOLERANCE) == np.count_nonzero(~count.proven)
    print(f"pairs that the signs do not show: {both}; not proven: {unproven}")
    assert both <= 12
    assert unproven <= 6


@pytest.mark.parametrize("growth", [0.0, 0.5])
def test_count_is_the_number_of_growing_multipliers(growth):
    """Every multiplier of the time-stepped layer outside the circle exp(growth T)."""
    compared = skipped = grown = 0
    for layer, k, w, a in drive_points(45, seed=7 + int(2 * growth), modes=5):
        count = count_growing(layer, k, w, a, growth=growth)
        assert count.proven.all()
        for kk, number in zip(k, count.growing, strict=True):
            try:
                values = time_stepping.multipliers(
                    wavenumber=kk, depth=layer.depth, density=layer.density, viscosity=layer.viscosity,
                    surface_tension=layer.surface_tension, acceleration=a, frequency=w / (2.0 * np.pi),
                )  # fmt: skip
            except time_stepping.OutOfReachError:
                skipped += 1
                continue
            rates = np.log(np.maximum(np.abs(values), 1e-300)) - growth * 2.0 * np.pi / w
            # rounding blurs what is small beside the largest multiplier, and neutral ones
            if np.abs(rates).min() < 1e-5 or np.log(np.abs(values[0])) > 25.0:
                skipped += 1
                continue
            assert number == np.count_nonzero(rates > 0.0)
            compared += 1
            grown += number > 0
    print(f"compared {compared} ({grown} growing), skipped {skipped}")
    assert compared > 120
    assert grown > 30


@pytest.mark.parametrize("name", LAYERS)
@pytest.mark.parametrize("frequency", [17.0, 60.0, 400.0])
def test_count_on_both_sides_of_a_neutral_point(name, frequency):
    """A mode that is neutral to one part in 1e3 ... 1e8 is still counted, and the count is still proven."""
    layer = LAYERS[name]
    w = 2.0 * np.pi * frequency
    k = np.geomspace(40.0, 1500.0, 5)
    for subharmonic in (False, True):
        at = first_roots(layer, k, np.full(5, w), 0.0, np.full(5, 0.03 * w * w), subharmonic=subharmonic)
        for kk, a in zip(k[np.isfinite(at)], at[np.isfinite(at)], strict=True):
            one = np.array([kk])
            for step in (1e-3, 1e-5, 1e-7, 1e-8):
                below, above = (count_growing(layer, one, w, a * (1.0 + sign * step)) for sign in (-1, 1))
                assert below.proven[0] and above.proven[0]
                assert abs(int(above.growing[0]) - int(below.growing[0])) == 1


def test_count_at_rest():
    """Hardly shaken: one growing exponent where the layer falls faster than the allowance, none elsewhere."""
    for layer in LAYERS.values():
        k = np.geomspace(5.0, 3000.0, 60)
        for growth in (0.0, 0.2, 5.0):
            count = count_growing(layer, k, 2.0 * np.pi * 40.0, 1e-3, growth=growth)
            assert count.proven.all()
            np.testing.assert_array_equal(count.growing, static_growth_rate(layer, k) > growth)


def test_count_with_several_growing_exponents():
    """Far beyond break-up two exponents of one mode can grow; the number found by Newton's method is never larger."""
    found = 0
    for layer, k, w, a in drive_points(300, seed=23, modes=20):
        count = count_growing(layer, k, w, a)
        many = count.growing >= 2
        found += np.count_nonzero(many)
        for kk in k[many]:
            assert exponents(layer, np.array([kk]), w, a).exponent[0].real > 0.0
        some = growing_exponents(layer, k[~many], w, a).exponent.real
        np.testing.assert_array_equal(np.isfinite(some), count.growing[~many] == 1)
    print(f"modes with two growing exponents: {found}")


def test_more_rows_do_not_move_the_count():
    for layer, k, w, a in drive_points(30, seed=31, modes=20):
        one, two = (count_growing(layer, k, w, a, extra_rows=extra) for extra in (0, 20))
        np.testing.assert_array_equal(one.growing, two.growing)
        assert one.distance.max() < INTEGER_TOLERANCE
        assert two.distance.max() < 0.5 * INTEGER_TOLERANCE
