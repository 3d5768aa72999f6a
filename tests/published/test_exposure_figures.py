"""Exposure figures that the cautions quote, against the directives.

Read: Directive 2002/44/EC, article 3, as kept at legislation.gov.uk (eudr/2002/44): hand-arm 2.5 action, 5 limit;
whole-body 0.5 action, 1.15 limit, m/s^2 over eight hours. Directive 2003/10/EC: 80 lower action, 85 upper action, 87 limit,
dB(A) (European scientific committee SCENIHR 2008, table 3, as summarised by GreenFacts). 29 CFR 1910.95: 90 dB(A)
permitted, 85 dB(A) hearing conservation (secondary sources). ISO 13732-1, ISO 12100: named from memory.
"""

import re

from containment.judgement.cautions import machine_cautions, product_cautions, trial_cautions


def texts(**point):
    return {caution.topic: caution.text for caution in machine_cautions(**point)}


def test_figures():
    found = texts(frequency=50.0, acceleration=400.0)
    assert re.findall(r"\d+\.?\d*", found["hand-arm vibration"].split("2002/44/EC")[1])[:2] == ["2.5", "5"]
    assert re.findall(r"\d+\.\d+", found["whole-body vibration"].split("2002/44/EC")[1])[:2] == ["0.5", "1.15"]
    assert re.findall(r"\d+", found["noise"].split("2003/10/EC")[1].split(";")[0])[:2] == ["80", "87"]
    assert re.findall(r"\d+", found["noise"].split("1910.95")[1])[:2] == ["85", "90"]


def test_the_table_moves_as_it_says():
    """Root mean square of a sine: peak over sqrt(2); weight on the table: 1 + a/g_n."""
    found = texts(frequency=50.0, acceleration=400.0)
    assert "283 m/s^2 r.m.s." in found["hand-arm vibration"]
    assert "42 times its weight" in found["fasteners and guards"]


def test_only_what_applies():
    assert "noise" not in texts(frequency=10.0, acceleration=50.0)  # below 20 Hz nothing is heard
    assert "whole-body vibration" not in texts(frequency=200.0, acceleration=50.0)  # ISO 2631-1 ends at 80 Hz (from memory)
    assert "hand-arm vibration" not in texts(frequency=2000.0, acceleration=50.0)  # ISO 5349-1 ends at 1 kHz (from memory)


def test_heat_and_ignition():
    cool = product_cautions((), temperature=293.15, flash_point=433.0)
    hot = product_cautions((), temperature=353.15, flash_point=None)
    near = product_cautions((), temperature=323.15, flash_point=333.15)
    assert [c.topic for c in cool] == []
    assert [c.topic for c in hot] == ["hot product"]
    assert {c.topic for c in near} == {"hot product", "ignition"}


def test_every_verdict_defers():
    assert "licensed practice" in trial_cautions()[-1].text
    assert "approval" in trial_cautions()[-1].text
