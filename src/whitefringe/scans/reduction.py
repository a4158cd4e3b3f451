"""`reduce_scan`: from one recorded scan to numbers with uncertainties, and to a verdict."""

from __future__ import annotations

from dataclasses import dataclass, field, replace
from typing import Any

import astropy.units as u
import numpy as np

from ..coherence import coherence_length
from ..coherence import packet_width as predicted_packet_width
from ..errors import InputError, NoFringeError, PacketCutOffError, ScanError, TooFewSamplesError, UndefinedWidthError
from ..results import Measured
from ..spectra import Spectrum, mean_wavelength
from ..units import STEP, FloatArray, read_only
from ._band import Band, detrended, find_band
from ._coherence import DEFINITIONS_MEASURED, coherence_measured
from ._limits import missed_contrast
from ._packet import OVERSAMPLING, Estimate, Packet, centre_of, crossings_of, packet_in, peak_of
from .conditioning import EvenScan, even_scan
from .scan import Scan
from .verdict import Comparison, Outcome, Tolerances, overall

FEWEST_PER_FRINGE = 4.0
"""Samples per fringe below which a scan is refused."""

LEAST_SIGNAL_TO_NOISE = 5.0
"""Contrast over its uncertainty below which a packet does not count as found."""

MOST_CONTRAST = 1.02
"""A contrast that lies above this by five of its uncertainties is refused."""

NO_SCALE = "the scan has no path scale: give opd_per_step, or stage_per_step and passes, or positions with a unit"

METHOD = "analytic signal in the fringes' band; white-noise errors, first order"


@dataclass(frozen=True, kw_only=True, eq=False)
class ScanCurves:
    """What a plot of the reduction needs: the even axis, the normalised signal, |z|, the band-passed fringes; `unit` of the axis."""

    axis: FloatArray
    unit: u.UnitBase
    signal: FloatArray
    envelope: FloatArray
    fringes: FloatArray


@dataclass(frozen=True, kw_only=True, eq=False)
class ScanResult:
    """Numbers from one scan; each is a `Measured` with value, one-sigma uncertainty, definition and method.

    Attributes
    ----------
    contrast : greatest contrast of the packet
    opd_centre : packet centre [path difference, or step]
    packet_width : full width at half the greatest contrast [path difference, or step]
    packet_width_fringes : the same in fringe periods
    fringe_period, fringe_frequency : at the packet centre
    wavelength : the fringe period, where the path is known; else None
    coherence_length : by the definition asked for; a reason in words where the packet does not show it
    definition : name of the definition of the coherence length
    signal_to_noise : contrast over its uncertainty
    samples_per_fringe : of the scan
    notes : what was done to the scan
    comparisons, verdict : against the prediction, where one was given
    """

    contrast: Measured
    opd_centre: Measured
    packet_width: Measured
    packet_width_fringes: Measured
    fringe_period: Measured
    fringe_frequency: Measured
    wavelength: Measured | None
    coherence_length: Measured | str
    definition: str
    signal_to_noise: float
    samples_per_fringe: float
    notes: tuple[str, ...]
    curves: ScanCurves = field(repr=False)
    comparisons: tuple[Comparison, ...] = ()
    verdict: Outcome | None = None

    @property
    def rows(self) -> tuple[tuple[str, Measured | str], ...]:
        """Name and number, in the order of a table."""
        names = ("contrast", "opd_centre", "packet_width", "packet_width_fringes", "fringe_period", "fringe_frequency")
        rows: list[tuple[str, Measured | str]] = [(name.replace("_", " ").replace("opd", "OPD"), getattr(self, name)) for name in names]
        if self.wavelength is not None:
            rows.append(("wavelength", self.wavelength))
        return (*rows, ("coherence length", self.coherence_length))


