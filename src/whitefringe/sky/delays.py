"""Where the packet is: the geometric path difference of every target, baseline and time, with its uncertainty.

Sign: positive where station 2 of a baseline is nearer the object, so that its delay line must add the path difference.
"""

from __future__ import annotations

import warnings
from collections.abc import Sequence
from typing import Any

import astropy.units as u
import erfa
import numpy as np
from astropy.table import QTable
from astropy.time import Time

from ..errors import InputError
from ._closed_form import HourAngleDelays, hour_angle_delays, hour_angle_delays_si
from ._geometry import directions
from ._path_differences import PathDifferences
from .orientation import STATUSES, EarthOrientation, one_si
from .stations import Array, Baseline, as_baselines
from .targets import Star, as_targets

__all__ = [
    "HourAngleDelays",
    "PathDifferences",
    "hour_angle_delays",
    "hour_angle_delays_si",
    "opd_text",
    "path_differences",
    "track",
]

_COLUMNS = {
    "opd": "geometric path difference B.s; station 2's delay line must add it",
    "opd_uncertainty": "one sigma, all causes",
    "opd_uncertainty_ut1": "one sigma, from UT1",
    "opd_uncertainty_target": "one sigma, from the target's direction",
    "opd_uncertainty_stations": "one sigma, from the stations' positions",
    "opd_uncertainty_pole": "one sigma, from polar motion",
    "opd_rate": "change of opd",
    "opd_acceleration": "change of opd_rate",
    "u": "projected baseline, east on the sky (equator of date)",
    "v": "projected baseline, north on the sky (equator of date)",
    "w": "projected baseline, towards the target",
    "u_icrs": "projected baseline, east in the ICRS, to go with position angles there",
    "v_icrs": "projected baseline, north in the ICRS",
    "opd_rate_uncertainty": "one sigma, all causes",
    "u_uncertainty": "one sigma, all causes",
    "v_uncertainty": "one sigma, all causes",
    "w_uncertainty": "one sigma, all causes",
}
_SKY_COLUMNS = {
    "altitude": "without refraction; negative below the horizon",
    "altitude_uncertainty": "one sigma, all causes; refraction is not in it",
    "azimuth": "from north through east",
    "parallactic_angle": "from the pole to the zenith, positive west of the meridian",
}


