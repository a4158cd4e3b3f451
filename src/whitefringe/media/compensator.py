"""How much glass in one arm makes up for what the other arm has more."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace
from functools import partial
from typing import Any

import astropy.units as u
import numpy as np
from scipy.optimize import minimize_scalar

from ..errors import InputError
from ..results import Measured
from ..spectra import Spectrum
from ..units import SPEED_OF_LIGHT, FloatArray
from ._derivatives import times_wavenumber
from .arms import ArmPair, Segment
from .glasses import Glass
from .packets import DispersedPacket, centre_si, coarser
from .uncertainty import AirUncertainty, ShiftedPair, check_arms_and_lights, total, uncertainties

AIMS = {
    "contrast loss": "least sum of -ln(greatest contrast) over the bands, each at its own best path difference",
    "loss at one delay": "least sum of -ln(contrast) over the bands, all at one path difference",
    "group delay spread": "least mean square of the bands' zero points about their mean",
}

THICKEST = 0.2
"""No compensator is looked for beyond this thickness [m]."""

SCANNED = 81
"""Thicknesses tried about the first guess, so that the best of several optima is found."""

NEAR = 20e-6
"""Reach [m] of the last refinement."""


@dataclass(frozen=True, kw_only=True)
class Compensation:
    """The glass that was chosen, and what remains with it.

    Parameters
    ----------
    thickness : Measured [length]
        Of glass in the second arm; negative: in the first arm.
    aim : str
        What was made as small as it can be: a key of `AIMS`.
    pair : ArmPair
        The arms with the glass.
    contrasts : tuple of Measured
        Greatest contrast that remains in each band; with the aim ``"loss at one delay"``, the contrast at that delay.
    before : tuple of Measured
        Greatest contrast in each band without the glass.
    offsets : tuple of Measured
        Zero point (centre of |gamma|^2) of each band less that of the first.
    delay : Measured [length]
        Added path difference to work at: the mean of the bands' zero points, or the one delay of ``"loss at one delay"``.
    parts : dict
        Contributions to the uncertainty of the thickness, by name [length].
    flags : tuple of str
    """

    thickness: Measured
    aim: str
    pair: ArmPair
    contrasts: tuple[Measured, ...]
    before: tuple[Measured, ...]
    offsets: tuple[Measured, ...]
    delay: Measured
    parts: dict[str, u.Quantity]
    flags: tuple[str, ...]

    @property
    def rows(self) -> tuple[tuple[str, Measured | str], ...]:
        """All numbers with their names, for a table."""
        found: list[tuple[str, Measured | str]] = [("thickness", self.thickness)]
        for number, values in enumerate(zip(self.before, self.contrasts, self.offsets, strict=True), start=1):
            names = ("contrast before", "contrast", "zero point")
            found += [(f"band {number}: {name}", value) for name, value in zip(names, values, strict=True)]
        return tuple(found)


def compensator(
    pair: ArmPair, glass: Glass, lights: Sequence[Spectrum], *, minimise: str = "contrast loss", air: AirUncertainty | None = None
) -> Compensation:
    """Choose the thickness of a plate of glass in one of the arms.

    Parameters
    ----------
    pair : ArmPair
        Without the plate.
    glass : Glass
    lights : sequence of Spectrum
        The bands; ``"group delay spread"`` needs two or more.
    minimise : str
        A key of `AIMS`.
    air : AirUncertainty, optional
        Of the air that both arms share, for the uncertainty of the thickness.

    Returns
    -------
    Compensation

    Raises
    ------
    InputError
        No light, one light for a spread, an unknown aim, or a plate thicker than 20 cm.

    Notes
    -----
    ``"group delay spread"`` is a straight least-squares solution: the zero points are linear in the thickness. The others start where the
    dispersion of order 2, weighted by the fourth power of each band's width, is least, try thicknesses about it, and refine the best.

    Examples
    --------
    30 m of air more in the first arm, made up for in the visible:

    >>> import astropy.units as u
    >>> from whitefringe import media, spectra
    >>> light = spectra.detected(spectra.Flat(), spectra.TopHat(centre=0.7 * u.um, width=0.1 * u.um))
    >>> pair = media.ArmPair(first=[media.Segment(medium=media.Ciddor1996(), length=30 * u.m)], second=[])
    >>> found = media.compensator(pair, media.Glass.named("fused silica"), [light])
    >>> print(f"{found.thickness.to(u.mm):.3f}, contrast {found.before[0].value:.3f} to {found.contrasts[0].value:.5f}")
    16.442 mm, contrast 0.296 to 0.99983
    """
    lights = (lights,) if isinstance(lights, Spectrum) else tuple(lights)
    check_arms_and_lights(pair, lights, air)
    if not isinstance(glass, Glass):
        raise InputError(f'glass must be a media.Glass such as media.Glass.named("fused silica"); got {glass!r}')
    if minimise not in AIMS:
        raise InputError(f"minimise must be one of {', '.join(AIMS)}; got {minimise!r}")
    if minimise == "group delay spread" and len(lights) < 2:
        raise InputError("a spread of group delays needs two bands or more; for one band ask for the contrast loss")
    flags = with_plate(pair, glass, 1e-3).flags(*lights)
    coarse = tuple(coarser(light) for light in lights)
    near = _solve(pair, glass, coarse, minimise)
    best = near if minimise == "group delay spread" else _refined(partial(_loss, _Search(pair, glass), lights, minimise), near, NEAR)
    parts = uncertainties(partial(_shifted, glass=glass, lights=coarse, aim=minimise, near=near), pair, air or AirUncertainty())
    sigma = float(total(parts))
    thickness = Measured(
        value=(best * u.m).to(u.mm),
        uncertainty=(sigma * u.m).to(u.mm) if sigma else None,
        definition=f"of {glass.name} in the second arm (negative: in the first); {AIMS[minimise]}",
    )
    shares = {name: (part * u.m).to(u.um) for name, part in parts.items()}
    return Compensation(
        thickness=thickness, aim=minimise, parts=shares, flags=flags, **_remaining(pair, glass, lights, minimise, best, air)
    )


def with_plate(pair: ArmPair, glass: Glass, thickness: float) -> ArmPair:
    """Return the pair with `thickness` [m] of glass in the second arm, or its opposite in the first."""
    plate = (Segment(medium=glass, length=abs(thickness) * u.m),)
    if thickness < 0:
        return replace(pair, first=(*pair.first, *plate))
    return replace(pair, second=(*pair.second, *plate))


def _remaining(
    pair: ArmPair, glass: Glass, lights: tuple[Spectrum, ...], aim: str, best: float, air: AirUncertainty | None
) -> dict[str, Any]:
    after = with_plate(pair, glass, best)
    packets = [DispersedPacket(pair=after, light=light, air=air) for light in lights]
    zeros = [centre_si(after, light) for light in lights]
    delay = float(np.mean(zeros))
    contrasts = [packet.peak_contrast for packet in packets]
    if aim == "loss at one delay":
        delay = _one_delay(packets)[0]
        words = "|gamma| at the one delay"
        contrasts = [Measured(value=abs(packet.degree_si(np.array([delay]))[0]) * u.one, definition=words) for packet in packets]
    return {
        "pair": after,
        "contrasts": tuple(contrasts),
        "before": tuple(DispersedPacket(pair=pair, light=light, air=air).peak_contrast for light in lights),
        "offsets": tuple(Measured(value=((zero - zeros[0]) * u.m).to(u.um), definition="less that of the first band") for zero in zeros),
        "delay": Measured(value=(delay * u.m).to(u.um), definition="added path difference to work at"),
    }


def _solve(pair: ArmPair, glass: Glass, lights: tuple[Spectrum, ...], aim: str) -> float:
    if aim == "group delay spread":
        return _checked(_equal_delays(pair, glass, lights), glass)
    guess = _checked(_least_dispersion(pair, glass, lights), glass)
    loss = partial(_loss, _Search(pair, glass), lights, aim)
    reach = max(0.1 * abs(guess), _tolerable(glass, lights))
    places = np.linspace(guess - reach, guess + reach, SCANNED)
    best = float(places[int(np.argmin([loss(place) for place in places]))])
    return _checked(_refined(loss, best, places[1] - places[0]), glass)


def _checked(thickness: float, glass: Glass) -> float:
    if abs(thickness) > THICKEST:
        raise InputError(
            f"{abs(thickness) * 1e3:.4g} mm of {glass.name} would be needed, more than {THICKEST * 1e3:g} mm: "
            "balance the arms first, or take a glass that disperses more"
        )
    return thickness


def _refined(loss: Any, near: float, step: float) -> float:
    found = minimize_scalar(loss, bounds=(near - step, near + step), method="bounded", options={"xatol": 1e-9})
    return float(found.x)


def _shifted(pair: ArmPair, shift: dict[str, Any], *, glass: Glass, lights: tuple[Spectrum, ...], aim: str, near: float) -> float:
    """Thickness [m] for a pair that is a little different."""
    moved = ShiftedPair.of(pair, shift)
    if aim == "group delay spread":
        return _equal_delays(moved, glass, lights)
    return _refined(partial(_loss, _Search(moved, glass), lights, aim), near, 0.02 * _tolerable(glass, lights) + 1e-6)


class _Search:
    """Arms with a plate whose thickness is tried: what arms and a metre of glass do at a wavenumber is computed once."""

    def __init__(self, pair: ArmPair, glass: Glass) -> None:
        self.pair, self.glass = pair, glass
        self._known: dict[bytes, tuple[FloatArray, FloatArray]] = {}

    def refraction_si(self, wavenumber: FloatArray, thickness: float) -> FloatArray:
        """Of the arms with the plate: linear in its thickness."""
        key = wavenumber.tobytes()
        if key not in self._known:
            plate = times_wavenumber(self.glass.refractivity_si(wavenumber), wavenumber)
            self._known[key] = (self.pair.refraction_si(wavenumber), plate)
        arms, plate = self._known[key]
        return arms + thickness * plate

    def with_thickness(self, thickness: float) -> _Tried:
        """Return the pair with that much glass."""
        plated = with_plate(self.pair, self.glass, thickness)
        return _Tried(first=plated.first, second=plated.second, search=self, thickness=thickness)


@dataclass(frozen=True, kw_only=True)
class _Tried(ArmPair):
    """A pair whose plate is being tried."""

    search: _Search
    thickness: float

    def refraction_shifted_si(self, wavenumber: Any, only: int | None = None, **shift: float) -> Any:
        """As of a pair, from what the search knows."""
        return self.search.refraction_si(np.asarray(wavenumber, dtype=float), self.thickness)


def _equal_delays(pair: ArmPair, glass: Glass, lights: tuple[Spectrum, ...]) -> float:
    plate = ArmPair(first=[], second=[Segment(medium=glass, length=1 * u.m)])
    zeros = np.array([centre_si(pair, light) for light in lights])
    slopes = np.array([centre_si(plate, light) for light in lights])
    zeros, slopes = zeros - np.mean(zeros), slopes - np.mean(slopes)
    if not np.any(slopes):
        raise InputError(f"{glass.name} delays these bands alike; their spread cannot be changed with it")
    return float(-np.dot(zeros, slopes) / np.dot(slopes, slopes))


def _orders(pair: ArmPair, glass: Glass, lights: tuple[Spectrum, ...]) -> tuple[Any, Any, Any]:
    """Dispersion of order 2 of pair and of a metre of glass at each band's mean wavenumber, and each band's variance."""
    rows = []
    for light in lights:
        sigma = light.frequency_si / SPEED_OF_LIGHT
        weight = light.density
        if not weight.size:
            raise InputError("a compensator needs bands with a continuum; light of lines only has no dispersion to speak of")
        mean = np.sum(weight * sigma) / np.sum(weight)
        variance = np.sum(weight * (sigma - mean) ** 2) / np.sum(weight)
        rows.append((pair.refraction_si(mean)[2], times_wavenumber(glass.refractivity_si(mean), mean)[2], variance))
    second, plate, variance = np.array(rows).T
    return second, plate, variance


def _least_dispersion(pair: ArmPair, glass: Glass, lights: tuple[Spectrum, ...]) -> float:
    second, plate, variance = _orders(pair, glass, lights)
    return float(-np.sum(variance**2 * second * plate) / np.sum(variance**2 * plate**2))


def _tolerable(glass: Glass, lights: tuple[Spectrum, ...]) -> float:
    """Thickness [m] that turns the phase at the bands' rms width by about six radians: some widths of the optimum."""
    _, plate, variance = _orders(ArmPair(first=[], second=[]), glass, lights)
    return float(np.min(6.0 / (np.pi * np.abs(plate) * variance)))


