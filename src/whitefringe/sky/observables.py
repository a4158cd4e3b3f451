"""What a detector sees of an object: its visibility over a band, its closure phase; and how wide an object it sees."""

from __future__ import annotations

from collections.abc import Iterator
from typing import Any

import numpy as np
from astropy import units
from scipy.fft import dct

from ..coherence import DEFAULT_DEFINITION, coherence_length
from ..errors import InputError
from ..results import Measured
from ..spectra import Spectrum
from ..units import SPEED_OF_LIGHT, FloatArray, as_si, positive_si
from ._object import ComplexArray, SkyObject, check_object, spatial_frequencies_si, together

_FEWEST, _MOST = 32, 4096
"""Frequencies at which the object is asked: doubled until nothing changes."""

_SETTLED = 1e-11
"""Change of the visibility at which the doubling ends."""

_BLOCK = 2**19
"""Visibilities, or cosines, at once: bounds the memory."""

_FROM_ZERO = ("e-fold", "first-null")
"""Definitions of a coherence length that count from zero path difference, not from side to side."""


def band_visibility(obj: SkyObject, u: Any, v: Any, light: Spectrum) -> ComplexArray:
    """Complex visibility of an object in a band of light, at zero path difference (bandwidth smearing of a wide object).

    V = int S(nu) V(u nu / c, v nu / c) dnu / int S dnu

    Parameters
    ----------
    obj : SkyObject
        A member of `OBJECT_SHAPES`; it looks the same at all wavelengths.
    u, v : Quantity [m], shapes that broadcast
        Baseline projected towards east and towards north, station 2 minus station 1.
    light : Spectrum
        As detected; counts as it is weighted, by photons unless it says otherwise.

    Returns
    -------
    ndarray of complex, the common shape of `u` and `v`

    Raises
    ------
    UnitsError
        A bare number, or a wrong unit.
    InputError
        Not an object; shapes that do not broadcast; an object so wide that its phase turns some thousand times over the band.

    Notes
    -----
    The paths are equal for the object's phase centre. The visibility is a polynomial through Chebyshev nodes of the band, whose product
    with the spectrum is integrated exactly; the number of nodes is doubled until V changes by less than 1e-11. A line counts with its
    strength at its centre, as if it were monochromatic: the error is at most pi times the line's full width times the greatest delay
    between the object's parts and the phase centre, and far less for a Gaussian line.

    References
    ----------
    Goodman, Statistical Optics, 2nd ed., sec. 5.1 and 5.4 (section numbers from memory).

    Examples
    --------
    >>> import astropy.units as u
    >>> from whitefringe import spectra
    >>> from whitefringe.sky.visibility import UniformDisc
    >>> light = spectra.detected(spectra.Flat(), spectra.TopHat(centre=1.65 * u.um, width=0.3 * u.um))
    >>> disc = UniformDisc(diameter=2.5 * u.mas)
    >>> print(band_visibility(disc, [0, 100] * u.m, 0 * u.m, light).real.round(4))
    [1.     0.4598]
    """
    check_object(obj, "obj")
    _check_light(light)
    east, north = np.asarray(as_si(u, units.m, "u")), np.asarray(as_si(v, units.m, "v"))
    together(("u", "v"), east, north)
    return band_visibility_si(obj, east, north, light)


def band_visibility_si(obj: SkyObject, u: Any, v: Any, light: Spectrum) -> ComplexArray:
    """Twin of `band_visibility`: baselines in metres."""
    east, north = np.broadcast_arrays(np.asarray(u, dtype=float), np.asarray(v, dtype=float))
    flat = np.stack([east.ravel(), north.ravel()])[:, :, None] / SPEED_OF_LIGHT
    total: ComplexArray = np.zeros(east.size, dtype=complex)
    for line in light.lines:
        total += line.strength * obj.visibility_si(*(flat[..., 0] * line.frequency_si))
    if light.density.size and east.size:
        total += _continuum(obj, flat, light)
    return np.asarray(total / light.total_rate).reshape(east.shape)


