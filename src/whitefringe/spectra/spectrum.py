"""`Spectrum`: the photon rate per hertz that reaches a detector, as cells on a uniform grid plus analytic lines."""

from __future__ import annotations

import warnings
from collections.abc import Callable, Iterable
from dataclasses import dataclass, field, replace
from functools import cached_property
from typing import Any

import astropy.units as u
import numpy as np

from ..errors import InputError, ResolutionWarning
from ..units import SPEED_OF_LIGHT, FloatArray, as_frequency_si, as_si, read_only
from ._cells import cell_means
from .filters import Filter
from .lines import Line
from .sources import Source

SAMPLES = 8192
"""Default number of cells of a continuum."""

CELLS_PER_PERIOD = 12
"""A ripple needs so many cells per period for its ghosts to be right to 0.2 %."""


@dataclass(frozen=True, kw_only=True, eq=False)
class Spectrum:
    """Light as a detector counts it.

    Parameters
    ----------
    start : Quantity [Hz]
        Lower edge of the first cell.
    step : Quantity [Hz]
        Width of a cell.
    density : array_like, shape (n,)
        Mean relative photon rate per hertz in each cell; n = 0 for light of lines only, else at least 4.
    lines : tuple of Line
        Lines on top of the continuum; a strength counts like an integral of `density` over hertz.
    weight : str
        ``"photon"``: rates of photons, as detectors count them; ``"power"``: rates of energy (see `power_weighted`).
    description : str

    Notes
    -----
    The continuum is taken to be linear inside each cell, with the slope that the neighbouring means give, and to end sharply at
    the outermost edges.
    """

    start: u.Quantity = 1.0 * u.Hz
    step: u.Quantity = 1.0 * u.Hz
    density: Any = field(default=(), repr=False)
    lines: tuple[Line, ...] = ()
    weight: str = "photon"
    description: str = ""

    def __post_init__(self) -> None:
        density = read_only(self.density)
        object.__setattr__(self, "density", density)
        object.__setattr__(self, "lines", tuple(self.lines))
        if density.ndim != 1 or 0 < density.size < 4:
            raise InputError(f"density must be one row of at least 4 cells (or none); got shape {density.shape}")
        if not np.all(np.isfinite(density)) or np.any(density < 0):
            raise InputError("density must be finite and nowhere below zero")
        if self.weight not in ("photon", "power"):
            raise InputError(f'weight must be "photon" or "power"; got {self.weight!r}')
        if self.start_si <= 0 and density.size:
            raise InputError(f"start must be above zero; got {self.start}")
        if self.step_si <= 0:
            raise InputError(f"step must be above zero; got {self.step}")
        if not self.total_rate > 0:
            raise InputError("no light: the continuum and the lines are all zero")

    @classmethod
    def from_function(
        cls,
        function: Callable[[FloatArray], FloatArray],
        support: tuple[float, float],
        *,
        breakpoints: Any = (),
        samples: int = SAMPLES,
        **others: Any,
    ) -> Spectrum:
        """Build a continuum from a function of frequency [Hz] between two frequencies [Hz].

        `breakpoints` [Hz] are where its slope jumps; means over cells are exact across them.
        """
        if samples < 4:
            raise InputError(f"samples must be at least 4; got {samples}")
        low, high = support
        means = cell_means(function, low, high, samples, np.asarray(breakpoints, dtype=float))
        return cls(start=low * u.Hz, step=(high - low) / samples * u.Hz, density=means, **others)

    @classmethod
    def from_samples(cls, frequency: Any, density: Any, **others: Any) -> Spectrum:
        """Build a continuum from densities at the centres of equal cells.

        Parameters
        ----------
        frequency : Quantity [Hz], shape (n,)
            Rising and equally spaced to 1e-6 of a step.
        density : array_like, shape (n,)
        """
        points = np.asarray(as_si(frequency, u.Hz, "frequency", "THz"))
        if points.ndim != 1 or points.size < 4 or np.any(np.diff(points) <= 0):
            raise InputError("frequency must be one row of at least 4 rising values")
        if np.shape(density) != points.shape:
            raise InputError(f"density must have one value per frequency; got shapes {np.shape(density)} and {points.shape}")
        steps = np.diff(points)
        step = (points[-1] - points[0]) / (points.size - 1)
        if np.max(np.abs(steps - step)) > 1e-6 * step:
            raise InputError("frequency must be equally spaced; use spectra.Tabulated for a table that is not")
        return cls(start=(points[0] - step / 2) * u.Hz, step=step * u.Hz, density=density, **others)

    @cached_property
    def start_si(self) -> float:
        """Lower edge of the first cell [Hz]."""
        return float(as_si(self.start, u.Hz, "start"))

    @cached_property
    def step_si(self) -> float:
        """Width of a cell [Hz]."""
        return float(as_si(self.step, u.Hz, "step"))

    @cached_property
    def frequency_si(self) -> FloatArray:
        """Centres of the cells [Hz], shape (n,)."""
        return read_only(self.start_si + (np.arange(self.density.size) + 0.5) * self.step_si)

    @property
    def frequency(self) -> u.Quantity:
        """Centres of the cells, shape (n,)."""
        return self.frequency_si * u.Hz

    @property
    def wavelength(self) -> u.Quantity:
        """Vacuum wavelengths of the cell centres, shape (n,), falling."""
        return (SPEED_OF_LIGHT / self.frequency_si * u.m).to(u.um)

    @cached_property
    def extent_si(self) -> tuple[float, float]:
        """Lowest and highest frequency [Hz] of the continuum and the line centres."""
        ends = [line.frequency_si for line in self.lines if line.strength > 0]
        if self.density.size:
            ends += [self.start_si, self.start_si + self.step_si * self.density.size]
        return min(ends), max(ends)

    @cached_property
    def continuum_rate(self) -> float:
        """Integral of the continuum over hertz."""
        return float(np.sum(self.density) * self.step_si) if self.density.size else 0.0

    @cached_property
    def total_rate(self) -> float:
        """Integral of continuum and lines over hertz."""
        return self.continuum_rate + float(sum(line.strength for line in self.lines))

    @cached_property
    def slopes(self) -> FloatArray:
        """Change of the density across each cell: central differences, second-order one-sided ones at the two ends.

        Limited to twice the density, so that no piece falls below zero.
        """
        free = np.gradient(self.density, edge_order=2) if self.density.size else np.empty(0)
        return read_only(np.clip(free, -2 * self.density, 2 * self.density))

    @cached_property
    def slopes_are_central(self) -> bool:
        """Whether every inner slope is the central difference, none limited."""
        return bool(np.array_equal(self.slopes[1:-1], 0.5 * (self.density[2:] - self.density[:-2])))

    def density_at(self, frequency: Any) -> FloatArray:
        """Continuum density at a frequency or wavelength (Quantity); zero outside the grid. Lines are left out."""
        return self.density_si(np.asarray(as_frequency_si(frequency, "frequency"), dtype=float))

    def density_si(self, frequency: FloatArray) -> FloatArray:
        """Continuum density at `frequency` [Hz]: the linear piece of the cell that it falls in."""
        if not self.density.size:
            return np.zeros_like(frequency)
        position = (frequency - self.start_si) / self.step_si
        cell = np.clip(position.astype(int), 0, self.density.size - 1)
        value = self.density[cell] + self.slopes[cell] * (position - cell - 0.5)
        return np.where((position >= 0) & (position <= self.density.size), np.maximum(value, 0.0), 0.0)

    def through(self, *filters: Filter, samples: int | None = None) -> Spectrum:
        """Return the light that is left after the filters, on a grid that ends where they end."""
        edges = self.start_si + self.step_si * np.arange(self.density.size + 1)
        continuum = (edges[0], edges[-1]) if self.density.size else (0.0, 0.0)
        return _compose(
            self.density_si, continuum, [edges], self.lines, filters, max(self.density.size, 4) if samples is None else samples, self.weight
        )

    def power_weighted(self) -> Spectrum:
        """Return the same light weighted by energy instead of photons: times nu over the mean frequency.

        Gives the classical degree of coherence, in which S is a power spectrum (Mandel & Wolf, sec. 4.3).
        """
        if self.weight == "power":
            return self
        scale = 0.5 * sum(self.extent_si)
        lines = tuple(replace(line, strength=line.strength * line.frequency_si / scale) for line in self.lines)
        return replace(self, density=self.density * self.frequency_si / scale, lines=lines, weight="power")


