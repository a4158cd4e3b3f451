"""The fringe packet of two arms that differ: dispersed, compared with the one that equal arms would show."""

from __future__ import annotations

from dataclasses import dataclass, replace
from functools import cached_property
from typing import Any

import astropy.units as u
import numpy as np
from scipy.optimize import brentq

from ..coherence.degree import ComplexArray
from ..coherence.widths import packet_width
from ..errors import InputError, UndefinedWidthError
from ..results import Measured
from ..spectra import Spectrum
from ..units import SPEED_OF_LIGHT, FloatArray, as_si
from ._transform import PhasedTransform
from .arms import ArmPair, band_si
from .uncertainty import AirUncertainty, ShiftedPair, any_uncertain, check_arms_and_lights, total, uncertainties

PER_WIDTH = 16
"""Path differences per undispersed packet width in the search for the greatest contrast."""

FINER = 33
"""Path differences of each finer search; more than 24, so that they go through a chirp-z transform."""

CELLS = 1024
"""Cells to which lights are thinned where only a derivative or a first guess is wanted."""

MOST = 60_000
"""Path differences of a search at most."""


@dataclass(frozen=True, kw_only=True, eq=False)
class DispersedPacket:
    """The packet of one light behind two arms.

    gamma(x) = int S(nu) exp(-2 pi i [nu x / c + nu OPD(nu) / c]) dnu / int S dnu, x the path difference that is added to the second arm in
    vacuum (by the delay line or stage), OPD(nu) that of the arms.

    Parameters
    ----------
    pair : ArmPair
    light : Spectrum
    air : AirUncertainty, optional
        Of the air that both arms share. With it, and with the uncertainties of the segments, the numbers carry uncertainties (first
        order, one standard deviation).

    Notes
    -----
    Where the second arm is the longer one, the packet lies at negative x. Dispersion within a line of the light is left out; its group
    delay is not.

    Examples
    --------
    >>> import astropy.units as u
    >>> from whitefringe import media, spectra
    >>> light = spectra.detected(spectra.Flat(), spectra.TopHat(centre=1.65 * u.um, width=0.3 * u.um))
    >>> pair = media.ArmPair(first=[media.Segment(medium=media.Glass.named("N-BK7"), length=10 * u.mm)], second=[])
    >>> packet = media.DispersedPacket(pair=pair, light=light)
    >>> print(f"{packet.peak_contrast.value:.4f} at {packet.position.value:.4f}, {packet.broadening.value:.3f} times as wide")
    0.8345 at 15211.1138 um, 1.244 times as wide
    """

    pair: ArmPair
    light: Spectrum
    air: AirUncertainty | None = None

    def __post_init__(self) -> None:
        check_arms_and_lights(self.pair, (self.light,), self.air)
        _ = self.flags

    @cached_property
    def flags(self) -> tuple[str, ...]:
        """What is extrapolated, in words."""
        return self.pair.flags(self.light)

    @cached_property
    def _transform(self) -> PhasedTransform:
        return PhasedTransform(self.light, self.pair.refraction_si)

    def degree(self, opd: Any) -> ComplexArray:
        """Return the complex degree of coherence at added path differences.

        Parameters
        ----------
        opd : Quantity [length], any shape
            Added to the second arm in vacuum.
        """
        return self.degree_si(np.asarray(as_si(opd, u.m, "opd", "um")))

    def degree_si(self, opd: FloatArray) -> ComplexArray:
        """Twin of `degree`: path differences in metres."""
        return self._transform(np.asarray(opd, dtype=float) + self.pair.geometric_si)

    def about_zero_si(self, offset: FloatArray) -> ComplexArray:
        """Like `degree_si`, at path differences [m] from `zero`: exact to 1e-11 of a turn however unequal the arms are."""
        return self._transform.about(np.asarray(offset, dtype=float))

    @property
    def zero(self) -> Measured:
        """Added path difference at which the group delay of the mean frequency is balanced."""
        return Measured(
            value=(self._zero_si * u.m).to(u.um),
            definition="path difference, added in vacuum, that balances the mean frequency's group delay",
        )

    @cached_property
    def _zero_si(self) -> float:
        """Added path difference [m] at which the group delay of the mean frequency is balanced."""
        return -(self.pair.geometric_si + self._transform.group_opd)

    @cached_property
    def centre_si(self) -> float:
        """Centre of |gamma|^2 [m]: minus the group path difference, weighted by S^2."""
        return centre_si(self.pair, self.light)

    @cached_property
    def undispersed_width_si(self) -> float:
        """Full width at half contrast [m] that equal arms would show."""
        return float(packet_width(self.light).value.to_value(u.m))

    @cached_property
    def _spread_si(self) -> float:
        """How far [m] the group delay wanders over the band."""
        edges = np.linspace(*band_si(self.light), 33) / SPEED_OF_LIGHT
        group = self.pair.refraction_si(edges)[1]
        return float(np.ptp(group))

    @cached_property
    def reach_si(self) -> float:
        """How far [m] either way from `zero` the packet is looked for: no contrast worth a name lies beyond."""
        return 2 * self.undispersed_width_si + 1.5 * self._spread_si

    @cached_property
    def _sampled(self) -> tuple[FloatArray, FloatArray]:
        """Path differences from `_zero_si` about the packet, and |gamma| there."""
        half = self.reach_si
        count = int(np.ceil(2 * half / self.undispersed_width_si * PER_WIDTH)) | 1
        if count > MOST:
            raise UndefinedWidthError(
                f"the arms spread this light over {self._spread_si:.3g} m, more than {MOST // PER_WIDTH} packet widths: there is no packet "
                "to speak of; balance the arms or narrow the band"
            )
        x = np.linspace(-half, half, count)
        return x, np.abs(self._transform.about(x))

    @cached_property
    def _peak(self) -> tuple[float, float]:
        """Place [m] from `_zero_si` and height of the greatest contrast.

        The best of the samples, of finer ones about it, and a parabola through three of those.
        """
        x, contrast = self._sampled
        step = float(x[1] - x[0])
        for _ in range(2):
            best = float(x[int(np.argmax(contrast))])
            x = best + np.linspace(-step, step, FINER)
            contrast = np.abs(self._transform.about(x))
            step = 2 * step / (FINER - 1)
        middle = int(np.clip(np.argmax(contrast), 1, FINER - 2))
        left, top, right = contrast[middle - 1 : middle + 2]
        bend = left - 2 * top + right
        shift = 0.5 * (left - right) / bend if bend < 0 else 0.0
        return float(x[middle] + shift * step), float(top - 0.25 * (left - right) * shift)

    @property
    def peak_si(self) -> float:
        """Added path difference [m] of the greatest contrast."""
        return self._zero_si + self._peak[0]

    @property
    def peak_height(self) -> float:
        """Greatest contrast, as a bare number."""
        return self._peak[1]

    @property
    def peak_contrast(self) -> Measured:
        """Greatest contrast; 1 for equal arms."""
        return self._measured("peak contrast", self._peak[1] * u.one, "greatest |gamma| of the dispersed packet")

    @property
    def position(self) -> Measured:
        """Added path difference of the greatest contrast."""
        return self._measured("position", (self.peak_si * u.m).to(u.um), "path difference, added in vacuum, of the greatest contrast")

    @property
    def centre(self) -> Measured:
        """Added path difference of the centre of |gamma|^2."""
        return self._measured("centre", (self.centre_si * u.m).to(u.um), "path difference, added in vacuum, of the centre of |gamma|^2")

    def _measured(self, name: str, value: u.Quantity, definition: str) -> Measured:
        sigma = self._sigmas.get(name)
        unit = u.m if value.unit.is_equivalent(u.m) else u.one
        return Measured(value=value, uncertainty=None if sigma is None else (sigma * unit).to(value.unit), definition=definition)

    @cached_property
    def _sigmas(self) -> dict[str, float]:
        """One standard deviation of every number [m or 1]; nothing where nothing is uncertain."""
        air = self.air or AirUncertainty()
        if not any_uncertain(self.pair, air):
            return {}
        coarse = coarser(self.light)
        names = tuple(DispersedPacket(pair=self.pair, light=coarse).numbers_si())

        def numbers(pair: ArmPair, shift: dict[str, Any]) -> FloatArray:
            found = DispersedPacket(pair=ShiftedPair.of(pair, shift), light=coarse).numbers_si()
            return np.array([found.get(name, np.nan) for name in names])

        sigmas = np.broadcast_to(total(uncertainties(numbers, self.pair, air)), (len(names),))
        return {name: float(sigma) for name, sigma in zip(names, sigmas, strict=True) if sigma > 0}

    def numbers_si(self) -> dict[str, float]:
        """The numbers of `rows` [m or 1], as far as this light has them."""
        found: dict[str, float] = {}
        try:
            found |= {"peak contrast": self.peak_height, "position": self.peak_si}
            left, right = self._flanks
            width = left + right
            found |= {"width": width, "broadening": width / self.undispersed_width_si, "asymmetry": (right - left) / width}
        except UndefinedWidthError:
            pass  # the rows say why
        return found if self.light.lines and self.light.density.size else found | {"centre": self.centre_si}

    @cached_property
    def _flanks(self) -> tuple[float, float]:
        """Path differences [m] left and right from the greatest contrast at which |gamma| first falls to half of it."""
        x, contrast = self._sampled
        place, height = self._peak
        found = []
        for side in (-1, 1):
            outward = x[x * side > place * side][::side]
            below = np.flatnonzero(contrast[x * side > place * side][::side] < height / 2)
            if not below.size:
                raise UndefinedWidthError("the dispersed packet does not fall to half its greatest contrast within the searched range")
            inner = outward[below[0] - 1] if below[0] else place
            found.append(self._half_between(float(inner), float(outward[below[0]]), height / 2))
        return place - found[0], found[1] - place

    def _half_between(self, inner: float, outer: float, level: float) -> float:
        def above(share: float) -> float:
            return float(abs(self._transform.about(np.array([inner + share * (outer - inner)]))[0])) - level

        return inner + float(brentq(above, 0.0, 1.0, xtol=1e-9)) * (outer - inner)

    @property
    def width(self) -> Measured:
        """Full width at half the greatest contrast."""
        return self._measured("width", (sum(self._flanks) * u.m).to(u.um), "full width of the packet at half its greatest contrast")

    @property
    def broadening(self) -> Measured:
        """Width over that of the undispersed packet."""
        ratio = sum(self._flanks) / self.undispersed_width_si
        return self._measured("broadening", ratio * u.one, "full width at half contrast, over that of equal arms")

    @property
    def asymmetry(self) -> Measured:
        """(right - left) / (right + left) of the half widths about the greatest contrast; 0 for a symmetric packet."""
        left, right = self._flanks
        words = "(right - left) / (right + left), half widths at half contrast"
        return self._measured("asymmetry", (right - left) / (right + left) * u.one, words)

    @property
    def rows(self) -> tuple[tuple[str, Measured | str], ...]:
        """All numbers with their names, for a table; a number that does not exist is a reason in words."""
        found: list[tuple[str, Measured | str]] = []
        for name in ("peak_contrast", "position", "centre", "width", "broadening", "asymmetry"):
            try:
                found.append((name.replace("_", " "), getattr(self, name)))
            except (InputError, UndefinedWidthError) as reason:
                found.append((name.replace("_", " "), str(reason)))
        return tuple(found)