def _continuum(obj: SkyObject, per_hertz: FloatArray, light: Spectrum) -> ComplexArray:
    """Integral over the continuum at spatial frequencies per hertz, shape (2, baselines, 1), nodes doubled until it settles."""
    before: ComplexArray | None = None
    count = _FEWEST
    while count <= _MOST:
        frequency, weight = _rule(light, count)
        size = max(1, _BLOCK // count)
        blocks = [per_hertz[:, begin : begin + size] for begin in range(0, per_hertz.shape[1], size)]
        now = np.concatenate([obj.visibility_si(*(block * frequency)) @ weight for block in blocks])
        if before is not None and np.max(np.abs(now - before)) < _SETTLED * light.continuum_rate:
            return now
        before, count = now, 2 * count
    raise InputError(
        f"obj is too wide for this band and baseline: its phase turns so often over the band that {_MOST} frequencies do not follow it; "
        "narrow the band, or bring its parts closer to the phase centre"
    )


def _rule(light: Spectrum, count: int) -> tuple[FloatArray, FloatArray]:
    """Frequencies [Hz] and weights that integrate the continuum times any polynomial of degree below `count` exactly.

    On x from -1 to 1 over the band, with Chebyshev nodes x_j and moments M_m = int S T_m, the weight of a node is
    [M_0 + 2 sum_m M_m T_m(x_j)] / count.
    """
    half = 0.5 * light.step_si * light.density.size
    nodes = np.cos(np.pi * (np.arange(count) + 0.5) / count)
    weights = dct(_moments(light, count), type=3) / count
    return light.start_si + half * (1.0 + nodes), half * weights


def _moments(light: Spectrum, count: int) -> FloatArray:
    """Integrals of the continuum times T_m(x), m < count, over x: exact for the linear pieces p + r x of its cells.

    Summed by parts over the cells' edges, with int T_m = F_m = [T_(m+1)/(m+1) - T_(m-1)/(m-1)] / 2 and int x T_m = [F_(m+1) + F_(m-1)] / 2.
    """
    cells = light.density.size
    edges = np.linspace(-1.0, 1.0, cells + 1)
    rise = 0.5 * cells * light.slopes
    level = light.density - rise * 0.5 * (edges[1:] + edges[:-1])
    jumps = np.stack([-np.diff(np.pad(level, 1)), -np.diff(np.pad(rise, 1))])
    sums = np.concatenate(list(_cosine_sums(jumps, np.arccos(edges), count + 2)), axis=1)
    order = np.arange(2, count + 1)
    primitive = np.empty((2, count + 1))
    primitive[:, 0], primitive[:, 1] = sums[:, 1], sums[:, 2] / 4
    primitive[:, 2:] = 0.5 * (sums[:, 3:] / (order + 1) - sums[:, 1:-2] / (order - 1))
    plain, tilted = primitive
    moments = plain[:-1] + 0.5 * (tilted[1:] + np.concatenate([tilted[1:2], tilted[:-2]]))
    return np.asarray(moments)


def _cosine_sums(values: FloatArray, angles: FloatArray, count: int) -> Iterator[FloatArray]:
    """Sums over the edges of values times cos(m angle), for m < count, in blocks of m."""
    size = max(1, _BLOCK // angles.size)
    for begin in range(0, count, size):
        yield values @ np.cos(np.outer(angles, np.arange(begin, min(begin + size, count))))


def closure_phase(obj: SkyObject, u1: Any, v1: Any, u2: Any, v2: Any, wavelength: Any) -> units.Quantity:
    """Closure phase of an object on a triangle of stations: arg[V(u1, v1) V(u2, v2) V(-u1-u2, -v1-v2)].

    Parameters
    ----------
    obj : SkyObject
        A member of `OBJECT_SHAPES`.
    u1, v1, u2, v2 : Quantity [m], shapes that broadcast
        Projected baselines from the first station to the second, and from the second to the third; the third closes the triangle.
    wavelength : Quantity [vacuum wavelength or frequency], shape that broadcasts with them

    Returns
    -------
    Quantity [deg], the common shape
        Above -180, at most 180.

    Raises
    ------
    UnitsError
        A bare number, or a wrong unit.
    InputError
        Not an object; shapes that do not broadcast.

    Notes
    -----
    No place of the phase centre and no path error of a station enters. An object that is its own mirror image through a point has 0 or
    180 degrees. Where a baseline sits on a null it is not defined, and rounding decides what is returned.

    References
    ----------
    Duvert, Young & Hummel 2017, doi:10.1051/0004-6361/201526405, table OI_T3 (sign and order of the baselines).

    Examples
    --------
    >>> import astropy.units as u
    >>> from whitefringe.sky.composite import Binary
    >>> pair = Binary(flux_ratio=0.5, separation=3 * u.mas, position_angle=30 * u.deg)
    >>> print(closure_phase(pair, 80 * u.m, 0 * u.m, -30 * u.m, 70 * u.m, 1.65 * u.um).round(4))
    -81.9489 deg
    """
    check_object(obj, "obj")
    first = spatial_frequencies_si(u1, v1, wavelength, ("u1", "v1"))
    second = spatial_frequencies_si(u2, v2, wavelength, ("u2", "v2"))
    together(("u1 and v1", "u2 and v2"), first[0] + first[1], second[0] + second[1])
    return np.rad2deg(closure_phase_si(obj, *first, *second)) * units.deg


def closure_phase_si(obj: SkyObject, u1: Any, v1: Any, u2: Any, v2: Any) -> FloatArray:
    """Twin of `closure_phase`: spatial frequencies in cycles per radian in, radians out."""
    third = obj.visibility_si(-np.add(u1, u2), -np.add(v1, v2))
    phase = np.angle(obj.visibility_si(u1, v1) * obj.visibility_si(u2, v2) * third)
    # a negative product with an imaginary part of minus zero is at +180 degrees like one with plus zero
    return np.asarray(np.where(phase <= -np.pi, np.pi, phase))


def field_of_view(light: Spectrum, baseline: Any, definition: str = DEFAULT_DEFINITION) -> Measured:
    """Field that one fringe packet covers along a baseline: coherence length over projected baseline.

    angle = L / B; light from theta off the phase centre, along the baseline, arrives with a path difference of B theta.

    Parameters
    ----------
    light : Spectrum
    baseline : Quantity [m]
        Length of the projected baseline, above zero.
    definition : str
        Name of one of `coherence.COHERENCE_DEFINITIONS`.

    Returns
    -------
    Measured [mas]
        With the definition in words.

    Raises
    ------
    UnitsError, InputError
        Not a Spectrum; no length, or not above zero; unknown definition.
    UndefinedWidthError
        The definition has no meaning for this light.

    Notes
    -----
    By the definitions that are full widths (``bandwidth``, ``power``, ``half``) it is the full angle whose path differences lie within
    half a coherence length on either side of the centre's. ``e-fold`` and ``first-null`` are counted from zero path difference, and so
    is their angle from the centre of the field: the whole field is twice that.

    References
    ----------
    Derived: the path difference of an oblique wave; coherence lengths as in `coherence.coherence_length`.

    Examples
    --------
    >>> import astropy.units as u
    >>> from whitefringe import spectra
    >>> light = spectra.detected(spectra.Flat(), spectra.TopHat(centre=1.65 * u.um, width=0.3 * u.um))
    >>> print(field_of_view(light, 100 * u.m).text)
    18.5638 mas
    """
    _check_light(light)
    length = coherence_length(light, definition)
    metres = positive_si(baseline, units.m, "baseline")
    angle = (length.to_value(units.m) / metres * units.rad).to(units.mas)
    counted = "angle from the centre" if definition in _FROM_ZERO else "full angle"
    words = f"{counted} along the baseline: coherence length over baseline; {length.definition}"
    return Measured(value=angle, definition=words, method=length.method, citation=length.citation)


def _check_light(light: Any) -> None:
    if not isinstance(light, Spectrum):
        raise InputError(f"light must be a Spectrum, as spectra.detected gives it; got {light!r}")


__all__ = ["band_visibility", "closure_phase", "field_of_view"]
