"""Constants of shaken and flowing beds, each with its source.

None of the papers was at hand in full: where an abstract was read it is said so, figures are from memory.
"""

import math

import pytest

from containment.physics.bed.arching import ARCH_RATIO, grains_before_arch
from containment.physics.bed.discharge import SHAKEN_FACTOR, discharge_rate
from containment.physics.bed.flight import UNBROKEN_FLIGHT, flight, take_off_phase
from containment.physics.bed.powder_group import powder_group


def test_flight_as_long_as_a_period():
    """Mehta & Luck 1990; Melo, Umbanhowar & Swinney 1995 (from memory): Gamma = sqrt(1 + pi^2), near 3.3."""
    below, above = flight(3.29), flight(3.31)
    assert below.duration < 2.0 * math.pi < above.duration
    assert pytest.approx(3.2969, abs=1e-4) == UNBROKEN_FLIGHT


def test_no_lasting_arch_above_five_diameters():
    """4 to 5 diameters: Pacheco-Martinez et al., Phys. Rev. E 77, 021303 (2008), introduction read; 4.94 +- 0.03:
    Zuriguel et al. 2005, figure from memory."""
    assert 4.0 < ARCH_RATIO["spheres"] < 5.0
    assert math.isinf(float(grains_before_arch(5.0)))
    assert float(grains_before_arch(4.9)) > 1e12


def test_discharge_follows_the_five_halves_power_of_the_outlet():
    """Hagen 1852 and Beverloo 1961, as quoted in Mankoc et al. 2007 (read): D^(5/2) for outlets wide against the grains."""
    kw = dict(diameter=1e-5, bulk_density=1500.0, gravity=9.81)
    ratio = float(discharge_rate(outlet=0.2, **kw) / discharge_rate(outlet=0.1, **kw))
    assert ratio == pytest.approx(2.0**2.5, rel=5e-4)
    # 0.58 rho sqrt(g) D^(5/2) is 0.58 of a hole's area times 4/pi in free fall over one diameter's worth of speed sqrt(g D)
    assert float(discharge_rate(outlet=0.1, **kw)) == pytest.approx(0.58 * 1500.0 * math.sqrt(9.81) * 0.1**2.5, rel=1e-3)


def test_gentle_shaking_does_not_change_the_rate():
    """Janda et al., Europhys. Lett. 87, 24002 (2009), abstract read."""
    assert SHAKEN_FACTOR == 1.0


def test_take_off_phase():
    """sin(phase) = 1/Gamma: common practice."""
    assert math.sin(float(take_off_phase(2.9))) == pytest.approx(1 / 2.9)


def test_thirty_micrometres_are_cohesive():
    """Group C below about 30 um at 1 g/cm^3: trade article on Geldart's (1973) chart, read."""
    assert powder_group(diameter=25e-6, particle_density=1000.0) == "C"
    assert powder_group(diameter=100e-6, particle_density=1000.0) == "A"
    # the same article: B from 220 um at 1 g/cm^3
    assert powder_group(diameter=230e-6, particle_density=1000.0) == "B"
    assert powder_group(diameter=220e-6, particle_density=1000.0) == "A"
