"""One path with two air models, for bands that no single model covers; the step between them is shown, not hidden."""

from __future__ import annotations

from dataclasses import dataclass, field, replace
from functools import cached_property
from typing import Any, ClassVar, Self

import astropy.units as u
import numpy as np

from ..errors import InputError
from ..units import SPEED_OF_LIGHT, FloatArray, frozen_quantities, one_frequency_si
from ._air import Air
from .medium import CONDITIONS, Medium


@dataclass(frozen=True, kw_only=True)
class TwoModelAir(Medium):
    """Air by one model up to a wavelength and by another beyond, under the same conditions.

    Parameters
    ----------
    short, long : Air
        Models for the wavelengths below and above `meet`.
    meet : Quantity [wavelength]
    levelled : bool
        Take the step at `meet` out of the longer side, so that no false path difference arises between bands on the two sides.

    Notes
    -----
    Between Ciddor 1996 (at Mathar's 370 ppm of CO2) and Mathar 2007 the step is about 5e-8 in dry air of sea level, 5 um of path per
    100 m of air that is not balanced, and less in moist air. Neither model is known to be the right one at that level. `step` says
    it, and every result that such air enters carries it as a flag.

    Examples
    --------
    >>> import astropy.units as u
    >>> from whitefringe import media
    >>> air = TwoModelAir(short=media.Ciddor1996(co2=370e-6), long=media.Mathar2007(), meet=1.5 * u.um)
    >>> print(f"{air.step:.2e}")
    5.09e-08
    """

    short: Air
    long: Air
    meet: u.Quantity = 1.5 * u.um
    levelled: bool = False
    name: str = field(default="two air models", init=False)
    shape: ClassVar[str] = "two air models"

    def __post_init__(self) -> None:
        frozen_quantities(self)
        if not isinstance(self.short, Air) or not isinstance(self.long, Air):
            raise InputError("short and long must be air models such as media.Ciddor1996(...) and media.Mathar2007(...)")
        if not np.allclose(self.short.state_si, self.long.state_si, rtol=1e-9):
            raise InputError(f"both models must have the same temperature, pressure and humidity; got {self.short} and {self.long}")
        one_frequency_si(self.meet, "meet")
        self.short.flags(self.meet)
        self.long.flags(self.meet)

    @cached_property
    def step(self) -> float:
        """Index by the longer side's model less that by the shorter side's, where they meet."""
        return self._step({})

    @cached_property
    def _meet_si(self) -> float:
        return one_frequency_si(self.meet, "meet") / SPEED_OF_LIGHT

    @property
    def is_air(self) -> bool:
        """Air it is."""
        return True

    def under(self, *, temperature: Any = None, pressure: Any = None, humidity: Any = None) -> Self:
        """Return the same models under other conditions."""
        given = dict(zip(CONDITIONS, (temperature, pressure, humidity), strict=True))
        return replace(self, short=self.short.under(**given), long=self.long.under(**given))

    def flags_si(self, wavenumber: FloatArray) -> tuple[str, ...]:
        """Say what is extrapolated, and the step where both sides are used."""
        sigma = np.atleast_1d(np.asarray(wavenumber, dtype=float))
        long = sigma < self._meet_si
        flags = [flag for air, side in ((self.short, ~long), (self.long, long)) if np.any(side) for flag in air.flags_si(sigma[side])]
        if np.any(long) and not np.all(long):
            what = "taken out" if self.levelled else "left in"
            if abs(self.short.co2_si - self.long.co2_si) > 1e-7:
                what += f", part of it from {1e6 * self.short.co2_si:.4g} against {1e6 * self.long.co2_si:.4g} ppm of CO2"
            flags.append(f"{self.short.name} and {self.long.name} meet at {self.meet} with a step in n of {self.step:.2e}, {what}")
        return tuple(flags)

    def refractivity_si(self, wavenumber: FloatArray) -> FloatArray:
        """Refractivity n - 1 and the derivatives of n, shape (4, ...); those of the side on which a wavenumber lies."""
        return self.refractivity_shifted_si(wavenumber)

    def refractivity_shifted_si(self, wavenumber: FloatArray, **shift: float) -> FloatArray:
        """Like `refractivity_si`, in air that is warmer, denser or moister."""
        sigma = np.asarray(wavenumber, dtype=float)
        far = self.long.refractivity_shifted_si(sigma, **shift)
        far[0] -= self._step(shift) if self.levelled else 0.0
        return np.where(sigma < self._meet_si, far, self.short.refractivity_shifted_si(sigma, **shift))

    def _step(self, shift: dict[str, float]) -> float:
        at = np.asarray(self._meet_si)
        return float(self.long.refractivity_shifted_si(at, **shift)[0] - self.short.refractivity_shifted_si(at, **shift)[0])
