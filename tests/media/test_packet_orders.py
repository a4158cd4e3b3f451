"""Packets behind media of one order of dispersion: closed forms of a Gaussian band, and what the third order does."""

from dataclasses import dataclass, field
from typing import ClassVar

import astropy.units as u
import numpy as np
import pytest

from whitefringe import media, spectra
from whitefringe.errors import UndefinedWidthError
from whitefringe.units import SPEED_OF_LIGHT


def number(measured, unit=u.one):
    return measured.to_value(unit)


def segment(medium, length):
    return media.Segment(medium=medium, length=length)


@dataclass(frozen=True, kw_only=True)
class OneOrder(media.Medium):
    """Phase phi(omega) = gvd w^2 / 2 + tod w^3 / 6 per metre, w from the centre [rad/s]: nothing else, to the letter."""

    centre: float
    gvd: float = 0.0
    tod: float = 0.0
    name: str = field(default="one order", init=False)
    shape: ClassVar[str] = "one order"

    def refractivity_si(self, wavenumber):
        s = np.asarray(wavenumber, dtype=float)
        scale = 2 * np.pi * SPEED_OF_LIGHT
        w = scale * s - self.centre
        a, b = self.gvd, self.tod
        # cycles (n - 1) sigma with derivatives in sigma, then divided by sigma (Leibniz backwards)
        path = [
            (a * w**2 / 2 + b * w**3 / 6) / (2 * np.pi),
            (a * w + b * w**2 / 2) * scale / (2 * np.pi),
            (a + b * w) * scale**2 / (2 * np.pi),
            b * scale**3 / (2 * np.pi) + 0 * w,
        ]
        n = path[0] / s
        first = (path[1] - n) / s
        second = (path[2] - 2 * first) / s
        return np.array([n, first, second, (path[3] - 3 * second) / s])


CENTRE = 250e12
WIDTH = 20e12


def gaussian_light():
    share = np.linspace(-4, 4, 4096) * WIDTH / 2
    return spectra.Spectrum.from_samples((CENTRE + share) * u.Hz, np.exp(-4 * np.log(2) * (share / WIDTH) ** 2))


def dispersed(gvd=0.0, tod=0.0, light=None, arm="second"):
    stretch = segment(OneOrder(centre=2 * np.pi * CENTRE, gvd=gvd, tod=tod), 1 * u.m)
    empty = segment(media.Vacuum(), 1 * u.m)
    arms = {"first": [empty], "second": [empty], arm: [stretch]}
    return media.DispersedPacket(pair=media.ArmPair(**arms), light=light or gaussian_light())


RMS = 2 * np.pi * WIDTH / np.sqrt(8 * np.log(2))
"""Standard deviation of the band [rad/s]."""


def test_one_order_is_what_it_says():
    medium = OneOrder(centre=2 * np.pi * CENTRE, gvd=3e-27, tod=2e-41)
    assert medium.group_velocity_dispersion(CENTRE * u.Hz).to_value(u.s**2 / u.m) == pytest.approx(3e-27, rel=1e-9)
    assert medium.third_order_dispersion(CENTRE * u.Hz).to_value(u.s**3 / u.m) == pytest.approx(2e-41, rel=1e-9)


@pytest.mark.parametrize("sign", [1, -1])
@pytest.mark.parametrize("x", [0.3, 1.0, 3.0])
def test_second_order_alone_broadens_a_gaussian(x, sign):
    """With x = gvd times rms^2: contrast (1 + x^2)^(-1/4), width times sqrt(1 + x^2), and the chirp's sign in the phase."""
    packet = dispersed(gvd=sign * x / RMS**2)
    assert number(packet.peak_contrast) == pytest.approx((1 + x**2) ** -0.25, rel=2e-5)
    assert number(packet.broadening) == pytest.approx(np.sqrt(1 + x**2), rel=2e-4)
    assert number(packet.position, u.nm) == pytest.approx(0.0, abs=1.0)
    assert number(packet.asymmetry) == pytest.approx(0.0, abs=1e-4)
    assert number(packet.centre, u.nm) == pytest.approx(0.0, abs=0.01)
    # int exp(-w^2 / 2 rms^2 - i gvd w^2 / 2) exp(-i w tau) dw, normalised
    tau = np.linspace(-4, 6, 41) / RMS
    factor = 1 + 1j * sign * x
    exact = np.exp(-((RMS * tau) ** 2) / (2 * factor)) / np.sqrt(factor) * np.exp(-2j * np.pi * CENTRE * tau)
    assert packet.degree_si(tau * SPEED_OF_LIGHT) == pytest.approx(exact, abs=1e-5)


def test_third_order_skews_the_packet():
    """A tail where the slow light is: with tod > 0 in the second arm both wings are late, so the tail lies at negative x."""
    packet = dispersed(tod=3 / RMS**3)
    other = dispersed(tod=-3 / RMS**3)
    first = dispersed(tod=3 / RMS**3, arm="first")
    assert abs(number(packet.asymmetry)) > 0.05
    for mirrored in (other, first):
        assert number(mirrored.asymmetry) == pytest.approx(-number(packet.asymmetry), abs=1e-5)
        assert mirrored.peak_si == pytest.approx(-packet.peak_si, abs=1e-10)
    x = np.linspace(-40, 40, 8001) / RMS * SPEED_OF_LIGHT
    weight = np.abs(packet.degree_si(x)) ** 2
    mean = np.sum(x * weight) / np.sum(weight)
    assert np.sum((x - mean) ** 3 * weight) < 0
    # mean of w^2 under S^2 is rms^2 / 2: the centre lies at -c tod rms^2 / 4
    assert mean == pytest.approx(-SPEED_OF_LIGHT * 3 / RMS / 4, rel=1e-4)
    assert packet.centre_si == pytest.approx(mean, rel=1e-4)
    # widths of the two halves by the densely sampled packet itself
    fine = np.linspace(-6, 6, 24001) / RMS * SPEED_OF_LIGHT
    height = np.abs(packet.degree_si(fine))
    peak = int(np.argmax(height))
    left = peak - np.flatnonzero(height[peak::-1] < height[peak] / 2)[0]
    right = peak + np.flatnonzero(height[peak:] < height[peak] / 2)[0]
    asymmetry = (fine[right] + fine[left] - 2 * fine[peak]) / (fine[right] - fine[left])
    assert number(packet.asymmetry) == pytest.approx(asymmetry, abs=2e-3)
    assert number(packet.width, u.m) == pytest.approx(fine[right] - fine[left], rel=2e-3)
    assert packet.peak_si == pytest.approx(fine[peak], abs=2 * (fine[1] - fine[0]))


def test_energy_is_kept():
    """The integral of |gamma|^2 does not change with dispersion (Parseval)."""
    light = gaussian_light()
    x = np.linspace(-60, 60, 6001) / RMS * SPEED_OF_LIGHT
    areas = [np.sum(np.abs(dispersed(gvd=g / RMS**2, light=light).degree_si(x)) ** 2) for g in (0.0, 1.0, -4.0)]
    assert areas[1:] == pytest.approx([areas[0]] * 2, rel=1e-9)


def test_arms_that_leave_no_packet():
    packet = dispersed(gvd=4e5 / RMS**2)
    with pytest.raises(UndefinedWidthError, match=r"the arms spread this light over .* there is no packet to speak of; balance the arms"):
        _ = packet.peak_contrast
    named = dict(packet.rows)
    assert "no packet to speak of" in named["peak contrast"]
    assert named["centre"].value.unit == u.um