def detected(source: Source, *filters: Filter, samples: int = SAMPLES) -> Spectrum:
    """Return the spectrum that a photon-counting detector sees: source times every filter.

    Parameters
    ----------
    source : Source
        A member of `SOURCE_SHAPES`, or a sum of them.
    *filters : Filter
        Members of `FILTER_SHAPES` and `TRAIN_SHAPES`; any number, all multiplied.
    samples : int
        Cells of the continuum, spread over the band that all filters share.

    Returns
    -------
    Spectrum

    Raises
    ------
    InputError
        No filter bounds the light, the filters share no band, or nothing is left.

    Warns
    -----
    ResolutionWarning
        The filters' transmission changes by more than 1 % across a line, whose shape then would change; or a source's ripple is too
        fine for the grid.

    Examples
    --------
    >>> import astropy.units as u
    >>> from whitefringe import spectra
    >>> light = spectra.detected(spectra.Flat(), spectra.TopHat(centre=1.65 * u.um, width=0.3 * u.um))
    >>> print(spectra.mean_wavelength(light))
    1.63636 um (c / mean frequency, photon-weighted)
    """
    for position, item in enumerate(filters):
        if not isinstance(item, Filter) or isinstance(item, type):
            raise InputError(f"filters must be filter shapes such as spectra.TopHat; number {position + 1} is {item!r}")
    if not isinstance(source, Source) or isinstance(source, type):
        raise InputError(f"source must be one such as spectra.Thermal; got {source!r}")
    kinks = [np.asarray(source.breakpoints_si)]
    light = _compose(source.rate_si, source.support_si, kinks, source.lines, filters, samples, "photon")
    _warn_if_too_fine(float(getattr(source, "finest_si", np.inf)), light)
    return light