def _loss(search: _Search, lights: tuple[Spectrum, ...], aim: str, thickness: float) -> float:
    packets = [DispersedPacket(pair=search.with_thickness(thickness), light=light) for light in lights]
    if aim == "loss at one delay":
        return _one_delay(packets)[1]
    return float(-sum(np.log(packet.peak_height) for packet in packets))


def _one_delay(packets: list[DispersedPacket]) -> tuple[float, float]:
    """Path difference [m] at which the summed loss of all bands is least, and that loss."""
    zeros = [packet.peak_si for packet in packets]
    margin = max(packet.undispersed_width_si for packet in packets)
    finest = min(packet.undispersed_width_si for packet in packets)
    low, high = min(zeros) - margin, max(zeros) + margin
    x = np.linspace(low, high, int(min(max((high - low) / finest * 8, 33), 20_000)) | 1)
    loss = -sum(np.log(np.maximum(np.abs(packet.degree_si(x)), 1e-12)) for packet in packets)
    best = int(np.argmin(loss))

    def one(shift: float) -> float:
        return float(-sum(np.log(max(abs(packet.degree_si(np.array([x[best] + shift]))[0]), 1e-12)) for packet in packets))

    step = x[1] - x[0]
    found = minimize_scalar(one, bounds=(-step, step), method="bounded", options={"xatol": 1e-6 * step})
    return float(x[best] + found.x), float(found.fun)
