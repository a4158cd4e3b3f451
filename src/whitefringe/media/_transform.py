"""The transform of a spectrum whose phase varies: sum over the light of S(nu) exp(-2 pi i [nu tau + cycles(nu)])."""

from __future__ import annotations

import warnings
from collections.abc import Callable
from functools import cached_property

import numpy as np

from ..coherence.degree import ComplexArray, sum_of_turns
from ..errors import ResolutionWarning
from ..spectra import Line, Spectrum
from ..units import SPEED_OF_LIGHT, FloatArray
from .arms import band_si

FEW, MANY = 3, 10
"""Gauss-Legendre points per cell of the spectrum: for delays well inside what the grid resolves, and beyond."""

NEAR = 0.03
"""Delays up to this part of one over the grid's step count as well inside: three points are then right to 1e-10."""

ROUNDING = 3e-9
"""Path differences of 100 m are rounded to 1e-14 m, 2e-9 of a turn over a wide band: so far they still count as equally spaced."""

RESOLVED = 0.5
"""Delays up to this part of one over the grid's step are what the grid resolves."""


class PhasedTransform:
    """Transform of one light after two arms that differ by `cycles` (a function of wavenumber [1/m], shape (4, ...)).

    What is common to the band, the group delay at its mean frequency, is taken out first: phases stay small and exact to 1e-11 of a turn
    whatever the lengths are.
    """

    def __init__(self, light: Spectrum, cycles: Callable[[FloatArray], FloatArray]) -> None:
        self.light = light
        centre = _centre(light) / SPEED_OF_LIGHT
        phase, slope = cycles(np.asarray(centre))[:2]
        self.group_opd = float(slope)
        self._constant = float(phase - slope * centre)
        self._cycles = cycles
        self._nodes: dict[int, list[tuple[float, ComplexArray]]] = {}
        self._lines = [(line, *self._phase_and_slope(line)) for line in light.lines]

    @cached_property
    def _spread(self) -> float:
        """How far [m] the group delay of the band wanders from that of the mean frequency."""
        ends = np.linspace(*band_si(self.light), 9) / SPEED_OF_LIGHT
        return float(np.max(np.abs(self._cycles(ends)[1] - self.group_opd)))

    def _phase_and_slope(self, line: Line) -> tuple[float, float]:
        phase, slope = self._cycles(np.asarray(line.frequency_si / SPEED_OF_LIGHT))[:2]
        return float(phase), float(slope)

    def __call__(self, opd: FloatArray) -> ComplexArray:
        """Complex degree of coherence at path differences `opd` [m], geometry included."""
        return self.about(np.asarray(opd, dtype=float) + self.group_opd)

    def about(self, offset: FloatArray) -> ComplexArray:
        """Like calling it, at path differences [m] from where the mean frequency's group delay is balanced."""
        flat = np.asarray(offset, dtype=float).ravel()
        total: ComplexArray = np.zeros(flat.shape, dtype=complex)
        if self.light.density.size:
            total += self._continuum(flat / SPEED_OF_LIGHT)
        for line, phase, slope in self._lines:
            turn = np.exp(-2j * np.pi * (phase - slope * line.frequency_si / SPEED_OF_LIGHT))
            total += line.strength * turn * line.coherence_si((flat + (slope - self.group_opd)) / SPEED_OF_LIGHT)
        return np.asarray(total / self.light.total_rate).reshape(np.shape(offset))

    def _continuum(self, tau: FloatArray) -> ComplexArray:
        reach = (float(np.max(np.abs(tau))) + self._spread / SPEED_OF_LIGHT) * self.light.step_si
        _warn_if_unresolved(reach)
        turns = _evened(self.light.step_si * tau, self.light.density.size)
        middle = self.light.density.size // 2
        start = self.light.start_si + middle * self.light.step_si
        total: ComplexArray = np.zeros(tau.shape, dtype=complex)
        for place, values in self._at_nodes(FEW if reach < NEAR else MANY):
            total += np.exp(-2j * np.pi * (start + place) * tau) * sum_of_turns(values, turns)
        # the sum runs from the band's lower end, its carrier stands in the middle: rounded path differences then matter least
        total *= np.exp(2j * np.pi * middle * turns)
        return np.asarray(total * np.exp(-2j * np.pi * self._constant))

    def _at_nodes(self, count: int) -> list[tuple[float, ComplexArray]]:
        """For each point of a cell: its offset [Hz] from the cell's lower edge, and weight times density times phase in every cell."""
        if count not in self._nodes:
            points, weights = np.polynomial.legendre.leggauss(count)
            light, step = self.light, self.light.step_si
            rows: list[tuple[float, ComplexArray]] = []
            for point, weight in zip(points, weights, strict=True):
                sigma = (light.frequency_si + 0.5 * point * step) / SPEED_OF_LIGHT
                density = light.density + 0.5 * point * light.slopes
                rows.append((float(0.5 * (1 + point) * step), 0.5 * weight * step * density * self._turns(sigma)))
            self._nodes[count] = rows
        return self._nodes[count]

    def _turns(self, sigma: FloatArray) -> ComplexArray:
        """exp(-2 pi i cycles) less what is common; zero where a medium has no index, which can be in the far wings of a band only."""
        with np.errstate(invalid="ignore", divide="ignore", over="ignore"):
            rest = self._cycles(sigma)[0] - self.group_opd * sigma - self._constant
            return np.where(np.isfinite(rest), np.exp(-2j * np.pi * rest), 0.0)


def _evened(turns: FloatArray, cells: int) -> FloatArray:
    """Equally spaced phases where these are so but for rounding."""
    even = np.linspace(turns[0], turns[-1], turns.size)
    return even if np.max(np.abs(turns - even)) * cells < ROUNDING else turns


def _warn_if_unresolved(reach: float) -> None:
    if reach > RESOLVED:
        warnings.warn(
            f"path difference and dispersion together are {reach / RESOLVED:.3g} times what this spectral grid resolves (half of one "
            "over its step); structure finer than the grid is not in the result: ask for more samples, or add lines as lines",
            ResolutionWarning,
            stacklevel=6,
        )


def _centre(light: Spectrum) -> float:
    """Mean frequency [Hz]."""
    lines = sum(line.strength * line.frequency_si for line in light.lines)
    cells = float(np.sum(light.density * light.frequency_si)) * light.step_si if light.density.size else 0.0
    return float((lines + cells) / light.total_rate)