def path_differences(
    array: Array,
    targets: Any,
    times: Time,
    orientation: EarthOrientation | None = None,
    baselines: Sequence[Baseline] | None = None,
) -> PathDifferences:
    """Geometric path differences of targets, baselines and times.

    w = B.s with B the baseline (station 2 minus station 1) and s the unit vector towards the target as it is seen from the array's
    location: proper motion, parallax, light deflection, aberration, precession and nutation, Earth rotation and polar motion, by astropy.

    Parameters
    ----------
    array : Array
    targets : Star, FixedDirection, LampTarget, or any number of them
        One SkyCoord stands for a star named ``target``.
    times : Time
        One time or a row of times, in any scale.
    orientation : EarthOrientation, optional
        The packaged table by default. A UT1-UTC set on `times` is not used.
    baselines : Baseline or sequence of Baseline, optional
        All of the array's by default.

    Returns
    -------
    PathDifferences
        Arrays (target, baseline, time).

    Raises
    ------
    InputError
        No targets or baselines, something that is not a target, a baseline or an Earth orientation, or times that are not a row of times
        in the years 1000 to 3000.

    Notes
    -----
    Refraction is left out on purpose: parallel layers of air bend the light of both arms alike, and the path difference is that of the
    direction above the air; air between stations of different height counts as part of the arms. Rates take the Earth's axis along the
    ground's pole and hold the observed place still; polar motion and aberration, which they neglect, make up some 3e-6 of the rate.
    Celestial pole offsets (0.3 mas) are not applied; they are part of the pole's uncertainty. Outside the years 1900 to 2100, where
    astropy's built-in ephemeris of the Earth is extrapolated, the notes of the orientation say so. While it runs, astropy's Earth
    orientation, ephemeris and warning filters are set for the whole process: other threads that use astropy see them.

    References
    ----------
    Thompson, Moran & Swenson, 3rd ed. (2017), sec. 4.1, doi:10.1007/978-3-319-44431-4; IERS Conventions (2010), ch. 5 (from memory).

    Examples
    --------
    >>> from astropy.coordinates import EarthLocation
    >>> from astropy.time import Time
    >>> from whitefringe.sky.stations import Station
    >>> from whitefringe.sky.targets import Star
    >>> place = EarthLocation.from_geodetic(lon=-15 * u.deg, lat=35 * u.deg, height=1000 * u.m)
    >>> kiln = Station(name="Kiln", east=0 * u.m, north=0 * u.m, up=0 * u.m)
    >>> weir = Station(name="Weir", east=80 * u.m, north=60 * u.m, up=0.5 * u.m)
    >>> larkmoor = Array(location=place, stations=[kiln, weir])
    >>> star = Star.at(name="A", ra=60 * u.deg, dec=25 * u.deg)
    >>> result = path_differences(larkmoor, star, Time("2024-01-02"), EarthOrientation.fixed())
    >>> print(result.opd[0, 0, 0].round(4))
    -38.2981 m
    """
    if not isinstance(array, Array):
        raise InputError(f"array must be an Array; got {type(array).__name__}")
    chosen = as_targets(targets)
    pairs = as_baselines(array, baselines)
    used = EarthOrientation.packaged() if orientation is None else orientation
    if not isinstance(used, EarthOrientation):
        raise InputError(f"orientation must be an EarthOrientation, for example EarthOrientation.packaged(); got {type(used).__name__}")
    with used.applied(times) as utc:
        seen = directions(array.location, chosen, utc)
        sigma = np.stack([target.sigma_si(utc) for target in chosen])
        at, values = used.at_si(utc)
        places = tuple(target.positions_si(utc) if isinstance(target, Star) else None for target in chosen)
    return PathDifferences(
        targets=tuple(target.name for target in chosen),
        baselines=pairs,
        times=utc,
        orientation=at,
        directions=seen,
        _target_sigma=sigma,
        _longitude=float(array.location.geodetic.lon.to_value(u.rad)),
        _values=values,
        _places=places,
    )


def track(array: Array, targets: Any, times: Time, orientation: EarthOrientation | None = None) -> QTable:
    """Path differences as a table: one row per target, baseline and time, times innermost.

    Parameters
    ----------
    array, targets, times, orientation
        As for `path_differences`.

    Returns
    -------
    QTable
        Columns target, baseline, time (UTC), opd, its uncertainty and parts, opd_rate, opd_acceleration, u, v, w, u_icrs, v_icrs, altitude,
        azimuth, parallactic_angle, the uncertainties of opd_rate, u, v, w and altitude, ut1_utc and its uncertainty, and orientation
        (status of the Earth orientation), each with unit and description. The ``meta`` keys are short,
        so that FITS takes them: ORIENT (the table), LASTMEAS, AGEDAYS (days from there to the last time), N_MEAS, N_PRED, N_BEYOND,
        N_BEFORE, N_GIVEN (times by status), NOTE1, ... Stars below the horizon keep their rows, with a negative altitude and
        `above_horizon` false.

    Raises
    ------
    InputError
        As for `path_differences`.

    Notes
    -----
    Can be written to ECSV and FITS by astropy and read back (FITS with ``astropy_native=True`` for the times). While it runs, astropy's
    Earth orientation is set for the whole process, as for `path_differences`.

    Examples
    --------
    See `path_differences`; ``track(larkmoor, star, times)`` takes the same arguments.
    """
    result = path_differences(array, targets, times, orientation)
    shape = result.opd.shape
    n_targets, n_baselines, n_times = shape
    table = QTable()
    table["target"] = np.repeat(result.targets, n_baselines * n_times)
    table["baseline"] = np.tile(np.repeat([baseline.name for baseline in result.baselines], n_times), n_targets)
    k = np.tile(np.arange(n_times), n_targets * n_baselines)
    table["time"] = _readable(Time(result.times.jd1[k], result.times.jd2[k], format="jd", scale="utc", location=array.location))
    table["time"].info.description = "UTC"
    for name, words in _COLUMNS.items():
        table[name] = getattr(result, name).reshape(-1)
        table[name].info.description = words
    for name, words in _SKY_COLUMNS.items():
        table[name] = np.broadcast_to(getattr(result, name)[:, None, :], shape, subok=True).reshape(-1)
        table[name].info.description = words
    # a lamp has no altitude, and is never below the horizon
    table["above_horizon"] = ~(table["altitude"] < 0 * u.deg)
    table["above_horizon"].info.description = "false where the target has set or not yet risen"
    for name, words in (("ut1_utc", "UT1 less UTC that was used"), ("ut1_utc_uncertainty", "one sigma of it")):
        table[name] = getattr(result.orientation, name)[k]
        table[name].info.description = words
    table["orientation"] = result.orientation.status[k]
    table["orientation"].info.description = "where the Earth orientation is from"
    table.meta.update(_meta(array, result))
    return table


