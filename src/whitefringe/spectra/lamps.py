"""Lamps of known elements: packaged line lists, with the widths that temperature, lifetime and pressure give."""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import dataclass
from functools import cache, cached_property
from typing import TYPE_CHECKING, Any, ClassVar

import astropy.units as u
import numpy as np

from ..errors import InputError, UnitsError
from ..io import read_packaged
from ..units import SPEED_OF_LIGHT, one_frequency_si, positive_si
from ._source import LineSource
from .lines import Line, width_si
from .widths import doppler_fwhm_si, natural_fwhm_si

if TYPE_CHECKING:
    from astropy.table import Table

LAMPS = ("cadmium", "krypton", "mercury", "neon", "sodium")
"""Elements whose lines are packaged."""

_NEAR = 0.3
"""A line is chosen by a wavelength within this distance [nm], so that its air wavelength does as well."""


@cache
def _packaged(name: str) -> Any:
    return read_packaged(f"lamp_{name}.ecsv")


@cache
def _index() -> dict[str, Any]:
    return {str(row["element"]): row for row in read_packaged("INDEX.ecsv")}


@dataclass(frozen=True, kw_only=True)
class Lamp(LineSource):
    """A spectral lamp of one element: the main visible and near-infrared lines of its neutral atom.

    Parameters
    ----------
    name : str
        One of `LAMPS`.
    only : Quantity or tuple of Quantity [wavelength or frequency], optional
        Which of the lines: the one nearest to each wavelength, which must lie within 0.3 nm (so an air wavelength will do).
    strengths : tuple of float, optional
        Photon rates of the lines in order of wavelength, one for each. By default the table's, which are nominal: relative
        intensities as catalogues give them, good to a factor of several at best, and not the same in any two lamps.
    temperature : Quantity [K], optional
        Of the gas, for a Gaussian (Doppler) width.
    mass : Quantity [mass], optional
        Of one atom, for the Doppler width; by default the element's mean atomic mass. A lamp of one isotope has another.
    lifetime : Quantity [time], optional
        Of the upper level, for a Lorentzian (natural) width; the same for all lines.
    pressure_width : Quantity [frequency or wavelength], optional
        Full width of a Lorentzian that collisions add (see `spectra.pressure_fwhm`), the same for all lines.

    Attributes
    ----------
    table : Table
        The packaged lines that were chosen, with air and vacuum wavelength, strength, source and tag.

    Raises
    ------
    InputError, UnitsError
        An element without a list, a wavelength without a line near it or twice the same line, a wrong number of strengths, a
        width that is not above zero.

    Notes
    -----
    Without a width, lines are monochromatic. Isotopes, hyperfine structure and self-absorption, which make real lines wider and
    less simple, are left out. Vacuum wavelengths count. Strengths are photon rates; ``Spectrum.power_weighted`` weights by energy.

    References
    ----------
    Line lists: see the column ``source`` of `table`. Widths: Demtroeder, Laser Spectroscopy 1, 5th ed., ch. 3.

    Examples
    --------
    >>> import astropy.units as u
    >>> green = Lamp.named("mercury", only=546.1 * u.nm, temperature=300 * u.K, mass=197.96677 * u.u)
    >>> print(green.table["vacuum"][0], round(green.lines[0].fwhm_si / 1e6, 1))
    546.22675 483.9
    """

    shape: ClassVar[str] = "lamp"
    name: str
    only: u.Quantity | tuple[u.Quantity, ...] | None = None
    strengths: tuple[float, ...] | None = None
    temperature: u.Quantity | None = None
    mass: u.Quantity | None = None
    lifetime: u.Quantity | None = None
    pressure_width: u.Quantity | None = None

    def __post_init__(self) -> None:
        if self.name not in LAMPS:
            raise InputError(f"name must be one of {', '.join(LAMPS)}; got {self.name!r}; for other lamps use spectra.Lines")
        if self.mass is not None and self.temperature is None:
            raise InputError("mass is for the Doppler width, which needs a temperature as well")
        if self.only is not None:
            object.__setattr__(self, "only", _listed(self.only))
        if self.strengths is not None:
            object.__setattr__(self, "strengths", tuple(float(value) for value in self.strengths))
        _ = self.lines

    @classmethod
    def named(cls, name: str, **options: Any) -> Lamp:
        """Return the lamp of an element of `LAMPS`; options as for `Lamp`."""
        return cls(name=name, **options)

    @cached_property
    def _rows(self) -> list[int]:
        """Rows of the packaged list that were chosen, in order of wavelength."""
        listed = np.asarray(_packaged(self.name)["vacuum"], dtype=float)
        if self.only is None:
            return list(range(listed.size))
        chosen: list[int] = []
        for item in self.only:
            asked = SPEED_OF_LIGHT / one_frequency_si(item, "only") * 1e9
            row = int(np.argmin(np.abs(listed - asked)))
            if abs(listed[row] - asked) > _NEAR:
                known = ", ".join(f"{value:.2f}" for value in listed)
                raise InputError(f"only: the {self.name} list has no line within {_NEAR} nm of {asked:.6g} nm; it has {known} nm (vacuum)")
            if row in chosen:
                raise InputError(f"only: the {self.name} line at {listed[row]:.6g} nm is asked for twice")
            chosen.append(row)
        if not chosen:
            raise InputError("only: give at least one wavelength, or leave it out for all lines")
        return sorted(chosen)

    @property
    def table(self) -> Table:
        """The packaged lines that were chosen, a copy."""
        return _packaged(self.name)[self._rows]

    @cached_property
    def lines(self) -> tuple[Line, ...]:
        """The lines, in order of wavelength."""
        table = self.table
        strengths = [float(value) for value in table["strength"]] if self.strengths is None else list(self.strengths)
        if len(strengths) != len(table):
            raise InputError(f"strengths must be one per line; got {len(strengths)} for {len(table)} lines")
        if not any(value > 0 for value in strengths):
            raise InputError("at least one line needs a strength above zero")
        return tuple(self._line(float(row["vacuum"]), strength) for row, strength in zip(table, strengths, strict=True))

    def _line(self, vacuum: float, strength: float) -> Line:
        centre = SPEED_OF_LIGHT / (vacuum * 1e-9)
        gauss, lorentz = self._doppler(centre), self._lorentzian(centre)
        kept: dict[str, Any] = {"wavelength": vacuum * u.nm, "strength": strength}
        if gauss and lorentz:
            return Line(gaussian_fwhm=gauss * u.Hz, lorentzian_fwhm=lorentz * u.Hz, **kept)
        if gauss or lorentz:
            return Line(fwhm=(gauss or lorentz) * u.Hz, profile="gaussian" if gauss else "lorentzian", **kept)
        return Line(**kept)

    def _doppler(self, centre: float) -> float:
        if self.temperature is None:
            return 0.0
        mass = _index()[self.name]["mass"] * u.u if self.mass is None else self.mass
        return doppler_fwhm_si(centre, positive_si(self.temperature, u.K, "temperature"), positive_si(mass, u.kg, "mass", "u"))

    def _lorentzian(self, centre: float) -> float:
        """Natural and pressure widths add."""
        natural = 0.0 if self.lifetime is None else natural_fwhm_si(positive_si(self.lifetime, u.s, "lifetime", "ns"))
        return natural + (0.0 if self.pressure_width is None else width_si(centre, self.pressure_width, "pressure_width"))


def _listed(only: Any) -> tuple[u.Quantity, ...]:
    """Return one Quantity, an array of them or a sequence of them as a tuple of single ones."""
    items = list(np.atleast_1d(only)) if isinstance(only, u.Quantity) else list(only) if isinstance(only, Iterable) else [only]
    if not all(isinstance(item, u.Quantity) for item in items):
        raise UnitsError(f"only must be one or more wavelengths with a unit, for example [577, 579] * u.nm; got {only!r}")
    return tuple(items)


__all__ = ["LAMPS", "Lamp"]
