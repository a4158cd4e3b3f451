"""Light as random wave trains: the complex field of a simulated source, with the truth beside it.

A source emits trains at random times and with random phases, E(t) = sum_k exp(i phi_k) h(t - t_k); its degree of coherence is that of
one train, and with many trains in a coherence time the field is thermal light.
"""

from __future__ import annotations

import dataclasses
from collections.abc import Callable, Mapping
from dataclasses import dataclass
from types import MappingProxyType
from typing import Any

import astropy.units as u
import numpy as np

from ..errors import InputError
from ..spectra import Spectrum
from ..units import FloatArray, as_delay_si, one_frequency_si, positive_si
from ._emission import ComplexArray, box, damped, gaussian
from ._synthesis import carrier_si, thermal
from .degree import self_coherence_si

MOST_SAMPLES = 1_000_000_000
"""A longer record does not fit into memory."""

LONGEST_TRAIN = 1_000_000
"""Samples per damping time, at most."""


@dataclass(frozen=True, kw_only=True)
class Envelope:
    """One shape of wave train, with x = |tau| / damping_time.

    `amplitude` in words; `draw` makes the field (samples, trains per sample, damping time in samples, generator); `gamma` is |gamma(x)|;
    `bunching` the excess b(x) of g2 over thermal light, times rate and damping time.
    """

    name: str
    amplitude: str
    draw: Callable[[int, float, float, np.random.Generator], ComplexArray]
    gamma: Callable[[FloatArray], FloatArray]
    bunching: Callable[[FloatArray], FloatArray]


ENVELOPES = (
    Envelope(
        name="damped",
        amplitude="exp(-t / damping_time) from emission on",
        draw=damped,
        gamma=lambda x: np.exp(-x),
        bunching=lambda x: np.exp(-2 * x),
    ),
    Envelope(
        name="gaussian",
        amplitude="exp(-(t / damping_time)^2) about emission",
        draw=gaussian,
        gamma=lambda x: np.exp(-0.5 * x**2),
        bunching=lambda x: np.exp(-(x**2)) / np.sqrt(np.pi),
    ),
    Envelope(
        name="box",
        amplitude="1 for damping_time from emission on",
        draw=box,
        gamma=lambda x: np.maximum(1 - x, 0.0),
        bunching=lambda x: np.maximum(1 - x, 0.0),
    ),
)
"""The family of envelopes, the default first."""


@dataclass(frozen=True, kw_only=True, eq=False)
class SimulatedField:
    """A simulated field about its carrier.

    `field`: complex amplitudes, shape (n,), read-only, of mean intensity 1; `sample_interval` Quantity [time]; `carrier` Quantity
    [frequency] or None: the optical field is field times exp(-2 pi i carrier t); `truth`: the numbers that went in, and ``"gamma"`` and
    ``"g2"``, functions of a lag.
    """

    field: ComplexArray = dataclasses.field(repr=False)
    sample_interval: u.Quantity
    carrier: u.Quantity | None = None
    truth: Mapping[str, Any] = dataclasses.field(repr=False)

    @property
    def time(self) -> u.Quantity:
        """Time of each sample from the first, shape (n,)."""
        return np.arange(self.field.size) * self.sample_interval

    @property
    def intensity(self) -> FloatArray:
        """Square modulus of the field, shape (n,)."""
        return np.asarray(self.field.real**2 + self.field.imag**2)


