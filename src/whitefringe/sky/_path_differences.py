"""`PathDifferences`: what `path_differences` returns; every number is computed when it is first asked for.

All are linear or quadratic in the baseline, so that one matrix product over all targets, baselines and times gives each.
"""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property

import numpy as np
from astropy import units
from astropy.time import Time

from ..units import FloatArray
from ._geometry import EARTH_ROTATION, Directions, equatorial_from_enu
from ._north import earth_si, north_angle_si
from ._orientation_table import Values
from ._secondary import Secondary, secondary_si
from .orientation import Orientation
from .stations import Baseline


@dataclass(frozen=True, kw_only=True, eq=False)
class PathDifferences:
    """Geometric path differences of targets, baselines and times, with their uncertainties by cause.

    Arrays are (target, baseline, time), those of the sky alone (target, time). `opd` = w = B.s is positive where station 2 is nearer the
    object and its delay line must add `opd`. Uncertainties are one sigma. `u` and `v` count from the pole of date, as hour angle,
    declination and parallactic angle do; `u_icrs` and `v_icrs` from ICRS north, as the position angles of catalogues do.

    Parameters
    ----------
    targets : tuple of str
    baselines : tuple of Baseline
    times : Time
        UTC.
    orientation : Orientation
        Which Earth orientation was used: status of each time, source, notes.
    directions : Directions
    """

    targets: tuple[str, ...]
    baselines: tuple[Baseline, ...]
    times: Time
    orientation: Orientation
    directions: Directions
    _target_sigma: FloatArray
    _longitude: float
    _values: Values
    _places: tuple[FloatArray | None, ...]

    @cached_property
    def _vectors(self) -> FloatArray:
        enu = np.stack([baseline.enu_si for baseline in self.baselines])
        return np.asarray(enu @ equatorial_from_enu(self.directions.latitude).T)

    @cached_property
    def opd(self) -> units.Quantity:
        """Geometric path difference w = B.s [m]."""
        return _sealed(np.matmul(self._vectors, self.directions.unit), units.m)

    @property
    def w(self) -> units.Quantity:
        """The same as `opd` [m]."""
        return self.opd

    @cached_property
    def u(self) -> units.Quantity:
        """Projected baseline towards the east on the sky [m]."""
        return _sealed(np.matmul(self._vectors, self.directions.east_on_sky), units.m)

    @cached_property
    def v(self) -> units.Quantity:
        """Projected baseline towards the north on the sky [m]."""
        return _sealed(np.matmul(self._vectors, self.directions.north_on_sky), units.m)

    @cached_property
    def north_angle(self) -> units.Quantity:
        """Position angle, in the ICRS, of the north that `u` and `v` count from [deg] (target, time); zero for what is no star."""
        earth = earth_si(self.times)
        angles = [np.zeros(self.times.size) if place is None else north_angle_si(place, earth) for place in self._places]
        return _degrees(np.array(angles))

    @cached_property
    def u_icrs(self) -> units.Quantity:
        """Projected baseline towards ICRS east [m]: what goes with position angles in the ICRS, as of `Binary` or a `Picture`."""
        angle = self.north_angle.to_value(units.rad)[:, None, :]
        return _sealed(self.u.value * np.cos(angle) + self.v.value * np.sin(angle), units.m)

    @cached_property
    def v_icrs(self) -> units.Quantity:
        """Projected baseline towards ICRS north [m]."""
        angle = self.north_angle.to_value(units.rad)[:, None, :]
        return _sealed(self.v.value * np.cos(angle) - self.u.value * np.sin(angle), units.m)

    @cached_property
    def opd_rate(self) -> units.Quantity:
        """Change of `opd`: dw/dt = -omega u cos d [m/s]."""
        factor = -EARTH_ROTATION * self.directions.turning * self.directions.cos_declination
        return _sealed(factor[:, None, :] * self.u.value, units.m / units.s)

    @cached_property
    def opd_acceleration(self) -> units.Quantity:
        """Change of `opd_rate`: -omega^2 (X sX + Y sY) [m/s^2]."""
        level = -(EARTH_ROTATION**2) * self._vectors * np.array([1.0, 1.0, 0.0])
        return _sealed(np.matmul(level, self.directions.unit * self.directions.turning[:, :, None]), units.m / units.s**2)

    @property
    def opd_uncertainty(self) -> units.Quantity:
        """All parts in quadrature [m]; they are independent of each other."""
        return self._uncertainties[4] << units.m

    @property
    def opd_uncertainty_ut1(self) -> units.Quantity:
        """From UT1: the rate times the error of UT1 [m]."""
        return self._uncertainties[0] << units.m

    @property
    def opd_uncertainty_target(self) -> units.Quantity:
        """From the target's direction: (u sigma_east, v sigma_north) in quadrature [m]."""
        return self._uncertainties[1] << units.m

    @property
    def opd_uncertainty_stations(self) -> units.Quantity:
        """From the two stations' positions: sqrt(s.(C1 + C2).s) with their covariances C [m]."""
        return self._uncertainties[2] << units.m

    @property
    def opd_uncertainty_pole(self) -> units.Quantity:
        """From polar motion: components of s x B along the Earth's x and y axes, times the errors of the pole [m]."""
        return self._uncertainties[3] << units.m

    @cached_property
    def _secondary(self) -> Secondary:
        turn = equatorial_from_enu(self.directions.latitude)
        covariances = np.stack([turn @ baseline.covariance_si @ turn.T for baseline in self.baselines])
        pole = np.maximum(*self._values.pole_sigma)
        uvw = (self.u.value, self.v.value, self.w.value)
        return secondary_si(self.directions, uvw, covariances, self._target_sigma, self._values.ut1_sigma, pole)

    @property
    def w_uncertainty(self) -> units.Quantity:
        """The same as `opd_uncertainty` [m]."""
        return self.opd_uncertainty

    @property
    def u_uncertainty(self) -> units.Quantity:
        """Of `u`, all causes [m]."""
        return _sealed(self._secondary.u, units.m)

    @property
    def v_uncertainty(self) -> units.Quantity:
        """Of `v`, all causes [m]."""
        return _sealed(self._secondary.v, units.m)

    @property
    def opd_rate_uncertainty(self) -> units.Quantity:
        """Of `opd_rate`, all causes [m/s]."""
        return _sealed(self._secondary.rate, units.m / units.s)

    @property
    def altitude_uncertainty(self) -> units.Quantity:
        """Of `altitude`, all causes [deg] (target, time)."""
        return _degrees(self._secondary.altitude)

    @cached_property
    def _uncertainties(self) -> FloatArray:
        """Return sigmas (5, target, baseline, time) from UT1, target, stations and pole, and of all together [m]."""
        result = np.empty((5, *self.opd.shape))
        between, products = self._station_form
        about_x, about_y = self._pole_form
        east, north, rate = self.u.value, self.v.value, self.opd_rate.value
        turned = self.directions.unit * self.directions.turning[:, :, None]
        sigma_x, sigma_y = self._values.pole_sigma
        # one target at a time: its arrays stay in the processor's cache
        for k in range(len(self.targets)):
            ut1, target, stations, pole, total = result[:, k]
            np.abs(np.multiply(rate[k], self._values.ut1_sigma, out=ut1), out=ut1)
            np.multiply(east[k], self._target_sigma[k, 0], out=target)
            _add_square(np.square(target, out=target), np.multiply(north[k], self._target_sigma[k, 1], out=total))
            # rounding may leave a tiny negative number where a sigma is zero along the line of sight
            np.abs(np.matmul(between, products[k], out=stations), out=stations)
            np.matmul(about_x, turned[k] * sigma_y, out=pole)
            _add_square(np.square(pole, out=pole), np.matmul(about_y, turned[k] * sigma_x, out=total))
            np.square(ut1, out=total)
            for variance in (target, stations, pole):
                total += variance
                np.sqrt(variance, out=variance)
            np.sqrt(total, out=total)
        result.setflags(write=False)
        return result

    @property
    def _station_form(self) -> tuple[FloatArray, FloatArray]:
        """Coefficients (baseline, 6) and products of s (target, 6, time) whose product is the variance from the stations."""
        turn = equatorial_from_enu(self.directions.latitude)
        covariance = np.stack([turn @ baseline.covariance_si @ turn.T for baseline in self.baselines])
        pairs = ((0, 0, 1), (1, 1, 1), (2, 2, 1), (0, 1, 2), (0, 2, 2), (1, 2, 2))
        s = self.directions.unit
        products = np.stack([s[:, i] * s[:, j] for i, j, _ in pairs], axis=1)
        return np.stack([times * covariance[:, i, j] for i, j, times in pairs], axis=1), products

    @property
    def _pole_form(self) -> tuple[FloatArray, FloatArray]:
        """Rows (baseline, 3) that take s to the components of s x B along the Earth's x axis (longitude 0) and y axis (90 deg east)."""
        X, Y, Z = self._vectors.T
        none = np.zeros_like(X)
        along_x, along_y = np.stack([none, Z, -Y], axis=1), np.stack([-Z, none, X], axis=1)
        sine, cosine = np.sin(self._longitude), np.cos(self._longitude)
        return cosine * along_x - sine * along_y, sine * along_x + cosine * along_y

    @property
    def altitude(self) -> units.Quantity:
        """Altitude without refraction [deg], negative below the horizon (target, time)."""
        return _degrees(self.directions.altitude)

    @property
    def azimuth(self) -> units.Quantity:
        """Azimuth from north through east [deg] (target, time)."""
        return _degrees(self.directions.azimuth)

    @property
    def parallactic_angle(self) -> units.Quantity:
        """Angle at the target from the pole to the zenith [deg], positive west of the meridian (target, time)."""
        return _degrees(self.directions.parallactic_angle)

    @property
    def hour_angle(self) -> units.Quantity:
        """Observed hour angle [deg], positive in the west (target, time)."""
        return _degrees(self.directions.hour_angle)

    @property
    def declination(self) -> units.Quantity:
        """Observed declination [deg] (target, time)."""
        return _degrees(self.directions.declination)


def _sealed(values: FloatArray, unit: units.UnitBase) -> units.Quantity:
    """Return `values` with their unit, not to be written to."""
    values.setflags(write=False)
    return values << unit


def _degrees(radians: FloatArray) -> units.Quantity:
    return _sealed(np.degrees(radians), units.deg)


def _add_square(total: FloatArray, values: FloatArray) -> None:
    """Add the squares of `values` to `total`; `values` is spent."""
    np.square(values, out=values)
    total += values
