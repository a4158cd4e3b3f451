"""Numbers that depend on wavelength, as tables: an emissivity or reflectivity, and the light of a measured source."""

from __future__ import annotations

from dataclasses import dataclass, field
from functools import cached_property
from typing import Any, ClassVar

import astropy.units as u
import numpy as np

from ..errors import InputError, UnitsError
from ..units import SPEED_OF_LIGHT, FloatArray, as_frequency_si, read_only
from ._curves import NEAR_ZERO, REPAIRS, _finite, _may, _ordered, _single, _wavelength_si, read_curve
from ._source import SourceShape

_EDGE = 1e-9
"""A wavelength counts as inside a table to this fraction of itself: the rounding of a unit's conversion."""


def _points(wavelength: Any, values: Any, repair: tuple[str, ...], origin: str) -> tuple[FloatArray, FloatArray, tuple[str, ...]]:
    """Return wavelengths [m], rising, and values that are finite and nowhere below zero, and notes of what was repaired."""
    unknown = [name for name in repair if name not in REPAIRS]
    if unknown:
        raise InputError(f"repair: unknown name {unknown[0]!r}; the repairs are {', '.join(REPAIRS)}")
    x, y = np.asarray(_wavelength_si(wavelength, origin), dtype=float), np.asarray(values, dtype=float)
    if x.shape != y.shape or x.ndim != 1 or x.size < 2:
        raise InputError(
            f"{origin}: wavelength and values must be two columns of one length, two rows or more; got {x.shape} and {y.shape}"
        )
    notes: list[str] = []
    x, y, rows = _finite(x, y, repair, origin, notes)
    x, y, rows = _ordered(x, y, rows, repair, origin, notes)
    if np.any(y < 0):
        at, count = int(np.argmin(y)), int(np.sum(y < 0))
        fault = f"{origin}: data row {rows[at]}: value {y[at]:.3g} at {x[at] * 1e6:.6g} um is below zero ({count} such rows)"
        _may(repair, "clip-negative", fault)
        notes.append(f"clip-negative: {count} values set to zero, the lowest {y[at]:.3g}")
        y = np.maximum(y, 0.0)
    x, y = _single(x, y, rows, repair, origin, notes)
    if x.size < 2 or x[0] <= 0 or not np.any(y > 0):
        raise InputError(f"{origin}: a table needs two rows or more, wavelengths above zero and some value above zero")
    return x, y, tuple(notes)


def _read(path: Any, value_unit: Any, wavelength_unit: Any, wavelength_column: Any, value_column: Any, medium: Any) -> Any:
    """Return two columns of a file, wavelengths in vacuum, and notes of what was taken for what."""
    wavelength, values, notes = read_curve(path, wavelength_unit, None, wavelength_column, value_column, medium)
    if value_unit is None:
        return wavelength, values, notes
    if values.unit not in (u.dimensionless_unscaled, u.Unit(value_unit)):
        raise UnitsError(f"{path}: the values are in {values.unit} by the header, but value_unit={value_unit} was stated")
    return wavelength, u.Quantity(values.value, value_unit), notes


def _keep_copies(instance: Any, **arrays: Any) -> None:
    for name, value in arrays.items():
        copied = u.Quantity(value, dtype=float, copy=True) if isinstance(value, u.Quantity) else read_only(value)
        copied.setflags(write=False)
        object.__setattr__(instance, name, copied)


