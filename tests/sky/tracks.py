"""Hand-made tracks of an invented star over Larkmoor: simple motions with known crossings."""

from __future__ import annotations

import astropy.units as u
import numpy as np
from astropy.table import QTable
from astropy.time import Time

from whitefringe.sky.delay_lines import DelayLine

START = Time("2026-03-14T20:00:00", scale="utc")
TURN = 2 * np.pi / 86164.0
"""Rotation of the sky [rad/s]."""


def track(opd=0.0, rate=0.0, altitude=60.0, *, hours=None, target="Star A", baseline="Kiln-Weir", sigma=20e-6):
    """Rows of one target and baseline, in SI units; what is one number is the same in every row."""
    size = max(np.size(item) for item in (opd, rate, altitude, sigma, 0.0 if hours is None else hours))
    hours = np.arange(size) / 12 if hours is None else np.asarray(hours)
    filled = [np.broadcast_to(np.asarray(item, dtype=float), size).copy() for item in (opd, sigma, rate, altitude)]
    return QTable(
        {
            "target": [target] * size,
            "baseline": [baseline] * size,
            "time": START + hours * u.hour,
            "opd": filled[0] * u.m,
            "opd_uncertainty": filled[1] * u.m,
            "opd_rate": filled[2] * u.m / u.s,
            "altitude": filled[3] * u.deg,
        }
    )


def turning(length=60.0, *, steps=97, hours=8.0, phase=-1.0, mean=10.0, lift=40.0, low=10.0, **names):
    """A star that rises and sets: w = mean + length sin(phase + Omega t), altitude = low + lift cos(phase + Omega t)."""
    at = np.linspace(0.0, hours, steps)
    angle = phase + TURN * at * 3600
    return track(mean + length * np.sin(angle), length * TURN * np.cos(angle), low + lift * np.cos(angle), hours=at, **names)


def lines(stations=("Kiln", "Weir"), **changes):
    """Equal delay lines, 20 m of stroke and 20 mm/s."""
    return [DelayLine(station=name, **{"stroke": 20 * u.m, "greatest_speed": 20 * u.mm / u.s} | changes) for name in stations]


class Glass:
    """A medium whose group index falls with the wavelength."""

    def group_index(self, wavelength):
        return (1.5 - 0.02 * wavelength.to_value(u.um)) * u.dimensionless_unscaled