@dataclass(frozen=True, kw_only=True, eq=False)
class WaveTrains:
    """A source of wave trains with random emission times (a Poisson process) and random phases.

    E(t) = sum_k exp(i phi_k) h(t - t_k),  gamma(tau) = int h(t + tau) h(t) dt / int h^2 dt,
    g2(tau) = 1 + |gamma(tau)|^2 + int h^2(t + tau) h^2(t) dt / (rate (int h^2 dt)^2)

    Parameters
    ----------
    rate : Quantity [1/time]
        Mean number of trains emitted per time.
    damping_time : Quantity [time]
        Of the amplitude, T: the field, not the intensity, falls to 1/e in it; of a box its whole length.
    envelope : str
        ``"damped"``: h = exp(-t/T) from t = 0 on, |gamma| = exp(-|tau|/T), a Lorentzian line of full width 1/(pi T);
        ``"gaussian"``: h = exp(-(t/T)^2), |gamma| = exp(-tau^2/(2 T^2)); ``"box"``: h = 1 from 0 to T, |gamma| = max(0, 1 - |tau|/T).
    wavelength : Quantity [vacuum wavelength or frequency], optional
        Of the carrier. It is only noted: the field is drawn about it, and a carrier adds nothing to a random phase.
    spectrum : Spectrum, instead of rate, damping_time, envelope and wavelength
        Thermal light of this spectrum, about the middle of its extent: the limit of infinitely many trains.

    Raises
    ------
    UnitsError
        A number without its unit.
    InputError
        A number not above zero, an unknown envelope, or both a spectrum and trains.

    Notes
    -----
    rate times damping_time, the number of trains in a coherence time N, tells how thermal the light is: g2(0) - 2 is 1/N for damped
    and box trains, 1/(sqrt(pi) N) for Gaussian ones.

    References
    ----------
    Rice 1944, doi:10.1002/j.1538-7305.1944.tb00874.x, part I (Campbell's theorem); Mandel & Wolf, sec. 4.3.

    Examples
    --------
    >>> import astropy.units as u
    >>> import numpy as np
    >>> lamp = WaveTrains(rate=5 / u.ps, damping_time=20 * u.ps)
    >>> print(lamp.gamma([0, 20] * u.ps).round(4))
    [1.    +0.j 0.3679+0.j]
    >>> light = lamp.simulate(duration=10 * u.ns, sample_interval=1 * u.ps, rng=np.random.default_rng(1))
    >>> light.field.shape
    (10000,)
    """

    rate: u.Quantity | None = None
    damping_time: u.Quantity | None = None
    envelope: str = "damped"
    wavelength: u.Quantity | None = None
    spectrum: Spectrum | None = None

    def __post_init__(self) -> None:
        if self.spectrum is not None:
            if not isinstance(self.spectrum, Spectrum):
                raise InputError(f"spectrum must be a spectra.Spectrum, such as spectra.detected gives; got {self.spectrum!r}")
            if any(item is not None for item in (self.rate, self.damping_time, self.wavelength)):
                raise InputError("give either spectrum, or rate and damping_time, not both")
            return
        if self.rate is None or self.damping_time is None:
            raise InputError("wave trains need rate and damping_time, or else a spectrum")
        _ = self._shape, self.rate_si, self.damping_si
        if self.wavelength is not None:
            one_frequency_si(self.wavelength, "wavelength")

    @property
    def rate_si(self) -> float:
        """Trains per second; not defined for a spectrum."""
        return positive_si(self.rate, 1 / u.s, "rate", "THz")

    @property
    def damping_si(self) -> float:
        """Damping time [s]; not defined for a spectrum."""
        return positive_si(self.damping_time, u.s, "damping_time", "ps")

    @property
    def _shape(self) -> Envelope:
        for item in ENVELOPES:
            if item.name == self.envelope:
                return item
        raise InputError(f"envelope must be one of {', '.join(item.name for item in ENVELOPES)}; got {self.envelope!r}")

    @property
    def carrier(self) -> u.Quantity | None:
        """Frequency about which the field is drawn; None where no wavelength was given."""
        if self.spectrum is not None:
            return (carrier_si(self.spectrum) * u.Hz).to(u.THz)
        return None if self.wavelength is None else (one_frequency_si(self.wavelength, "wavelength") * u.Hz).to(u.THz)

    def gamma(self, lag: Any) -> ComplexArray:
        """Degree of self-coherence of the field about its carrier, gamma(tau) exp(2 pi i carrier tau).

        Parameters
        ----------
        lag : Quantity [time, or path difference], any shape
        """
        return self.gamma_si(as_delay_si(lag, "lag"))

    def gamma_si(self, tau: Any) -> ComplexArray:
        """Twin of `gamma`: lags in seconds."""
        tau = np.asarray(tau, dtype=float)
        if self.spectrum is not None:
            return np.asarray(self_coherence_si(self.spectrum, tau) * np.exp(2j * np.pi * carrier_si(self.spectrum) * tau))
        return np.asarray(self._shape.gamma(np.abs(tau) / self.damping_si), dtype=complex)

    def g2(self, lag: Any) -> FloatArray:
        """Intensity correlation <I(t + tau) I(t)> / <I>^2; argument as for `gamma`."""
        tau = np.asarray(as_delay_si(lag, "lag"))
        thermal_light = 1 + np.abs(self.gamma_si(tau)) ** 2
        if self.spectrum is not None:
            return np.asarray(thermal_light)
        return np.asarray(thermal_light + self._shape.bunching(np.abs(tau) / self.damping_si) / (self.rate_si * self.damping_si))

    def simulate(self, *, duration: Any, sample_interval: Any, rng: np.random.Generator) -> SimulatedField:
        """Draw the field.

        Parameters
        ----------
        duration : Quantity [time]
            Of the record: duration / sample_interval samples, rounded.
        sample_interval : Quantity [time]
            At most half the damping time, or one over the extent of the spectrum.
        rng : numpy.random.Generator

        Returns
        -------
        SimulatedField
            Stationary from its first sample on, of unit mean intensity over many records.

        Raises
        ------
        UnitsError
            No unit, or not a time.
        InputError
            Too coarse, too fine, too short or too long for memory.

        Notes
        -----
        Emission times are rounded to the sample grid, by half a sample at most (a box keeps its end exact on average). gamma at whole
        lags is the closed form, unchanged: for Gaussian trains to 1e-8, else exactly; the excess of g2 over thermal light is changed by
        (sample_interval / T)^2 / 3 of itself, or less. Above one train per sample, trains are merged so that gamma and g2 stay as they
        are. A spectrum is drawn by one transform of the whole record of duration D, each bin with the power inside it: gamma at lag
        tau is off by pi |tau| / D at most, also for lines narrower than a bin, whose field then hardly changes over the record.
        """
        interval = positive_si(sample_interval, u.s, "sample_interval", "ps")
        count = self._count(positive_si(duration, u.s, "duration", "ns"), interval)
        if not isinstance(rng, np.random.Generator):
            raise InputError(f"rng must be a numpy.random.Generator, for example numpy.random.default_rng(1); got {rng!r}")
        if self.spectrum is not None:
            amplitudes = thermal(self.spectrum, count, interval, rng)
        else:
            damping = self._damping_in_samples(interval)
            amplitudes = self._shape.draw(count, self.rate_si * interval, damping, rng)
        amplitudes.setflags(write=False)
        return SimulatedField(field=amplitudes, sample_interval=u.Quantity(sample_interval), carrier=self.carrier, truth=self._truth())

    def _count(self, duration: float, interval: float) -> int:
        count = round(duration / interval) if duration / interval < 2 * MOST_SAMPLES else 2 * MOST_SAMPLES
        if not 1 <= count <= MOST_SAMPLES:
            raise InputError(
                f"duration must be 1 to {MOST_SAMPLES:.0e} times sample_interval; got {duration / interval:.3g} times: "
                "simulate a shorter record, or several"
            )
        return count

    def _damping_in_samples(self, interval: float) -> float:
        damping = self.damping_si / interval
        if not 2 * (1 - 1e-9) <= damping <= LONGEST_TRAIN:
            raise InputError(
                f"sample_interval must be from 1/{LONGEST_TRAIN} to 1/2 of the damping time {self.damping_time}; got {interval * u.s:.4g}"
            )
        return damping

    def _truth(self) -> Mapping[str, Any]:
        numbers = {"gamma": self.gamma, "g2": self.g2, "mean_intensity": 1.0}
        if self.spectrum is None:
            trains = {"rate": self.rate, "damping_time": self.damping_time, "envelope": self.envelope}
            numbers |= trains | {"trains_per_damping_time": self.rate_si * self.damping_si}
        return MappingProxyType(numbers)
