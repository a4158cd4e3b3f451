"""Glasses and crystals by Sellmeier's formula: packaged ones, and a user's own from a row of a table."""

from __future__ import annotations

from dataclasses import dataclass, replace
from functools import cache, cached_property
from pathlib import Path
from typing import TYPE_CHECKING, Any, ClassVar, Self

import astropy.units as u
import numpy as np

from ..errors import FileContentError, InputError, UnitsError
from ..io import read_packaged, read_table
from ..units import FloatArray, as_si, frozen_quantities, read_only
from ._derivatives import composed, poles, polynomial, product, rescaled, root_of_one_plus, times_wavenumber
from .air import PER_MICROMETRE, Ciddor1996
from .medium import Medium, Range, one_temperature_si
from .thermal import ThermalCoefficients, packaged_coefficients

if TYPE_CHECKING:
    from astropy.table import Row, Table

FORMS = ("length", "length squared")
REFERENCES = ("air", "vacuum")
TEXT_COLUMNS = ("name", "form", "relative_to", "source", "tag")
TERMS = 4
NEEDED = ("name", "form", "b1", "c1", "low", "high", "temperature", "relative_to", "source")


@dataclass(frozen=True, kw_only=True, eq=False)
class Glass(Medium):
    """A glass or crystal: n^2 - 1 = sum over j of b_j L^2 / (L^2 - c_j), L the wavelength.

    Parameters
    ----------
    name : str
    strengths : array_like, shape (k,)
        b_j.
    resonances : Quantity [length or area], shape (k,)
        The c_j as an area, or their square roots as lengths.
    low, high : Quantity [wavelength]
        Range of the formula.
    temperature : Quantity [K or deg_C]
        For which the formula is stated.
    relative_to : str
        ``"air"``: the formula gives the index relative to air of 101 325 Pa at that temperature, for wavelengths in that air (catalogues do
        so); it is turned into the absolute index for vacuum wavelengths. ``"vacuum"``: it is absolute.
    now : Quantity [K or deg_C], optional
        Temperature of the piece; needs `thermal` coefficients unless it is the stated one.
    thermal : ThermalCoefficients, optional
    source : str
    extrapolate : bool

    Notes
    -----
    Absolute from relative: n(sigma) = n_rel(n_air sigma) n_air, with air after Ciddor 1996 (dry, 450 ppm CO2). Beyond 1.7 um that
    air's formula is used on; it stays within 6e-8 of Mathar 2007 up to 14 um, far below what a glass formula vouches for (1e-5).

    References
    ----------
    Malitson, JOSA 55, 1205 (1965), doi:10.1364/JOSA.55.001205 (the formula); each packaged glass names its own source.

    Examples
    --------
    >>> import astropy.units as u
    >>> silica = Glass.named("fused silica")
    >>> print(f"{silica.refractive_index(1.55 * u.um):.6f} {silica.group_index(1.55 * u.um):.6f}")
    1.444416 1.462988
    >>> print(f"{silica.in_catalogue_terms.refractive_index(1.55 * u.um):.8f}")
    1.44402362
    """

    name: str
    strengths: Any
    resonances: u.Quantity
    low: u.Quantity
    high: u.Quantity
    temperature: u.Quantity = 20 * u.deg_C
    relative_to: str = "vacuum"
    now: u.Quantity | None = None
    thermal: ThermalCoefficients | None = None
    source: str = ""
    extrapolate: bool = False
    shape: ClassVar[str] = "glass"

    def __post_init__(self) -> None:
        frozen_quantities(self)
        object.__setattr__(self, "strengths", read_only(self.strengths))
        squares = self._squares
        if self.strengths.ndim != 1 or not self.strengths.size or self.strengths.shape != squares.shape:
            raise InputError(
                f"{self.name}: strengths and resonances must be two rows of the same length; got shapes {np.shape(self.strengths)} and "
                f"{np.shape(squares)}"
            )
        if not np.all(np.isfinite(self.strengths)):
            raise InputError(f"{self.name}: strengths must be finite; got {self.strengths}")
        if self.relative_to not in REFERENCES:
            raise InputError(f'{self.name}: relative_to must be "air" or "vacuum"; got {self.relative_to!r}')
        if not 0 < self._ends[0] < self._ends[1]:
            raise InputError(f"{self.name}: low must be above zero and below high; got {self.low} and {self.high}")
        if np.any((squares > self._ends[0] ** 2) & (squares < self._ends[1] ** 2)):
            raise InputError(f"{self.name}: a resonance lies within {self.low} to {self.high}, where the formula would have no index")
        self._check_index()
        self._check_temperature()

    def _check_index(self) -> None:
        at = np.linspace(*self._ends, 101)
        with np.errstate(all="ignore"):
            n = self._sellmeier(1 / at)[0]
        bad = ~(np.isfinite(n) & (n > 0))
        if np.any(bad):
            raise InputError(f"{self.name}: the formula gives no real index at {at[bad][0]:.4g} um, within its own range")

    def _check_temperature(self) -> None:
        change = self._warmer
        if change and self.thermal is None:
            raise InputError(
                f"{self.name}: it has no temperature coefficients, so only its own temperature will do, {self.temperature}; got {self.now}"
            )
        words = self.thermal.outside(one_temperature_si(self.now, "now") - 273.15) if change and self.thermal is not None else ""
        if words and not self.extrapolate:
            raise InputError(f"{self.name}: {words}; say extrapolate=True to have the result flagged")

    @classmethod
    def named(cls, name: str, table: str | Path | None = None) -> Glass:
        """Return a packaged glass, or one of a user's table; see `read_glasses`.

        Raises
        ------
        InputError
            Unknown name; the message lists the known ones.
        """
        if not isinstance(name, str):
            raise InputError(f'a glass is chosen by its name, such as "fused silica"; got {name!r}')
        known = packaged_glasses() if table is None else read_glasses(table)
        for glass in known:
            if glass.name.casefold() == name.strip().casefold():
                return glass
        raise InputError(f"no glass is named {name!r}; there are {', '.join(glass.name for glass in known)}")

    @property
    def in_catalogue_terms(self) -> Self:
        """The same formula without the change from relative to absolute: index and wavelengths as its source prints them."""
        return replace(self, relative_to="vacuum")

    def under(self, *, temperature: Any = None, pressure: Any = None, humidity: Any = None) -> Self:
        """Return the glass at another temperature; pressure and humidity do not act on it."""
        super().under(pressure=pressure, humidity=humidity)
        return self if temperature is None else replace(self, now=temperature)

    @property
    def feels_temperature(self) -> bool:
        """With temperature coefficients."""
        return self.thermal is not None

    @property
    def wavelengths(self) -> Range:  # type: ignore[override]
        """Range of the formula."""
        low, high = self._ends
        return Range(name="wavelength", low=low, high=high, unit="um", source=self.source or "as given")

    @cached_property
    def _ends(self) -> tuple[float, float]:
        return float(as_si(self.low, u.um, "low")), float(as_si(self.high, u.um, "high"))

    @cached_property
    def _squares(self) -> FloatArray:
        """c_j [um^2]."""
        given = u.Quantity(self.resonances)
        if given.unit.is_equivalent(u.um):
            return np.asarray(as_si(given, u.um, "resonances") ** 2)
        if given.unit.is_equivalent(u.um**2):
            return np.asarray(as_si(given, u.um**2, "resonances"))
        raise UnitsError(f"{self.name}: resonances must be lengths or areas, for example [0.07, 0.1, 9.9] * u.um; got {given.unit}")

    @property
    def _warmer(self) -> float:
        """Kelvin above the formula's own temperature."""
        return 0.0 if self.now is None else one_temperature_si(self.now, "now") - one_temperature_si(self.temperature)

    def _condition_flags(self) -> tuple[str, ...]:
        words = self.thermal.outside(one_temperature_si(self.now, "now") - 273.15) if self._warmer and self.thermal is not None else ""
        return (f"{self.name} extrapolated: {words}",) if words else ()

    def refractivity_si(self, wavenumber: FloatArray) -> FloatArray:
        """Refractivity n - 1 and the derivatives of n with vacuum wavenumber [1/m], shape (4, ...)."""
        sigma = np.asarray(wavenumber, dtype=float)
        s = sigma * PER_MICROMETRE
        relative, air = self._relative_and_air(s) if self.relative_to == "air" else (self._sellmeier(s), None)
        index = relative if air is None else product(relative, air)
        if self._warmer and self.thermal is not None:
            index = index + self.thermal.change(relative, s, self._warmer)
        return rescaled(_less_one(index), PER_MICROMETRE)

    def _sellmeier(self, s: FloatArray) -> FloatArray:
        """n, from n^2 - 1 = sum of (b / c) / (1 / c - s^2); a term without resonance (c = 0) is the constant b."""
        bound = self._squares != 0
        b, c = self.strengths[bound], self._squares[bound]
        square = poles(s, b / c, 1 / c) + polynomial(s, [np.sum(self.strengths[~bound])])
        return _plus_one(root_of_one_plus(square))

    def _relative_and_air(self, s: FloatArray) -> tuple[FloatArray, FloatArray]:
        """Index relative to air, at the wavelengths that the vacuum wavenumbers have in air, and index of that air."""
        air = _plus_one(rescaled(self._reference_air.refractivity_si(s / PER_MICROMETRE), 1 / PER_MICROMETRE))
        inside = times_wavenumber(air, s)
        return composed(self._sellmeier(inside[0]), inside), air

    @cached_property
    def _reference_air(self) -> Ciddor1996:
        return Ciddor1996(temperature=self.temperature, pressure=101325 * u.Pa, extrapolate=True)


