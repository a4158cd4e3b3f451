"""The transform of a spectrum whose phase varies: sum over the light of S(nu) exp(-2 pi i [nu tau + cycles(nu)])."""

from __future__ import annotations

from collections.abc import Callable
from functools import cached_property

import numpy as np

from ..coherence.degree import ComplexArray, sum_of_turns
from ..spectra import Line, Spectrum
from ..units import SPEED_OF_LIGHT, FloatArray

FEW, MANY = 3, 10
"""Gauss-Legendre points per cell of the spectrum: for delays well inside what the grid resolves, and beyond."""

NEAR = 0.03
"""Delays up to this part of one over the grid's step count as well inside: three points are then right to 1e-10."""


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
        """How far [m] the group delay of the continuum wanders from that of the mean frequency."""
        ends = np.linspace(self.light.frequency_si[0], self.light.frequency_si[-1], 9) / SPEED_OF_LIGHT
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
        start = self.light.start_si
        total: ComplexArray = np.zeros(tau.shape, dtype=complex)
        for place, values in self._at_nodes(FEW if reach < NEAR else MANY):
            total += np.exp(-2j * np.pi * (start + place) * tau) * sum_of_turns(values, self.light.step_si * tau)
        return np.asarray(total * np.exp(-2j * np.pi * self._constant))

    def _at_nodes(self, count: int) -> list[tuple[float, ComplexArray]]:
        """For each point of a cell: its offset [Hz] from the cell's lower edge, and weight times density times phase in every cell."""
        if count not in self._nodes:
            points, weights = np.polynomial.legendre.leggauss(count)
            light, step = self.light, self.light.step_si
            rows: list[tuple[float, ComplexArray]] = []
            for point, weight in zip(points, weights, strict=True):
                sigma = (light.frequency_si + 0.5 * point * step) / SPEED_OF_LIGHT
                rest = self._cycles(sigma)[0] - self.group_opd * sigma - self._constant
                density = light.density + 0.5 * point * light.slopes
                rows.append((float(0.5 * (1 + point) * step), 0.5 * weight * step * density * np.exp(-2j * np.pi * rest)))
            self._nodes[count] = rows
        return self._nodes[count]


def _centre(light: Spectrum) -> float:
    """Mean frequency [Hz]."""
    lines = sum(line.strength * line.frequency_si for line in light.lines)
    cells = float(np.sum(light.density * light.frequency_si)) * light.step_si if light.density.size else 0.0
    return float((lines + cells) / light.total_rate)
