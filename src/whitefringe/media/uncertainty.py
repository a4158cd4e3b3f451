"""How uncertain what follows from two arms is: lengths, and the air that all segments share or one has alone."""

from __future__ import annotations

from collections.abc import Callable, Iterator
from dataclasses import dataclass, replace
from typing import Any

import astropy.units as u
import numpy as np

from ..errors import InputError
from ..spectra import Spectrum
from ..units import as_quantity, as_si, as_temperature_si, frozen_quantities
from .arms import ArmPair, Segment
from .medium import STEPS

LENGTH_STEP = 1e-2
"""Step [m] of the differences with a length: what is asked for is nearly linear in the lengths, and an optimum is known to 1e-9 m only."""

PARTS = {
    "lengths": "lengths",
    "temperature": "air temperature",
    "pressure": "air pressure",
    "humidity": "air humidity",
    "segments": "single segments' temperatures",
}


@dataclass(frozen=True, kw_only=True)
class AirUncertainty:
    """One standard deviation of what all air in both arms has in common.

    Parameters
    ----------
    temperature : Quantity [K]
    pressure : Quantity [Pa]
    humidity : Quantity [percent]
        Of relative humidity.
    """

    temperature: u.Quantity = 0.0 * u.K
    pressure: u.Quantity = 0.0 * u.Pa
    humidity: u.Quantity = 0.0 * u.percent

    def __post_init__(self) -> None:
        frozen_quantities(self)
        if any(np.ndim(step) or step < 0 for step in self.steps_si.values()):
            raise InputError(f"an uncertainty must be one number, zero or more; got {self}")

    @property
    def steps_si(self) -> dict[str, float]:
        """Standard deviations [K, Pa, 1]."""
        as_quantity(self.humidity, "humidity", "for example 3 * u.percent")
        return {
            "temperature": as_si(self.temperature, u.K, "temperature"),
            "pressure": as_si(self.pressure, u.Pa, "pressure", "hPa"),
            "humidity": as_si(self.humidity, u.dimensionless_unscaled, "humidity", "percent"),
        }


def check_arms_and_lights(pair: Any, lights: tuple[Any, ...], air: Any) -> None:
    """Refuse what is not a pair of arms, spectra, and an `AirUncertainty` or nothing."""
    if not isinstance(pair, ArmPair):
        raise InputError(f"pair must be a media.ArmPair; got {pair!r}")
    if not lights or not all(isinstance(light, Spectrum) for light in lights):
        raise InputError(f"lights must be one or more spectra such as spectra.detected(source, filter); got {lights!r}")
    if air is not None and not isinstance(air, AirUncertainty):
        raise InputError(f"air must be a media.AirUncertainty; got {air!r}")


Function = Callable[[ArmPair, dict[str, Any]], Any]
"""What is asked for, a number or an array, of a pair, with a shift of its air (as `ArmPair.refraction_shifted_si` takes it)."""


def by_air(function: Function, pair: ArmPair, key: str) -> Any:
    """Derivative of `function` with a condition of all air, by a central difference."""
    step = STEPS[key]
    return (function(pair, {key: step}) - function(pair, {key: -step})) / (2 * step)


def by_length(function: Function, pair: ArmPair, number: int, step: float = LENGTH_STEP) -> Any:
    """Derivative of `function` with the length [m] of a segment, by its number in `ArmPair.signed`."""
    return (function(lengthened(pair, number, step), {}) - function(lengthened(pair, number, -step), {})) / (2 * step)


def changed(pair: ArmPair, number: int, to: Segment, *others: Segment) -> ArmPair:
    """Return the pair with one segment, by its number in `ArmPair.signed`, replaced, and `others` added to the other arm."""
    arms = [list(pair.first), list(pair.second)]
    which, place = (0, number) if number < len(pair.first) else (1, number - len(pair.first))
    arms[which][place] = to
    arms[1 - which] += others
    return ArmPair(first=arms[0], second=arms[1])


