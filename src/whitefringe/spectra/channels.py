"""Spectral channels: what a spectrograph makes of a band, channel by channel."""

from __future__ import annotations

from dataclasses import dataclass, field
from functools import cached_property
from itertools import pairwise
from typing import Any

import astropy.units as u
import numpy as np

from ..errors import InputError
from ..results import Measured
from ..units import SPEED_OF_LIGHT, FloatArray
from .measures import half_maximum_edges_si, mean_frequency_si
from .spectrum import Spectrum

CHANNEL_PROFILES = ("top-hat", "gaussian", "triangular")
"""Names of the channel profiles."""

GAUSSIAN_REACH = 3.5
"""A Gaussian channel is followed to this many full widths from its centre."""


@dataclass(frozen=True, kw_only=True)
class ChannelProfile:
    """Response of one channel, of unit height, in frequency: a filter.

    Parameters
    ----------
    centre_si, width_si : float
        Centre and full width at half maximum [Hz].
    profile : str
        One of `CHANNEL_PROFILES`.
    """

    centre_si: float
    width_si: float
    profile: str = "top-hat"

    @property
    def support_si(self) -> tuple[float, float]:
        """Frequencies [Hz] that the channel sees."""
        reach = {"top-hat": 0.5, "triangular": 1.0, "gaussian": GAUSSIAN_REACH}[self.profile] * self.width_si
        return max(self.centre_si - reach, 1e-3 * self.centre_si), self.centre_si + reach

    @property
    def breakpoints_si(self) -> FloatArray:
        """Frequencies [Hz] where the slope jumps."""
        return np.array([self.centre_si]) if self.profile == "triangular" else np.empty(0)

    def transmission_si(self, frequency: FloatArray) -> FloatArray:
        """Response at `frequency` [Hz], inside the support."""
        x = (frequency - self.centre_si) / self.width_si
        if self.profile == "triangular":
            return np.maximum(1.0 - np.abs(x), 0.0)
        if self.profile == "gaussian":
            return np.asarray(np.exp(-4 * np.log(2) * x**2))
        return np.ones_like(frequency)


@dataclass(frozen=True, kw_only=True, eq=False)
class Channel:
    """One channel: its light, and the numbers that commissioning asks for."""

    light: Spectrum = field(repr=False)
    profile: ChannelProfile

    @cached_property
    def centre(self) -> Measured:
        """Vacuum wavelength of the mean frequency of the channel's light."""
        value = (SPEED_OF_LIGHT / mean_frequency_si(self.light) * u.m).to(u.um)
        return Measured(value=value, definition=f"c / mean frequency, {self.light.weight}-weighted", method="sum over cells")

    @cached_property
    def width(self) -> Measured:
        """Full width at half maximum of the channel's light, in wavelength."""
        low, high = half_maximum_edges_si(self.light)
        value = ((SPEED_OF_LIGHT / low - SPEED_OF_LIGHT / high) * u.m).to(u.nm)
        return Measured(value=value, definition="full width at half maximum, in wavelength", method="linear crossing")

    @cached_property
    def coherence_length(self) -> Measured:
        """Coherence length of the channel by the definition ``bandwidth``: c over the full width at half maximum."""
        low, high = half_maximum_edges_si(self.light)
        value = (SPEED_OF_LIGHT / (high - low) * u.m).to(u.um)
        return Measured(value=value, definition="bandwidth: c over the full width at half maximum", method="linear crossing")