def _plus_one(index: FloatArray) -> FloatArray:
    return np.concatenate([index[:1] + 1.0, index[1:]])


def _less_one(index: FloatArray) -> FloatArray:
    return np.concatenate([index[:1] - 1.0, index[1:]])


@cache
def packaged_glasses() -> tuple[Glass, ...]:
    """Return the packaged glasses, each with its source; N-BK7 with its temperature coefficients."""
    glasses = _glasses(read_packaged("glasses.ecsv"), "glasses.ecsv")
    return tuple(replace(glass, thermal=packaged_coefficients(glass.name)) for glass in glasses)


def read_glasses(path: str | Path) -> tuple[Glass, ...]:
    """Read a user's glasses, one per row.

    Parameters
    ----------
    path : path
        A table (ECSV, or CSV with units in the names) with the columns name, form (``length`` or ``length squared``), b1, c1, ... b4, c4
        (those beyond the first may be left out or zero), low, high [wavelength], temperature, relative_to (``air`` or ``vacuum``), source.

    Raises
    ------
    FileContentError
        A column is missing, or a row does not make a glass; the message names file, row and column.
    """
    return _glasses(read_table(path, text=TEXT_COLUMNS), str(path))


def _glasses(table: Table, origin: str) -> tuple[Glass, ...]:
    missing = [name for name in NEEDED if name not in table.colnames]
    if missing:
        raise FileContentError(f"{origin}: column {missing[0]!r} is missing; a table of glasses has {', '.join(NEEDED)}")
    for name, unit in (("low", u.um), ("high", u.um), ("temperature", u.deg_C)):
        if table[name].unit is None or not table[name].unit.is_equivalent(unit, equivalencies=u.temperature()):
            raise FileContentError(f"{origin}: column {name!r} must have a unit such as {unit}; got {table[name].unit}")
    found = []
    for number, row in enumerate(table, start=1):
        try:
            found.append(_glass(table, row))
        except InputError as error:
            raise FileContentError(f"{origin}: data row {number}: {error}") from None
    return tuple(found)


def _glass(table: Table, row: Row) -> Glass:
    if str(row["form"]) not in FORMS:
        raise InputError(f'column form: must be "length" or "length squared"; got {str(row["form"])!r}')
    names = [k for k in range(1, TERMS + 1) if f"b{k}" in table.colnames and float(row[f"b{k}"]) != 0]
    alone = [k for k in names if f"c{k}" not in table.colnames]
    if alone:
        raise InputError(f"column b{alone[0]}: there is no column c{alone[0]} to go with it")
    unit = u.um if str(row["form"]) == "length" else u.um**2
    return Glass(
        name=str(row["name"]),
        strengths=[float(row[f"b{k}"]) for k in names],
        resonances=[float(row[f"c{k}"]) for k in names] * unit,
        low=float(row["low"]) * table["low"].unit,
        high=float(row["high"]) * table["high"].unit,
        temperature=float(row["temperature"]) * table["temperature"].unit,
        relative_to=str(row["relative_to"]),
        source=str(row["source"]),
    )