def reduce_scan(
    scan: Scan,
    expected: Spectrum | None = None,
    *,
    definition: str = "bandwidth",
    tolerances: Tolerances | None = None,
    expected_contrast: float = 1.0,
) -> ScanResult:
    """Reduce one recorded delay scan.

    The drift of the mean is divided out, the fringes' band is found in the Fourier spectrum, and the packet is the analytic signal
    in that band. With a reference channel the path axis is rebuilt from the reference's phase first.

    Parameters
    ----------
    scan : Scan
    expected : Spectrum, optional
        The predicted light: adds measured over predicted, and a verdict.
    definition : str
        Definition of the coherence length: ``bandwidth``, ``power``, ``half``, ``e-fold`` or ``first-null``.
    tolerances : Tolerances, optional
        On measured over predicted.
    expected_contrast : float
        Contrast that the bench shows at zero path difference, which multiplies the prediction (1 for an ideal one).

    Returns
    -------
    ScanResult

    Raises
    ------
    TooFewSamplesError
        Fewer than four samples per fringe.
    SaturatedError, ConstantSignalError, PacketCutOffError, NoFringeError, ReferenceLostError, ScanError
        See each; `NoFringeError.upper_limit` is the contrast that may have been missed.
    InputError
        An unknown definition, or arguments that are no scan and no spectrum.

    Notes
    -----
    The uncertainties are those of white noise (photon and read-out) at the scan's own mean level, carried to first order. Errors of
    the path axis are not in them: fringes that move during the scan, or a stage that is wrongly scaled, are for other checks. The
    uncertainty of a coherence length by ``bandwidth`` or ``power`` holds a bound for what the finite scan does to it as well.

    The packet centre is the slope of a straight line through the phase of the fringe spectrum, each frequency weighted by its power.
    In arms of equal dispersion that is where the path difference is zero. In arms that differ, the fringe period at the centre is no
    longer the mean wavelength, and the greatest contrast is lower than that of the light.

    References
    ----------
    Takeda, Ina & Kobayashi 1982, doi:10.1364/JOSA.72.000156 (analytic signal); Kay 1993, ch. 3 (first-order errors).
    """
    if not isinstance(scan, Scan) or not (expected is None or isinstance(expected, Spectrum)):
        raise InputError("reduce_scan takes a scans.Scan and, for expected, a spectra.Spectrum")
    if definition not in DEFINITIONS_MEASURED:
        raise InputError(f"definition must be one of {', '.join(DEFINITIONS_MEASURED)}; got {definition!r}")
    even = even_scan(scan)
    band = _found_band(scan, even, expected)
    packet = packet_in(even.axis_si, even.signal, band)
    result = _measured(scan, even, packet, band, definition)
    if expected is None:
        return result
    return compared(result, expected, tolerances or Tolerances(), expected_contrast)


def compared(result: ScanResult, expected: Spectrum, tolerances: Tolerances, expected_contrast: float = 1.0) -> ScanResult:
    """Return the result with comparisons against predicted light, and the verdict.

    A scan without a path scale is compared by its packet width in fringe periods; its wavelength, and a coherence length on which a
    tolerance is set, are then not measured.
    """
    if not 0 < expected_contrast <= 1:
        raise InputError(f"expected_contrast must be above 0 and at most 1; got {expected_contrast}")
    light, width = mean_wavelength(expected), predicted_packet_width(expected)
    ideal = Measured(value=expected_contrast * u.dimensionless_unscaled, definition="contrast at zero path difference")
    path_known = result.wavelength is not None
    if path_known:
        widths = (result.packet_width, width)
    else:
        in_fringes = (width.value / light.value).to(u.dimensionless_unscaled)
        widths = (result.packet_width_fringes, replace(width, value=in_fringes, definition="packet width in fringe periods"))
    comparisons = (
        Comparison(name="contrast", measured=result.contrast, predicted=ideal, tolerance=tolerances.contrast),
        Comparison(
            name="wavelength",
            measured=result.wavelength,
            predicted=light,
            tolerance=tolerances.wavelength,
            reason="" if path_known else NO_SCALE,
        ),
        Comparison(name="packet width", measured=widths[0], predicted=widths[1], tolerance=tolerances.packet_width),
        *_coherence_compared(result, expected, tolerances.coherence_length),
    )
    return replace(result, comparisons=comparisons, verdict=overall(item.outcome for item in comparisons))