def lengthened(pair: ArmPair, number: int, by: float) -> ArmPair:
    """Return the pair with one segment longer [m]; a difference may take it below zero, which no user's segment can be."""
    item = [*pair.first, *pair.second][number]
    longer = item.length_si + by
    if longer < 0:  # the same path with the other sign: in the other arm
        return changed(pair, number, replace(item, length=0 * u.m), replace(item, length=-longer * u.m))
    return changed(pair, number, replace(item, length=longer * u.m))


def any_uncertain(pair: ArmPair, air: AirUncertainty) -> bool:
    """Tell whether anything at all is stated as uncertain."""
    alone = (item.length_uncertainty.value > 0 or item.temperature_uncertainty.value > 0 for _, item in pair.signed)
    return any(alone) or (pair.has_air and any(step > 0 for step in air.steps_si.values()))


def uncertainties(function: Function, pair: ArmPair, air: AirUncertainty) -> dict[str, Any]:
    """Contributions of everything uncertain to `function`, each one standard deviation (first order), by the names of `PARTS`.

    `function` gives a number or an array of them, and so is every contribution.
    """
    segments = [item for _, item in pair.signed]
    found = {
        "lengths": _root_sum(_lengths(function, pair, segments)),
        "segments": _root_sum(_own_temperatures(function, pair, segments)),
    }
    for key, sigma in air.steps_si.items():
        found[key] = np.abs(by_air(function, pair, key)) * sigma if sigma and pair.has_air else np.zeros(())
    return {PARTS[key]: found[key] for key in PARTS}


def _lengths(function: Function, pair: ArmPair, segments: list[Segment]) -> Iterator[Any]:
    for number, item in enumerate(segments):
        sigma = float(as_si(item.length_uncertainty, u.m, "length_uncertainty"))
        if sigma:
            yield by_length(function, pair, number) * sigma


def _own_temperatures(function: Function, pair: ArmPair, segments: list[Segment]) -> Iterator[Any]:
    step = STEPS["temperature"]
    for number, item in enumerate(segments):
        sigma = float(as_si(item.temperature_uncertainty, u.K, "temperature_uncertainty"))
        if sigma and item.medium.is_air:
            up, down = ({"only": number, "temperature": sign * step} for sign in (1, -1))
            yield (function(pair, up) - function(pair, down)) / (2 * step) * sigma
        elif sigma:
            yield (function(warmed(pair, number, step), {}) - function(warmed(pair, number, -step), {})) / (2 * step) * sigma


def warmed(pair: ArmPair, number: int, by: float) -> ArmPair:
    """Return the pair with one segment of glass warmer [K]."""
    item = [*pair.first, *pair.second][number]
    glass: Any = item.medium_here
    kelvin = as_temperature_si(glass.temperature if glass.now is None else glass.now)
    return changed(pair, number, replace(item, temperature=(kelvin + by) * u.K))


@dataclass(frozen=True, kw_only=True)
class ShiftedPair(ArmPair):
    """A pair whose air is warmer, denser or moister by `shift`."""

    shift: tuple[tuple[str, Any], ...] = ()

    @classmethod
    def of(cls, pair: ArmPair, shift: dict[str, Any]) -> ShiftedPair:
        """Return the pair in the shifted air."""
        return cls(first=pair.first, second=pair.second, shift=tuple(shift.items()))

    def refraction_shifted_si(self, wavenumber: Any, only: int | None = None, **shift: float) -> Any:
        """As of a pair, in the shifted air."""
        given: dict[str, Any] = dict(self.shift) | shift
        return super().refraction_shifted_si(wavenumber, **{"only": only, **given})


def _root_sum(parts: Iterator[Any]) -> Any:
    return np.sqrt(sum((part**2 for part in parts), start=np.zeros(())))


def total(parts: dict[str, Any]) -> Any:
    """Root of the sum of squares."""
    return np.sqrt(sum((part**2 for part in parts.values()), start=np.zeros(())))