def centre_si(pair: ArmPair, light: Spectrum, **shift: Any) -> float:
    """Added path difference [m] of the centre of |gamma|^2 in a light: minus the group path difference weighted by S^2.

    int x |gamma|^2 dx / int |gamma|^2 dx = -int S^2 G dnu / int S^2 dnu, G the group path difference of the arms (moment theorem). Light
    of lines only has no such centre: its lines count by their squared strengths. `shift` as for `ArmPair.refraction_shifted_si`.
    """
    sigma, weight = _weights(light)
    with np.errstate(invalid="ignore", divide="ignore", over="ignore"):
        group = pair.refraction_shifted_si(sigma, **shift)[1]
    there = np.isfinite(group)  # a medium may have no index in the far wings of a band
    return -(pair.geometric_si + float(np.sum(weight[there] * group[there]) / np.sum(weight[there])))


def _weights(light: Spectrum) -> tuple[FloatArray, FloatArray]:
    """Wavenumbers [1/m] and the squared density there; of a light of lines only, the squared strengths."""
    if light.density.size:
        if light.lines:
            raise InputError(
                "the centre of a packet is not defined for light of continuum and lines together; ask for the greatest contrast"
            )
        return light.frequency_si / SPEED_OF_LIGHT, light.density**2 + light.slopes**2 / 12
    places = [(line.frequency_si / SPEED_OF_LIGHT, line.strength**2) for line in light.lines]
    sigma, weight = np.array(places).T
    return sigma, weight


def coarser(light: Spectrum) -> Spectrum:
    """Return the light in at most twice `CELLS` cells, each the mean of some."""
    group = light.density.size // CELLS
    if group < 2:
        return light
    count = light.density.size // group * group
    if count < light.density.size:
        return light
    return replace(light, step=light.step * group, density=light.density.reshape(-1, group).mean(axis=1))