@dataclass(frozen=True, kw_only=True, eq=False)
class WavelengthTable:
    """A fraction that depends on wavelength, joined by straight lines in vacuum wavelength: an emissivity, reflectivity or efficiency.

    Parameters
    ----------
    wavelength : Quantity [vacuum wavelength or frequency], shape (n,)
        Rising or falling.
    values : array_like or Quantity, shape (n,)
        From 0 to 1, or a Quantity in percent.
    origin : str
        Where the table is from, for messages.
    notes : tuple of str
        What was taken for what when a file was read.

    Raises
    ------
    InputError, UnitsError
        A fault of the table, with its row; a value that is no fraction; later, a wavelength outside the table, which is never
        extrapolated.

    Examples
    --------
    >>> import astropy.units as u
    >>> tungsten_like = WavelengthTable(wavelength=[1.0, 2.0] * u.um, values=[0.4, 0.3])
    >>> print(tungsten_like.at(1.5 * u.um).round(3))
    0.35
    """

    wavelength: u.Quantity
    values: Any
    origin: str = "table"
    notes: tuple[str, ...] = ()
    points: tuple[FloatArray, FloatArray] = field(init=False, repr=False)

    def __post_init__(self) -> None:
        try:
            fractions = u.Quantity(self.values, dtype=float).to_value(u.dimensionless_unscaled)
        except u.UnitConversionError:
            raise UnitsError(f"{self.origin}: values must be fractions or percent; got {u.Quantity(self.values).unit}") from None
        x, y, _ = _points(self.wavelength, fractions, (), self.origin)
        if np.max(y) > 1:
            row = int(np.argmax(y))
            raise InputError(
                f"{self.origin}: value {y[row]:g} at {x[row] * 1e6:.6g} um is above 1; give fractions, or a Quantity in percent"
            )
        _keep_copies(self, wavelength=self.wavelength, values=self.values)
        object.__setattr__(self, "points", (read_only(x), read_only(y)))

    @classmethod
    def read(
        cls,
        path: Any,
        *,
        wavelength_unit: Any = None,
        value_unit: Any = None,
        wavelength_column: str | int = 0,
        value_column: str | int = 1,
        medium: str | None = None,
    ) -> WavelengthTable:
        """Read a table as `spectra.read_filter` does. Values without a unit are fractions."""
        wavelength, values, notes = _read(path, value_unit, wavelength_unit, wavelength_column, value_column, medium)
        return cls(wavelength=wavelength, values=values, origin=str(path), notes=notes)

    def at(self, where: Any) -> FloatArray:
        """Value at a vacuum wavelength or frequency (Quantity of any shape)."""
        return self.at_si(np.asarray(as_frequency_si(where, "where"), dtype=float))

    def at_si(self, frequency: Any) -> FloatArray:
        """Value at `frequency` [Hz]; outside the table an error."""
        x, y = self.points
        wavelength = SPEED_OF_LIGHT / np.asarray(frequency, dtype=float)
        _inside(wavelength, x[0], x[-1], self.origin)
        return np.asarray(np.interp(wavelength, x, y))

    @property
    def breakpoints_si(self) -> FloatArray:
        """Frequencies of the tabulated points [Hz]."""
        return SPEED_OF_LIGHT / self.points[0][::-1]


def _inside(wavelength: FloatArray, low: float, high: float, origin: str) -> None:
    """Refuse wavelengths [m] outside a table."""
    if not wavelength.size:
        return
    least, most = float(np.min(wavelength)), float(np.max(wavelength))
    if least < low * (1 - _EDGE) or most > high * (1 + _EDGE):
        asked = least if least < low * (1 - _EDGE) else most
        raise InputError(
            f"{origin}: the table goes from {low * 1e6:.6g} to {high * 1e6:.6g} um, but light at {asked * 1e6:.6g} um was asked for; "
            "limit the light with a filter, or extend the table"
        )


