"""Every variant of the layer in the window and in the count of growing exponents: the two must tell the same."""

import numpy as np
import pytest

from containment.constants import STANDARD_GRAVITY as G
from containment.physics.completeness import count_growing
from containment.physics.edges import hold_edges
from containment.physics.film import COVERED, FilmedLayer
from containment.physics.two_liquids import TwoLiquids
from containment.physics.viscoelastic import ComplexViscosity, ViscoelasticLayer
from containment.physics.wall_drag import DraggedLayer, cylinder_wall_factors
from containment.physics.wavenumbers import cylinder

BODY = {"density": 1261.0, "surface_tension": 0.0634, "depth": 0.03}
MODES = cylinder(0.035)
FACTORS = cylinder_wall_factors(MODES, radius=0.035, depth=0.03)
VARIANTS = {
    "film": FilmedLayer(**BODY, viscosity=1.41, film_modulus=0.05),
    "skin": FilmedLayer(**BODY, viscosity=1.41, film_modulus=COVERED),
    "jeffreys": ViscoelasticLayer(
        **BODY, liquid=ComplexViscosity.jeffreys(viscosity=1.41, relaxation=2e-3, retardation=1e-3)
    ),
    "gel": ViscoelasticLayer(**BODY, liquid=ComplexViscosity.kelvin_voigt(viscosity=1.41, modulus=20.0)),
    "dragged": DraggedLayer(layer=FilmedLayer(**BODY, viscosity=1.41, film_modulus=0.0), wall_factor=FACTORS),
    "over oil": TwoLiquids(
        layer_density=1261.0, layer_viscosity=1.41, layer_depth=0.03, beyond_density=800.0, beyond_viscosity=0.01,
        beyond_depth=0.03, interfacial_tension=0.03,
    ),
}  # fmt: skip


@pytest.mark.parametrize("name", list(VARIANTS))
@pytest.mark.parametrize("growth", [0.0, 0.3])
def test_window_and_count_agree(name, growth):
    layer, f = VARIANTS[name], 60.0
    w = 2 * np.pi * f
    edges = hold_edges(
        layer, MODES, [f], growth=growth, capillary_wavenumber=np.sqrt(1261 * G / 0.0634), depth=0.03
    )
    lower, upper = edges.lower[0], edges.upper[0]
    assert 0 < lower < upper < np.inf
    k = MODES.discrete[:150]

    def growing(a):
        count = count_growing(layer, k, w, a, growth=growth)
        assert count.proven.all()
        return count.growing

    assert growing(0.5 * (lower + upper)).sum() == 0
    assert growing(1.001 * lower).sum() == 0
    low = growing(0.999 * lower)
    assert low[np.argmin(np.abs(k - edges.lower_wavenumber[0]))] > 0
    assert growing(0.999 * upper).sum() == 0
    high = growing(1.001 * upper)
    assert high[np.argmin(np.abs(k - edges.upper_wavenumber[0]))] > 0
