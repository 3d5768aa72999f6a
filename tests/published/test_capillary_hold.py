"""Openings that surface tension holds without shaking.

Sources. Inverted round tube, contact angle 90 degrees: critical Bond number rho g R^2 / gamma = 1.8412^2 = 3.39
(Masica, Petrash & Otto, NASA TN D-2267, 1964, from memory). Slot between parallel walls at 90 degrees: width
pi sqrt(gamma / (rho g)), the half-wave rule (textbook capillarity, derived). Capillary length of water 2.7 mm at 20 degC
(handbook, from memory). Perfectly wetting liquid in a round tube: 0.842 (Concus 1968, from memory), quoted as a bound.
"""

import numpy as np
import pytest
from scipy.optimize import brentq

import containment as ct
from containment.constants import STANDARD_GRAVITY as G
from containment.judgement.case import Case, allowance
from containment.judgement.findings import Answer
from containment.judgement.verdict import WETTING_BOND_NUMBER

# Water at 20 degC: 998.2 kg/m^3, 1.002 mPa s, 72.8 mN/m (handbook, from memory).
WATER = ct.Liquid(density=998.2, viscosity=1.002e-3, surface_tension=0.0728)
LENGTH = np.sqrt(0.0728 / (998.2 * G))


def test_capillary_length_of_water():
    assert pytest.approx(2.7e-3, abs=0.05e-3) == LENGTH


def test_critical_bond_number_of_a_round_tube():
    def unstable(diameter):
        return Case(WATER, ct.Cylinder(diameter=diameter, depth=0.05), allowance(depth=0.05)).unshaken.growth_rate > 0.0

    critical = brentq(lambda d: 1.0 if unstable(d) else -1.0, 8e-3, 12e-3, xtol=1e-9)
    assert (0.5 * critical / LENGTH) ** 2 == pytest.approx(3.39, abs=0.005)
    assert 0.5 * critical / LENGTH == pytest.approx(1.8412, abs=5e-5)


def test_half_wave_rule_of_a_slot():
    at = np.pi * LENGTH
    assert at == pytest.approx(8.5e-3, abs=0.1e-3)  # pi times 2.7 mm
    for width, falls in ((0.999 * at, False), (1.001 * at, True)):
        found = Case(WATER, ct.Slot(width=width, depth=0.05), allowance(depth=0.05))
        assert (found.unshaken.growth_rate > 0.0) == falls


def test_a_wetting_liquid_is_called_held_only_below_its_own_bond_number():
    assert WETTING_BOND_NUMBER == 0.842
    for bond, answer in ((0.80, Answer.HELD), (0.90, Answer.MARGINAL), (3.0, Answer.MARGINAL)):
        tube = ct.Cylinder(diameter=2.0 * np.sqrt(bond) * LENGTH, depth=0.05)
        assert ct.assess(WATER, tube).answer is answer
