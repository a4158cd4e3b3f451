"""What every member of a family must do; the test files of each area call these with every member."""

from __future__ import annotations

import dataclasses

import astropy.units as u
import numpy as np
import pytest

from whitefringe.references import CITATIONS
from whitefringe.spectra import Filter, Source, Spectrum, parameters_of
from whitefringe.units import SPEED_OF_LIGHT


def has_a_name(member):
    """A `shape` of its own kind, usable in a setup file."""
    assert isinstance(member.shape, str)
    assert member.shape == member.shape.lower().strip() != ""


def is_frozen(instance):
    name = dataclasses.fields(instance)[0].name
    with pytest.raises(dataclasses.FrozenInstanceError):
        setattr(instance, name, None)


def has_a_docstring(member):
    assert member.__doc__
    assert member.__doc__.strip()


def parameters_make_sense(member):
    """Start within range and on the slider's grid; a shape of its start, lowest and highest values can be built."""
    described = parameters_of(member)
    for name, item in described.items():
        assert item.low <= item.start <= item.high, name
        assert item.step > 0
        steps = (item.start - item.low) / item.step
        assert steps == pytest.approx(round(steps), abs=1e-6), f"{name}: start is not on the grid"
        assert item.label
        u.Unit(item.unit)
    if described:
        for which in ("start", "low", "high"):
            member(**{name: getattr(item, which) * item.unit for name, item in described.items()})


def is_a_filter(shape):
    """Passes between nothing and everything, inside its support only."""
    assert isinstance(shape, Filter)
    low, high = shape.support_si
    assert 0 < low < high < np.inf
    inside = np.linspace(low, high, 2001)
    passed = shape.transmission_si(inside)
    assert passed.shape == inside.shape
    assert np.all((passed >= 0) & (passed <= 1))
    assert np.max(passed) > 0.5
    beyond = [0.99 * low, 1.01 * high] * u.Hz
    assert np.all(shape.transmission(beyond) == 0)
    kinks = np.asarray(shape.breakpoints_si)
    assert np.all((kinks >= low * (1 - 1e-12)) & (kinks <= high * (1 + 1e-12)))


def takes_every_spectral_axis(shape):
    """The public twin takes wavelengths and frequencies of any array shape and agrees with the inner one."""
    low, high = shape.support_si
    frequency = np.linspace(low, high, 14)[1:-1].reshape(3, 4)
    inner = shape.transmission_si(frequency)
    assert shape.transmission(frequency * u.Hz) == pytest.approx(inner, abs=1e-15)
    assert shape.transmission((SPEED_OF_LIGHT / frequency * u.m).to(u.nm)) == pytest.approx(inner, abs=1e-9)
    assert np.shape(shape.transmission(frequency[0, 0] * u.Hz)) == ()


def is_a_source(source, band):
    """A photon rate that is finite and nowhere negative over `band` [Hz]."""
    assert isinstance(source, Source)
    low, high = source.support_si
    assert 0 <= low <= high
    frequency = np.linspace(*band, 501)
    rate = source.rate_si(frequency)
    assert rate.shape == frequency.shape
    assert np.all(np.isfinite(rate) & (rate >= 0))
    assert np.any(rate > 0) or source.lines
    assert np.ndim(source.breakpoints_si) == 1
    assert isinstance(source.lines, tuple)


def is_a_line(line):
    """Coherent with itself at zero delay, Hermitian, never above one; a profile of unit area and stated width."""
    tau = np.linspace(-3, 3, 601) / (line.fwhm_si or 1e12)
    gamma = line.coherence_si(tau)
    assert line.coherence_si(0.0) == pytest.approx(1.0)
    assert np.all(np.abs(gamma) <= 1 + 1e-15)
    assert gamma == pytest.approx(np.conj(gamma[::-1]))
    if line.fwhm_si:
        ends = line.frequency_si + np.array([-0.5, 0.5]) * line.fwhm_si
        # the width is 1e-5 of the frequency, whose own rounding leaves 1e-11 of the width
        assert line.density_si(ends) == pytest.approx(0.5 * line.density_si(line.frequency_si), rel=1e-9)


def is_a_coherence_definition(item, spectrum: Spectrum):
    """A time that is positive, scales as one over the width of the band, and has a source."""
    assert item.name == item.name.lower().strip() != ""
    assert item.words
    assert item.citation in CITATIONS
    narrow = dataclasses.replace(spectrum, step=spectrum.step / 4)
    assert item.time_si(spectrum) > 0
    assert item.time_si(narrow) == pytest.approx(4 * item.time_si(spectrum), rel=1e-6)
