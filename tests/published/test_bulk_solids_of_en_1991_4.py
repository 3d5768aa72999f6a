"""Bulk solids of the table against EN 1991-4:2006 (silos and tanks), annex E, table E.1.

The table was read as written out in public code (github.com/arturopala/encalmo, ParticulateSolid.scala), not in the
standard itself. Unit weights there are those in silos, so what is poured loosely into a small vessel may be lighter.
"""

import math

import pytest

from containment.constants import STANDARD_GRAVITY
from containment.given.tables import grain_entry

TABLE_E1 = {
    # name here: lower and upper unit weight kN/m3, angle of repose deg, wall friction on D1 (polished), D2 (smooth steel)
    "calcined alumina": (10.0, 12.0, 36, 0.41, 0.46),
    "portland cement": (13.0, 16.0, 36, 0.41, 0.46),
    "powdered coal": (6.0, 8.0, 34, 0.41, 0.51),
    "fly ash": (8.0, 15.0, 41, 0.51, 0.62),
    "wheat flour": (6.5, 7.0, 45, 0.24, 0.33),
    "hydrated lime": (6.0, 8.0, 34, 0.36, 0.41),
    "limestone powder": (11.0, 13.0, 36, 0.41, 0.51),
    "maize": (7.0, 8.0, 35, 0.22, 0.36),
    "dry sand": (14.0, 16.0, 39, 0.38, 0.48),
    "soya beans": (7.0, 8.0, 29, 0.24, 0.38),
    "sugar": (8.0, 9.5, 38, 0.46, 0.51),
    "wheat kernels": (7.5, 9.0, 34, 0.24, 0.38),
}


@pytest.mark.parametrize("name", TABLE_E1)
def test_a_bulk_solid_of_the_standard(name):
    lower, upper, repose, polished, smooth = TABLE_E1[name]
    entry = grain_entry(name)
    assert lower - 0.005 <= entry.bulk_density * STANDARD_GRAVITY / 1000.0 <= upper
    assert math.degrees(entry.angle_of_repose_rad) == pytest.approx(repose)
    assert polished <= entry.wall_friction == smooth
    for field in ("bulk_density", "angle_of_repose", "wall_friction"):
        assert entry.source_read[field] and "EN 1991-4" in entry.sources[field]
    assert not entry.source_read["d50"]  # sizes and strengths are not in the standard