def _warn_if_too_fine(period: float, light: Spectrum) -> None:
    """Warn where a ripple of the source is finer than the grid shows."""
    if light.density.size and period < CELLS_PER_PERIOD * light.step_si:
        enough = int(np.ceil(light.density.size * CELLS_PER_PERIOD * light.step_si / period))
        warnings.warn(
            f"the source's ripple has {period / light.step_si:.3g} cells per period, fewer than {CELLS_PER_PERIOD}, and its ghosts come "
            f"out too low: ask for samples={enough} or more",
            ResolutionWarning,
            stacklevel=3,
        )


def _compose(
    rate: Callable[[FloatArray], FloatArray],
    support: tuple[float, float],
    kinks: list[FloatArray],
    lines: Iterable[Line],
    filters: tuple[Filter, ...],
    samples: int,
    weight: str,
) -> Spectrum:
    left = tuple(line for line in (_line_through(line, filters) for line in lines) if line.strength > 0)
    low = max([support[0], *(item.support_si[0] for item in filters)])
    high = min([support[1], *(item.support_si[1] for item in filters)])
    if support[0] == support[1]:
        if not left:
            raise InputError("no light is left: the filters pass none of the lines")
        return Spectrum(lines=left, weight=weight)
    if not np.isfinite(high):
        raise InputError("nothing bounds the light: give at least one filter, or a source that ends")
    if not low < high and left:
        return Spectrum(lines=left, weight=weight)
    if not low < high:
        raise InputError("no light is left: source and filters have no common band")

    def product(frequency: FloatArray) -> FloatArray:
        value = rate(frequency)
        for item in filters:
            value = value * item.transmission_si(frequency)
        return value

    breakpoints = np.concatenate([*kinks, *(np.asarray(item.breakpoints_si) for item in filters)])
    low = max(low, high * 1e-9)  # a source may start at zero frequency, a grid may not
    return Spectrum.from_function(product, (low, high), breakpoints=breakpoints, samples=samples, lines=left, weight=weight)


def _line_through(line: Line, filters: tuple[Filter, ...]) -> Line:
    """Weaken a line by the filters' transmission at its centre; warn where that is not the whole story."""
    half = 0.5 * line.fwhm_si
    points = line.frequency_si + np.array([0.0, -half, half])
    ends = [item.support_si for item in filters]
    low, high = max((end[0] for end in ends), default=0.0), min((end[1] for end in ends), default=np.inf)
    inside = (points >= low) & (points <= high)
    if not np.any(inside):
        return replace(line, strength=0.0)
    # one filter's table need not reach what another stops: no filter is asked outside the band that all share
    passed = inside.astype(float)
    for item in filters:
        passed = passed * item.transmission_si(np.clip(points, low, high))
    if np.ptp(passed) > 0.01 * np.max(passed):
        warnings.warn(
            f"the filters' transmission changes by {np.ptp(passed) / np.max(passed):.1%} across the line at "
            f"{SPEED_OF_LIGHT / line.frequency_si * 1e9:.6g} nm; only its strength is changed, not its shape",
            ResolutionWarning,
            stacklevel=4,
        )
    return replace(line, strength=line.strength * float(passed[0]))