def _coherence_compared(result: ScanResult, expected: Spectrum, limits: tuple[float, float] | None) -> tuple[Comparison, ...]:
    """Coherence length by the result's definition; nothing where the light has none and none is asked for."""
    try:
        predicted = coherence_length(expected, result.definition)
    except UndefinedWidthError:
        if limits is None:
            return ()
        raise
    known = result.wavelength is not None
    measured = result.coherence_length if known and isinstance(result.coherence_length, Measured) else None
    reason = "" if measured is not None else NO_SCALE if not known else str(result.coherence_length)
    return (Comparison(name="coherence length", measured=measured, predicted=predicted, tolerance=limits, reason=reason),)


def _found_band(scan: Scan, even: EvenScan, expected: Spectrum | None) -> Band:
    """Find the fringes; refuse what is too coarse or too faint."""
    if expected is not None and even.path_known:
        wavelength = float(mean_wavelength(expected).value.to_value(u.m))
        _refuse_coarse(scan, wavelength / even.step, "expected ")
    if np.mean(even.signal) <= 0:
        raise ScanError(f"{scan.name}: the mean signal is not above the dark level {scan.layout.dark:g}: contrast has no meaning")
    band = find_band(detrended(even.axis_si, even.signal), even.step)
    if band is None:
        raise _no_fringe(scan, even)
    _refuse_coarse(scan, 1.0 / (band.carrier * even.step), "")
    return band


def _refuse_coarse(scan: Scan, samples_per_fringe: float, which: str) -> None:
    if samples_per_fringe < FEWEST_PER_FRINGE:
        raise TooFewSamplesError(
            f"{scan.name}: {samples_per_fringe:.2f} samples per {which}fringe; at least {FEWEST_PER_FRINGE:g} are needed: scan more slowly "
            "or in smaller steps"
        )


def _no_fringe(scan: Scan, even: EvenScan) -> NoFringeError:
    """Say what contrast may have been missed."""
    values = detrended(even.axis_si, even.signal) / float(np.mean(even.signal))
    limit = missed_contrast(values)
    return NoFringeError(
        f"{scan.name}: no fringes above the noise; a packet longer than a twelfth of the scan has a contrast below {limit:.2g} (95 %)",
        upper_limit=limit,
    )


def _measured(scan: Scan, even: EvenScan, packet: Packet, band: Band, definition: str) -> ScanResult:
    peak, height = peak_of(packet, band.carrier)
    error = packet.sigma(height.gradient)
    _refuse_impossible(scan, height.value, error)
    if height.value < LEAST_SIGNAL_TO_NOISE * error:
        limit = min(height.value + 1.645 * error, 1.0)
        raise NoFringeError(
            f"{scan.name}: the strongest packet is only {height.value / error:.1f} times its noise; contrast below {limit:.2g} (95 %)",
            upper_limit=limit,
        )
    halves = crossings_of(packet, peak, height, 0.5)
    if halves is None or not _clear_of_ends(packet, halves):
        raise PacketCutOffError(_cut_off(scan, even, packet, peak))
    centre = centre_of(packet, peak, band.carrier)
    frequency = packet.mean_frequency(centre.value)
    width = Estimate(halves[1].value - halves[0].value, halves[1].gradient - halves[0].gradient)
    coherence: Estimate | str
    try:
        coherence = coherence_measured(packet, centre.value, peak, height, definition)
    except UndefinedWidthError as reason:
        coherence = str(reason)
    return _result(even, packet, height, centre, frequency, width, coherence, definition)


