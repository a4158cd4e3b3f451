"""Several sources at once: a lamp with a laser in the same beam, a lamp and the sky."""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import dataclass, replace
from functools import cached_property
from typing import Any, ClassVar

import numpy as np

from ..errors import InputError
from ..units import FloatArray
from ._shape import Filter
from ._source import Source, SourceShape
from .lines import Line


@dataclass(frozen=True, kw_only=True)
class Together(SourceShape):
    """Several sources at once, with no phase between them: S = sum of w_i S_i. ``a + b`` makes one with weights 1.

    Parameters
    ----------
    sources : iterable of Source
    weights : iterable of float, optional
        Factors of the photon rates, 1 by default. The rates of sources are relative, each on a scale of its own (`Flat` and
        `Thermal` about 1 per hertz, `Diode` 1 per hertz at its peak, a line its strength): `with_shares` chooses the factors from
        shares of the photons.

    Attributes
    ----------
    caution : str
        That of a laser among the sources, else empty.

    Raises
    ------
    InputError
        No source, not one weight per source, a weight below zero, or none above it.

    Examples
    --------
    >>> import astropy.units as u
    >>> from whitefringe import spectra
    >>> lamp, laser = spectra.Diode(centre=1.6 * u.um, fwhm=50 * u.nm), spectra.SingleModeLaser(wavelength=1.55 * u.um, linewidth=1 * u.MHz)
    >>> both = spectra.Together.with_shares([lamp, laser], shares=[3, 1])
    >>> light = spectra.detected(both)
    >>> print(round(light.continuum_rate / light.total_rate, 6))
    0.75
    """

    shape: ClassVar[str] = "sum"
    sources: tuple[Source, ...]
    weights: tuple[float, ...] | None = None

    def __post_init__(self) -> None:
        members = tuple(self.sources) if isinstance(self.sources, Iterable) else ()
        if not members or not all(isinstance(item, Source) and not isinstance(item, type) for item in members):
            raise InputError("sources must be one or more sources such as spectra.Thermal(temperature=2900 * u.K)")
        weights = (1.0,) * len(members) if self.weights is None else tuple(float(weight) for weight in self.weights)
        if len(weights) != len(members):
            raise InputError(f"weights must be one per source; got {len(weights)} for {len(members)} sources")
        if not all(np.isfinite(weight) and weight >= 0 for weight in weights) or not any(weights):
            raise InputError(f"weights must be zero or more, and at least one above zero; got {weights}")
        object.__setattr__(self, "sources", members)
        object.__setattr__(self, "weights", weights)

    @classmethod
    def with_shares(cls, sources: Iterable[Source], shares: Iterable[float], filters: Iterable[Filter] = ()) -> Together:
        """Choose the weights so that the sources give stated shares of the photons that a detector counts behind the filters.

        Parameters
        ----------
        sources : iterable of Source
        shares : iterable of float
            One per source; only their ratios count.
        filters : iterable of Filter
            What lies before the detector; needed where a source has no end.

        Raises
        ------
        InputError
            As for `Together`, and where a source gives no light behind the filters.
        """
        from .spectrum import detected

        members, parts = tuple(sources), tuple(shares)
        if len(members) != len(parts):
            raise InputError(f"shares must be one per source; got {len(parts)} for {len(members)} sources")
        rates = [detected(source, *filters).total_rate for source in members]
        return cls(sources=members, weights=tuple(float(share) / rate for share, rate in zip(parts, rates, strict=True)))

    def __add__(self, other: Any) -> Together:
        """Return these sources and one more, with weight 1."""
        if not isinstance(other, Source) or isinstance(other, type):
            return NotImplemented
        return Together(sources=(*self.sources, other), weights=(*self._factors, 1.0))

    @property
    def _factors(self) -> tuple[float, ...]:
        return self.weights or ()

    @property
    def caution(self) -> str:
        """That of a laser among the sources, else empty."""
        return next((text for text in (getattr(source, "caution", "") for source in self.sources) if text), "")

    @cached_property
    def _continua(self) -> tuple[tuple[float, Source], ...]:
        pairs = zip(self._factors, self.sources, strict=True)
        return tuple((weight, source) for weight, source in pairs if weight > 0 and source.support_si[1] > source.support_si[0])

    @property
    def support_si(self) -> tuple[float, float]:
        """From the lowest to the highest frequency [Hz] of all; equal where no source has a continuum."""
        ends = [source.support_si for _, source in self._continua]
        return (min(low for low, _ in ends), max(high for _, high in ends)) if ends else (0.0, 0.0)

    @cached_property
    def breakpoints_si(self) -> FloatArray:
        """Frequencies [Hz] where the slope jumps, the sources' ends among them."""
        parts = [np.asarray(source.breakpoints_si) for _, source in self._continua]
        ends = [end for _, source in self._continua for end in source.support_si if 0 < end < np.inf]
        return np.unique(np.concatenate([*parts, np.asarray(ends, dtype=float)]))

    @cached_property
    def lines(self) -> tuple[Line, ...]:
        """The lines of all sources, their strengths times the weights."""
        pairs = zip(self._factors, self.sources, strict=True)
        return tuple(replace(line, strength=line.strength * weight) for weight, source in pairs if weight > 0 for line in source.lines)

    @property
    def finest_si(self) -> float:
        """Finest period [Hz] of any of the sources."""
        return float(min((getattr(source, "finest_si", np.inf) for source in self.sources), default=np.inf))

    def rate_si(self, frequency: FloatArray) -> FloatArray:
        """Relative photon rate per hertz at `frequency` [Hz]."""
        at = np.asarray(frequency, dtype=float)
        total = np.zeros_like(at)
        for weight, source in self._continua:
            low, high = source.support_si
            inside = (at >= low) & (at <= high)
            total[inside] += weight * source.rate_si(at[inside])
        return total


__all__ = ["Together"]