@dataclass(frozen=True, kw_only=True, eq=False)
class TabulatedSource(SourceShape):
    """A measured source, joined by straight lines in vacuum wavelength and converted to photon rate per hertz.

    With lambda the wavelength, dlambda = lambda^2 dnu / c and a photon of energy h c / lambda, the photon rate per hertz goes as
    the table times lambda^2 (photons per wavelength), 1 (photons per hertz), lambda^3 (power per wavelength) or lambda (power per
    hertz).

    Parameters
    ----------
    wavelength : Quantity [vacuum wavelength or frequency], shape (n,)
    values : array_like or Quantity, shape (n,)
        What was measured, on a relative scale: of a Quantity the numbers count.
    quantity : str
        ``"photons"`` or ``"power"``; has no default, for the two differ by the slope of a band.
    per : str
        ``"wavelength"`` or ``"hertz"``; has no default, for the same reason.
    repair : tuple of str
        Which of `REPAIRS` may be made.
    origin : str
        Where the table is from, for messages.
    notes : tuple of str
        What was taken for what when a file was read, and what was repaired.

    Raises
    ------
    InputError, UnitsError
        A fault of the table, with its row and repair; an energy unit stated as photons, or the reverse; later, light asked for
        beyond an end at which the table is still above 1 % of its peak.

    Notes
    -----
    Rates are scaled to the table's numbers at the middle of its range. The photon rate is what a counting detector sees; for the
    power-weighted degree of coherence ask for ``weight="power"`` there.

    Examples
    --------
    >>> import astropy.units as u
    >>> lamp = TabulatedSource(wavelength=[1.5, 1.6, 1.7] * u.um, values=[0, 1, 0], quantity="power", per="wavelength")
    >>> (lamp.rate_si(lamp.breakpoints_si)).round(3)
    array([0., 1., 0.])
    """

    shape: ClassVar[str] = "table"
    wavelength: u.Quantity
    values: Any
    quantity: str
    per: str
    repair: tuple[str, ...] | str = ()
    origin: str = "table"
    notes: tuple[str, ...] = ()
    points: tuple[FloatArray, FloatArray] = field(init=False, repr=False)

    lines = ()

    def __post_init__(self) -> None:
        if self.quantity not in ("photons", "power"):
            raise InputError(f'{self.origin}: quantity must be "photons" or "power"; got {self.quantity!r}')
        if self.per not in ("wavelength", "hertz"):
            raise InputError(f'{self.origin}: per must be "wavelength" or "hertz"; got {self.per!r}')
        values = u.Quantity(self.values, dtype=float)
        self._check_unit(values.unit)
        names = (self.repair,) if isinstance(self.repair, str) else tuple(self.repair)
        x, y, notes = _points(self.wavelength, values.value, names, self.origin)
        _keep_copies(self, wavelength=self.wavelength, values=self.values)
        for name, value in (("repair", names), ("points", (read_only(x), read_only(y))), ("notes", (*self.notes, *notes))):
            object.__setattr__(self, name, value)

    def _check_unit(self, unit: u.UnitBase) -> None:
        """Refuse an energy that is called photons, and photons that are called power."""
        energy = u.kg in unit.decompose().bases
        if unit != u.dimensionless_unscaled and energy != (self.quantity == "power"):
            raise UnitsError(
                f"{self.origin}: values in {unit} are {'power' if energy else 'photons'}, not {self.quantity}; correct quantity="
            )

    @classmethod
    def read(
        cls,
        path: Any,
        *,
        quantity: str,
        per: str,
        wavelength_unit: Any = None,
        value_unit: Any = None,
        wavelength_column: str | int = 0,
        value_column: str | int = 1,
        medium: str | None = None,
        repair: tuple[str, ...] | str = (),
    ) -> TabulatedSource:
        """Read a table as `spectra.read_filter` does, and say what its values are."""
        wavelength, values, notes = _read(path, value_unit, wavelength_unit, wavelength_column, value_column, medium)
        return cls(wavelength=wavelength, values=values, quantity=quantity, per=per, repair=repair, origin=str(path), notes=notes)

    @cached_property
    def _ends(self) -> tuple[float, float]:
        """Wavelengths [m] beyond which there is no light; 0 and infinity where the table does not end near zero."""
        x, y = self.points
        dark = NEAR_ZERO * float(np.max(y))
        return (float(x[0]) if y[0] <= dark else 0.0), (float(x[-1]) if y[-1] <= dark else np.inf)

    @property
    def support_si(self) -> tuple[float, float]:
        """Frequencies of the table's ends [Hz]; 0 or infinity beyond an end that is not near zero, where asking is an error."""
        short, long = self._ends
        return SPEED_OF_LIGHT / long, SPEED_OF_LIGHT / short if short else np.inf

    @cached_property
    def breakpoints_si(self) -> FloatArray:
        """Frequencies of the tabulated points [Hz]."""
        return SPEED_OF_LIGHT / self.points[0][::-1]

    def rate_si(self, frequency: FloatArray) -> FloatArray:
        """Relative photon rate per hertz at `frequency` [Hz]."""
        x, y = self.points
        wavelength = SPEED_OF_LIGHT / np.asarray(frequency, dtype=float)
        short, long = self._ends
        lit = wavelength[(wavelength >= short) & (wavelength <= long)]
        _inside(lit, x[0], x[-1], self.origin)
        power = (2 if self.per == "wavelength" else 0) + (1 if self.quantity == "power" else 0)
        return np.asarray(np.interp(wavelength, x, y, left=0.0, right=0.0) * (wavelength / (0.5 * (x[0] + x[-1]))) ** power)


__all__ = ["TabulatedSource", "WavelengthTable"]
