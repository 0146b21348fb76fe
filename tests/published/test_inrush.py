"""Method inrush.

Sources: fuse guide of a manufacturer, 2017, p. 12 (facts S6, pulse-life factors, seen); a public
example (S7: 6 A seen, its I²t computed); fuse catalogue of another manufacturer, p. 8 (S8, seen);
the lamp of facts 6.4 was computed.
"""

import pytest

from tests.helpers.design import worked


def test_s7_public_example() -> None:
    """S7: 24 V, 4 Ω, 220 µF give 6 A and 0.01584 A²s."""
    found = worked("use inrush as i\nV_pk = 24 V\nR_s = 4 Ω\nC = 220 µF")
    assert found["i.I_pk"].nominal == pytest.approx(6)
    assert found["i.I2t"].nominal == pytest.approx(0.01584)
    assert found["i.tau"].nominal == pytest.approx(0.88)


def test_s8_melting_integral() -> None:
    """S8: a pulse of 60 A²s that may use 35 % asks for 171.4 A²s."""
    pulse = "V_pk = 100 V\nR_s = 1 Ω\nC = 12 mF\nf_line = 1 Hz"
    found = worked(f"use inrush as i\n{pulse}\nk_life = 0.35")
    assert found["i.I2t"].nominal == pytest.approx(60)
    assert found["i.I2t_melt"].nominal == pytest.approx(171.4, abs=0.1)


def test_s6_default_is_for_many_pulses() -> None:
    """S6: the default share, 22 %, is that for 100 000 pulses."""
    found = worked("use inrush as i\nV_pk = 24 V\nR_s = 4 Ω\nC = 220 µF")
    assert found["i.k_life"].nominal == 0.22
    assert found["i.k_life"].notes == ("default of the method",)


def test_lamp() -> None:
    """Section 6.4: 325.27 V, 47 Ω, 10 µF give 6.921 A, 11.26e-3 A²s, 0.529 J, 0.47 ms."""
    found = worked("use inrush as i\nV_pk = 325.27 V\nR_s = 47 Ω\nC = 10 µF")
    shown = [found[f"i.{each}"].nominal for each in ("I_pk", "I2t", "E_R", "tau")]
    assert shown == pytest.approx([6.921, 11.26e-3, 0.529, 0.47], rel=5e-4)
