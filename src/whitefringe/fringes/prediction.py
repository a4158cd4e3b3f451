"""The numbers of a fringe packet before it is recorded."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from functools import partial

import astropy.units as u

from ..coherence import COHERENCE_DEFINITIONS, DEFAULT_DEFINITION, coherence_length, delay_for_contrast, packet_width
from ..errors import InputError, UndefinedWidthError
from ..results import Measured
from ..spectra import (
    Spectrum,
    effective_wavelength,
    equivalent_width,
    full_width_half_maximum,
    mean_wavelength,
    pivot_wavelength,
    resolving_power,
    rms_width,
)

SAMPLES_PER_FRINGE = 4
"""A scan needs at least this many samples per fringe to be reduced."""


@dataclass(frozen=True, kw_only=True)
class PacketPrediction:
    """Named numbers of a packet, in the order of a table; a number that this light does not have is a reason in words."""

    rows: tuple[tuple[str, Measured | str], ...]

    def __getitem__(self, name: str) -> Measured | str:
        for key, value in self.rows:
            if key == name:
                return value
        raise KeyError(f"{name!r}; the numbers are {', '.join(key for key, _ in self.rows)}")


def predict_packet(light: Spectrum, definition: str = DEFAULT_DEFINITION) -> PacketPrediction:
    """Predict the packet of two equal arms in this light.

    Parameters
    ----------
    light : Spectrum
    definition : str
        Definition of the coherence length that comes first; the others follow.

    Returns
    -------
    PacketPrediction
        Mean wavelength, full width at half maximum in wavelength and frequency, resolving power, equivalent width, packet width at
        half contrast in path difference and in fringe periods, coherence length by every definition, and the longest step of a scan.

    Examples
    --------
    >>> import astropy.units as u
    >>> from whitefringe import fringes, spectra
    >>> light = spectra.detected(spectra.Flat(), spectra.TopHat(centre=1.65 * u.um, width=0.3 * u.um))
    >>> print(fringes.predict_packet(light)["packet width"])
    10.8604 um (full width of the packet at half its greatest contrast, photon-weighted)
    """
    if definition not in [item.name for item in COHERENCE_DEFINITIONS]:
        raise InputError(f"definition must be one of {', '.join(item.name for item in COHERENCE_DEFINITIONS)}; got {definition!r}")
    wavelength = mean_wavelength(light)
    rows: list[tuple[str, Measured | str]] = [("mean wavelength", wavelength)]
    for name, measure in (
        ("bandwidth, wavelength", lambda s: full_width_half_maximum(s, "wavelength")),
        ("bandwidth, frequency", full_width_half_maximum),
        ("resolving power", resolving_power),
        ("equivalent width", equivalent_width),
        ("packet width", packet_width),
        ("packet width in fringes", lambda s: _in_fringes(packet_width(s), wavelength)),
    ):
        rows.append((name, _or_reason(measure, light)))
    names = [item.name for item in COHERENCE_DEFINITIONS]
    for name in sorted(names, key=lambda name: (name != definition, names.index(name))):
        rows.append((f"coherence length ({name})", _or_reason(partial(coherence_length, definition=name), light)))
    step = (wavelength.value / SAMPLES_PER_FRINGE).to(u.nm)
    rows.append(("longest step", Measured(value=step, definition=f"path difference, {SAMPLES_PER_FRINGE} samples per fringe")))
    return PacketPrediction(rows=tuple(rows))


def describe_light(light: Spectrum, definition: str = DEFAULT_DEFINITION) -> tuple[tuple[str, Measured | str], ...]:
    """List everything that is known of a light: wavelengths, widths, coherence lengths, how far 80 % and 50 % of contrast hold.

    Parameters
    ----------
    light : Spectrum
    definition : str
        Definition of the coherence length that comes first; the others follow.

    Returns
    -------
    tuple of (name, Measured or reason)
    """
    more = (
        ("effective wavelength", effective_wavelength),
        ("pivot wavelength", pivot_wavelength),
        ("rms width", rms_width),
        ("contrast 0.8 held to", lambda s: delay_for_contrast(s, 0.8)),
        ("contrast 0.5 held to", lambda s: delay_for_contrast(s, 0.5)),
    )
    return (*predict_packet(light, definition).rows, *((name, _or_reason(measure, light)) for name, measure in more))


def _in_fringes(width: Measured, wavelength: Measured) -> Measured:
    value = (width.value / wavelength.value).to(u.dimensionless_unscaled)
    return Measured(value=value, definition="packet width over fringe period", method="ratio")


def _or_reason(measure: Callable[[Spectrum], Measured], light: Spectrum) -> Measured | str:
    try:
        return measure(light)
    except UndefinedWidthError as reason:
        return str(reason)
