"""What the air models share: conditions with their ranges, water vapour, and derivatives of the index with the conditions."""

from __future__ import annotations

from dataclasses import dataclass, replace
from functools import cached_property
from typing import Any, ClassVar, NamedTuple, Self

import astropy.units as u

from ..errors import InputError, UnitsError
from ..parameters import parameter
from ..units import PPM, FloatArray, as_quantity, as_si, frozen_quantities, positive_si
from .medium import Medium, Range, one_temperature_si
from .moist_air import SATURATION_FORMS, saturation_si


class State(NamedTuple):
    """Conditions as the formulas take them: temperature [K], pressure [Pa] and the vapour's partial pressure [Pa]."""

    temperature: float
    pressure: float
    vapour: float


@dataclass(frozen=True, kw_only=True)
class Air(Medium):
    """Air under stated conditions; the base of the models.

    Parameters
    ----------
    temperature : Quantity [K or deg_C]
    pressure : Quantity [Pa]
    humidity : Quantity [percent, or pressure]
        Relative humidity (over ice below 0 degrees C), or that times the saturation pressure of pure water, as tables of vapour pressure
        give it (Ciddor's enhancement factor comes on top).
    extrapolate : bool
        Go beyond the model's ranges, and have the results flagged.
    saturation : str
        Form of the saturation vapour pressure, see `saturation_vapour_pressure`.
    co2 : float or Quantity
        Mole fraction of carbon dioxide; most models are for one only.
    """

    temperature: u.Quantity = parameter("air temperature", u.deg_C, low=-10.0, high=40.0, step=0.1, start=15.0, default=15.0 * u.deg_C)
    pressure: u.Quantity = parameter("air pressure", u.hPa, low=600.0, high=1080.0, step=1.0, start=1013.0, default=101325.0 * u.Pa)
    humidity: u.Quantity = parameter("relative humidity", u.percent, low=0.0, high=100.0, step=1.0, start=0.0, default=0.0 * u.percent)
    extrapolate: bool = False
    saturation: str = "iapws"
    co2: Any = 450e-6

    shape: ClassVar[str]
    stated: ClassVar[tuple[Range, Range, Range]]
    """Ranges of temperature [deg_C], pressure [kPa] and relative humidity [%]."""

    def __post_init__(self) -> None:
        frozen_quantities(self)
        if co2_fraction(self.co2) != self.co2_si:
            words = f"{self.name} is for {1e6 * self.co2_si:g} ppm of CO2 and no other"
            raise InputError(f"{words}: leave co2 out, or use Ciddor1996; got {self.co2}")
        if self.saturation not in SATURATION_FORMS:
            raise InputError(f"saturation must be one of {', '.join(SATURATION_FORMS)}; got {self.saturation!r}")
        positive_si(self.pressure, u.Pa, "pressure", "hPa")
        if not -1e-12 <= self.relative_humidity <= 1 + 1e-12:
            raise InputError(
                f"humidity must be from 0 to 100 %, or up to {self._saturated_si:.5g} Pa of vapour at this temperature; "
                f"got {self.humidity} ({self.relative_humidity:.4g} of saturation)"
            )
        outside = [text for text in self._outside() if text]
        if outside and not self.extrapolate:
            raise InputError(f"{self.name}: {'; '.join(outside)}; use another model, or say extrapolate=True to have the results flagged")

    def _outside(self) -> list[str]:
        temperature, pressure, humidity = self.stated
        return [
            temperature.outside(self.temperature_si - 273.15),
            pressure.outside(self.pressure_si / 1e3),
            humidity.outside(100 * self.relative_humidity),
        ]

    def _condition_flags(self) -> tuple[str, ...]:
        return tuple(f"{self.name} extrapolated: {text}" for text in self._outside() if text)

    @property
    def is_air(self) -> bool:
        """Air it is."""
        return True

    def under(self, *, temperature: Any = None, pressure: Any = None, humidity: Any = None) -> Self:
        """Return the same model under other conditions; a humidity in percent stays that, one given as a vapour pressure stays that."""
        given = {"temperature": temperature, "pressure": pressure, "humidity": humidity}
        return replace(self, **{key: value for key, value in given.items() if value is not None})

    def refractivity_si(self, wavenumber: FloatArray) -> FloatArray:
        """Refractivity n - 1 and the derivatives of n with wavenumber [1/m], shape (4, ...)."""
        return self.refractivity_at_si(wavenumber, self.state_si)

    def refractivity_at_si(self, wavenumber: FloatArray, state: State) -> FloatArray:
        """Like `refractivity_si`, in another state of the air, ranges unasked."""
        raise NotImplementedError

    def refractivity_shifted_si(self, wavenumber: FloatArray, **shift: float) -> FloatArray:
        """Like `refractivity_si`, in air that is warmer, denser or moister; see `shifted_si`."""
        return self.refractivity_at_si(wavenumber, self.shifted_si(**shift))

    @cached_property
    def state_si(self) -> State:
        """Temperature [K], pressure [Pa], vapour pressure [Pa]."""
        return State(self.temperature_si, self.pressure_si, self.vapour_pressure_si)

    def shifted_si(self, temperature: float = 0.0, pressure: float = 0.0, humidity: float = 0.0) -> State:
        """Return the state of air warmer [K], denser [Pa] or moister [fraction of saturation]; warmer air keeps its relative humidity."""
        warm = self.temperature_si + temperature
        return State(warm, self.pressure_si + pressure, (self.relative_humidity + humidity) * self.saturated_si(warm))

    @property
    def co2_si(self) -> float:
        """Mole fraction of carbon dioxide that the model is for."""
        return 450e-6

    @cached_property
    def temperature_si(self) -> float:
        """Temperature [K]."""
        return one_temperature_si(self.temperature)

    @cached_property
    def pressure_si(self) -> float:
        """Pressure [Pa]."""
        return float(as_si(self.pressure, u.Pa, "pressure", "hPa"))

    def saturated_si(self, temperature: float) -> float:
        """Saturation vapour pressure [Pa] at a temperature [K]."""
        return saturation_si(temperature, self.saturation)

    @cached_property
    def _saturated_si(self) -> float:
        return self.saturated_si(self.temperature_si)

    @cached_property
    def vapour_pressure_si(self) -> float:
        """Partial pressure of the water vapour [Pa], by the pure saturation pressure (no enhancement factor)."""
        quantity = as_quantity(self.humidity, "humidity", HUMIDITY)
        if quantity.ndim:
            raise InputError(f"humidity must be one number ({HUMIDITY}); got {self.humidity}")
        if quantity.unit.is_equivalent(u.Pa):
            return float(quantity.to_value(u.Pa))
        if quantity.unit.is_equivalent(u.dimensionless_unscaled):
            return float(quantity.to_value(u.dimensionless_unscaled)) * self._saturated_si
        raise UnitsError(f"humidity must be {HUMIDITY}; got {self.humidity}")

    @property
    def relative_humidity(self) -> float:
        """Vapour pressure over saturation pressure."""
        return self.vapour_pressure_si / self._saturated_si


HUMIDITY = "a relative humidity or a vapour pressure, for example 40 * u.percent or 900 * u.Pa"


def co2_fraction(value: Any) -> float:
    """Return a mole fraction of carbon dioxide, given bare (450e-6) or in `units.PPM`."""
    words = f"co2 must be one mole fraction, for example 450e-6 or 450 * units.PPM; got {value!r}"
    if value is None or isinstance(value, str):
        raise UnitsError(words)
    try:
        quantity = u.Quantity(value, dtype=float)
    except (TypeError, ValueError):
        raise UnitsError(words) from None
    if not quantity.unit.is_equivalent(PPM) or quantity.ndim:
        raise UnitsError(words)
    fraction = float(quantity.to_value(u.dimensionless_unscaled))
    if not 0 <= fraction <= 0.1:
        raise InputError(f"co2 must be a mole fraction from 0 to 0.1, for example 450e-6 for 450 ppm; got {value!r}")
    return fraction