def _readable(times: Time) -> Time:
    """Show calendar dates to the microsecond (text files keep what is shown), or MJD where ERFA warns of dates too far in the future."""
    times.precision = 6
    times.format = "isot"
    with warnings.catch_warnings():
        warnings.simplefilter("error", erfa.ErfaWarning)
        try:
            _ = times[[int(np.argmin(times.jd1 + times.jd2)), int(np.argmax(times.jd1 + times.jd2))]].isot
        except erfa.ErfaWarning:
            times.format = "mjd"
    return times


def _meta(array: Array, result: PathDifferences) -> dict[str, Any]:
    used = result.orientation
    keys = dict(zip(STATUSES, ("N_MEAS", "N_PRED", "N_BEYOND", "N_BEFORE", "N_GIVEN"), strict=True))
    counts = {key: int(np.sum(used.status == status)) for status, key in keys.items()}
    notes = {f"NOTE{k}": note for k, note in enumerate(used.notes, 1)}
    return {
        "ARRAY": array.name,
        "ORIENT": used.source,
        "LASTMEAS": used.last_measured,
        "AGEDAYS": float(used.age.max().to_value(u.d)),
        **counts,
        **notes,
    }


def opd_text(row: Any) -> str:
    """Say a row of `track` in words: the path difference, its uncertainty, and in micrometres which cause gives how much.

    Parameters
    ----------
    row : Row of the table, or any mapping with its ``opd`` columns

    Returns
    -------
    str
        The pole is listed where it is at least a tenth of the whole.

    Raises
    ------
    InputError, UnitsError
        Not a row of a track: a column is missing, or is not one length.

    Examples
    --------
    >>> parts = {"ut1": 14.2, "target": 9.1, "stations": 6.4, "pole": 0.4}
    >>> row = {f"opd_uncertainty_{name}": value * u.um for name, value in parts.items()}
    >>> print(opd_text(row | {"opd": 12.345678 * u.m, "opd_uncertainty": 18.04 * u.um}))
    12.345678 m ± 18 um (UT1 14, target 9, stations 6)
    """
    columns = ("opd", *(f"opd_uncertainty{name}" for name in ("", "_ut1", "_target", "_stations", "_pole")))
    try:
        given = {name: row[name] for name in columns}
    except (KeyError, TypeError, IndexError, ValueError):
        raise InputError(f"row must be a row of a table from track, with the columns {', '.join(columns)}; got {row!r}") from None
    opd, total, *parts = (one_si(value, u.m if name == "opd" else u.um, name) for name, value in given.items())
    named = dict(zip(("UT1", "target", "stations", "pole"), parts, strict=True))
    if named["pole"] < 0.1 * total or total == 0:
        del named["pole"]
    causes = ", ".join(f"{name} {value:.0f}" for name, value in named.items())
    return f"{opd:.6f} m ± {total:.0f} um ({causes})"