def _refuse_impossible(scan: Scan, contrast: float, error: float) -> None:
    if contrast - 5 * error > MOST_CONTRAST:
        raise ScanError(
            f"{scan.name}: the contrast comes out as {contrast:.3g}, which no light can have: the dark level {scan.layout.dark:g} is too "
            "high, or the lamp flickered in step with the fringes"
        )


def _clear_of_ends(packet: Packet, halves: tuple[Estimate, Estimate]) -> bool:
    """Tell whether the half-contrast points lie inside the shoulders that fade the scan's ends."""
    last = packet.origin + packet.span * (1 - 1 / packet.samples)
    return halves[0].value - packet.origin > packet.shoulder and last - halves[1].value > packet.shoulder


def _cut_off(scan: Scan, even: EvenScan, packet: Packet, peak: float) -> str:
    first, last = float(even.axis_si[0]), float(even.axis_si[-1])
    side = "start" if peak - first < last - peak else "end"
    unit = even.unit if not even.path_known else u.um
    where = (np.array([first, last, peak]) * even.unit).to_value(unit)
    margin = (packet.shoulder * even.unit).to_value(unit)
    return (
        f"{scan.name}: the packet is cut off: its contrast does not fall to half at least {margin:.3g} {unit} before the {side} of the "
        f"scan (which runs from {where[0]:.6g} to {where[1]:.6g} {unit}, greatest contrast at {where[2]:.6g}): move or widen the scan; "
        "fringes of one strength throughout are those of a sharp line, or no fringes at all"
    )


def _result(
    even: EvenScan,
    packet: Packet,
    height: Estimate,
    centre: Estimate,
    frequency: Estimate,
    width: Estimate,
    coherence: Estimate | str,
    definition: str,
) -> ScanResult:
    unit = u.um if even.path_known else STEP
    scale = 1e6 if even.path_known else 1.0

    def measured(estimate: Estimate, words: str, out: Any = unit) -> Measured:
        factor = scale if out is unit else 1.0
        sigma = packet.uncertainty(estimate)
        return Measured(
            value=estimate.value * factor * out,
            uncertainty=sigma * factor * out,
            definition=words,
            method=METHOD,
            citation="takeda",
        )

    one = u.dimensionless_unscaled
    period = Estimate(1 / frequency.value, -frequency.gradient / frequency.value**2)
    fringes = Estimate(width.value * frequency.value, width.gradient * frequency.value + frequency.gradient * width.value)
    contrast = measured(height, "greatest contrast of the packet", one)
    fringe_period = measured(period, "fringe period at the packet centre")
    return ScanResult(
        contrast=contrast,
        opd_centre=measured(centre, "packet centre: power-weighted group delay"),
        packet_width=measured(width, "full width of the packet at half its greatest contrast"),
        packet_width_fringes=measured(fringes, "packet width in fringe periods", one),
        fringe_period=fringe_period,
        fringe_frequency=measured(frequency.scaled(1 / scale), "fringe frequency at the packet centre", 1 / unit),
        wavelength=replace(fringe_period, definition="wavelength: the fringe period in optical path") if even.path_known else None,
        coherence_length=coherence
        if isinstance(coherence, str)
        else measured(coherence, f"{definition}: {DEFINITIONS_MEASURED[definition]}"),
        definition=definition,
        signal_to_noise=float(contrast.value / contrast.uncertainty),
        samples_per_fringe=float(1 / (frequency.value * even.step)),
        notes=even.notes,
        curves=_curves(even, packet),
    )


def _curves(even: EvenScan, packet: Packet) -> ScanCurves:
    _, z = packet.grid
    z = z[::OVERSAMPLING]
    return ScanCurves(
        axis=even.axis_si,
        unit=even.unit,
        signal=read_only(even.signal / packet.mean_level),
        envelope=read_only(np.abs(z)),
        fringes=read_only(1.0 + z.real),
    )