@dataclass(frozen=True, kw_only=True, eq=False)
class ChannelSet:
    """Channels of one band, from the longest wavelength to the shortest.

    Attributes
    ----------
    ambiguity : Measured
        Path differences this far apart look the same to the group delay: 1 over the wavenumber step of the channels.
    reach : Measured
        Path difference up to which the widest channel keeps half of its contrast or more, either way from zero.
    """

    channels: tuple[Channel, ...]

    def __len__(self) -> int:
        return len(self.channels)

    def __iter__(self) -> Any:
        return iter(self.channels)

    def __getitem__(self, index: int) -> Channel:
        return self.channels[index]

    @cached_property
    def ambiguity(self) -> Measured:
        """Group-delay ambiguity: c over the mean frequency step between neighbouring channels."""
        if len(self.channels) < 2:
            raise InputError("one channel has no group delay, and so no ambiguity: split into two or more")
        centres = np.array([channel.profile.centre_si for channel in self.channels])
        steps = np.abs(np.diff(centres))
        uneven = np.ptp(steps) > 1e-6 * float(np.mean(steps))
        value = (SPEED_OF_LIGHT / float(np.mean(steps)) * u.m).to(u.um)
        step = "mean wavenumber step; the steps differ, so it is soft" if uneven else "wavenumber step"
        words = f"group-delay ambiguity: 1 over the {step}"
        return Measured(value=value, definition=words, method="channel centres")

    @cached_property
    def reach(self) -> Measured:
        """Half-contrast delay of the widest channel, from its profile alone."""
        widest = max(self.channels, key=lambda channel: channel.profile.width_si).profile
        share = {"top-hat": 0.6033545644, "gaussian": 2 * np.log(2) / np.pi, "triangular": 0.4429464707}[widest.profile]
        value = (share * SPEED_OF_LIGHT / widest.width_si * u.m).to(u.um)
        return Measured(value=value, definition="path difference at which the widest channel keeps half its contrast", citation="goodman")


def split(
    light: Spectrum,
    channels: int | None = None,
    *,
    resolving_power: float | None = None,
    profile: str = "top-hat",
    axis: str = "frequency",
) -> ChannelSet:
    """Split a band into spectral channels.

    Parameters
    ----------
    light : Spectrum
        With a continuum; its grid's ends are the band.
    channels : int, optional
        Number of channels, equal in `axis`; or
    resolving_power : float, optional
        Centre over full width of each channel; as many as fill the band, so that the stated power is the least.
    profile : str
        ``"top-hat"`` (channels touch), ``"gaussian"`` or ``"triangular"`` (full width at half maximum equal to the spacing).
    axis : str
        ``"frequency"`` or ``"wavelength"``: what `channels` are equal in. With `resolving_power` they are equal in log wavelength.

    Returns
    -------
    ChannelSet
        Iterable; each channel has `light`, `centre`, `width` and `coherence_length`.

    Raises
    ------
    InputError
        Neither or both of `channels` and `resolving_power`, unknown names, or light of lines only.

    Examples
    --------
    >>> import astropy.units as u
    >>> from whitefringe import spectra
    >>> light = spectra.detected(spectra.Flat(), spectra.TopHat(centre=1.65 * u.um, width=0.3 * u.um))
    >>> channels = spectra.split(light, 5)
    >>> print(channels.ambiguity)
    45 um (group-delay ambiguity: 1 over the wavenumber step)
    """
    edges = _edges(light, channels, resolving_power, axis)
    if profile not in CHANNEL_PROFILES:
        raise InputError(f"profile must be one of {', '.join(CHANNEL_PROFILES)}; got {profile!r}")
    made = []
    for low, high in pairwise(edges):
        response = ChannelProfile(centre_si=0.5 * (low + high), width_si=high - low, profile=profile)
        made.append(Channel(light=light.through(response, samples=1024), profile=response))
    return ChannelSet(channels=tuple(made))


def _edges(light: Spectrum, channels: int | None, resolving_power: float | None, axis: str) -> FloatArray:
    """Edges of the channels [Hz], rising."""
    if (channels is None) == (resolving_power is None):
        raise InputError("give channels (how many) or resolving_power, one of the two")
    if axis not in ("frequency", "wavelength"):
        raise InputError(f'axis must be "frequency" or "wavelength"; got {axis!r}')
    if not light.density.size:
        raise InputError("light of lines only has no band to split; put a continuum in, or take the lines one by one")
    low, high = light.start_si, light.start_si + light.step_si * light.density.size
    if resolving_power is not None:
        if not resolving_power > 0.5:
            raise InputError(f"resolving_power must be above 0.5; got {resolving_power}")
        # a channel from f to q f has centre over width (q + 1) / (2 (q - 1)), so R gives q = (2 R + 1) / (2 R - 1)
        ratio = np.log((2 * resolving_power + 1) / (2 * resolving_power - 1))
        count = max(int(np.ceil(np.log(high / low) / ratio - 1e-9)), 1)
        return np.asarray(np.geomspace(low, high, count + 1))
    if isinstance(channels, bool) or not isinstance(channels, int) or channels < 1:
        raise InputError(f"channels must be a whole number from 1; got {channels!r}")
    if axis == "frequency":
        return np.asarray(np.linspace(low, high, channels + 1))
    return np.asarray(1 / np.linspace(1 / low, 1 / high, channels + 1))
