"""How the absolute index of a glass changes with its temperature."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

import numpy as np

from ..io import read_packaged
from ..units import FloatArray
from ._derivatives import composed, poles, polynomial, product
from .medium import Range


@dataclass(frozen=True, kw_only=True)
class ThermalCoefficients:
    """Change of the absolute index by dT kelvin.

    n(T0 + dT) - n(T0) = (n^2 - 1) / (2 n) [D0 dT + D1 dT^2 + D2 dT^3 + (E0 dT + E1 dT^2) / (L^2 - L0^2)], L the wavelength in um,
    n within the factor that of the dispersion formula (relative to air where it is so stated).

    Parameters
    ----------
    d0, d1, d2 : float
        [1/K, 1/K^2, 1/K^3].
    e0, e1 : float
        [um^2/K, um^2/K^2].
    resonance : float
        L0 [um].
    low, high : float
        Range of the temperature [deg_C].

    References
    ----------
    Schott, Technical Information TIE-19, eqs 2 and 3 (from memory).
    """

    d0: float
    d1: float
    d2: float
    e0: float
    e1: float
    resonance: float
    low: float
    high: float

    def outside(self, celsius: float) -> str:
        """Say that a temperature lies outside the range, or return nothing."""
        return Range(name="temperature", low=self.low, high=self.high, unit="deg_C", source="thermal coefficients").outside(celsius)

    def change(self, index: FloatArray, s: FloatArray, dT: float) -> FloatArray:
        """Change of n and of its derivatives with wavenumber `s` [1/um], shape (4, ...), from the formula's own `index`."""
        n = index[0]
        strength = composed(np.array([(n - 1 / n) / 2, (1 + n**-2) / 2, -(n**-3), 3 * n**-4]), index)
        square = self.resonance**2
        # 1 / (L^2 - L0^2) = -1 / L0^2 + (1 / L0^4) / (1 / L0^2 - s^2)
        term = poles(s, [1 / square**2], [1 / square]) + polynomial(s, [-1 / square])
        constant = polynomial(s, [self.d0 * dT + self.d1 * dT**2 + self.d2 * dT**3])
        return product(strength, constant + (self.e0 * dT + self.e1 * dT**2) * term)


def packaged_coefficients(name: str) -> ThermalCoefficients | None:
    """Return the packaged coefficients of a glass, or None."""
    for row in read_packaged("glass_temperature.ecsv"):
        if str(row["name"]) == name:
            values: dict[str, Any] = {key: float(row[key]) for key in ThermalCoefficients.__dataclass_fields__}
            return ThermalCoefficients(**values)
    return None
