"""All that happens to a filter in the beam, put on at once or taken off again."""

from __future__ import annotations

from dataclasses import replace
from typing import Any

from ..errors import InputError
from ._shape import Filter
from .cone import InCone
from .effects import Leaky, Tilted, Warmed

BEAM_EFFECTS: tuple[type[Any], ...] = (Warmed, Tilted, InCone, Leaky)
"""What may happen to a filter, in the order in which `in_beam` puts it on."""


def in_beam(
    band: Filter,
    *,
    tilt: Any = None,
    effective_index: float | None = None,
    f_number: float | None = None,
    obstruction: float | None = None,
    warmed_by: Any = None,
    drift: Any = None,
    leak: float | None = None,
    leak_low: Any = None,
    leak_high: Any = None,
) -> Filter:
    """Return the filter with all that is stated of it: warmed first, then tilted, then in a cone, then leaking.

    Parameters
    ----------
    band : Filter
    tilt : Quantity [angle], optional
    effective_index : float, optional
        For `tilt` and `f_number`, which need it.
    f_number, obstruction : float, optional
    warmed_by, drift : Quantity [K], Quantity [length/K], optional
    leak : float, optional
    leak_low, leak_high : Quantity [vacuum wavelength or frequency], optional

    Returns
    -------
    Filter

    Raises
    ------
    InputError
        Something is stated without what it needs.

    Examples
    --------
    >>> import astropy.units as u
    >>> from whitefringe.spectra import TopHat
    >>> band = in_beam(TopHat(centre=1.65 * u.um, width=10 * u.nm), tilt=4 * u.deg, effective_index=2.0)
    >>> type(band).__name__, bare_of(band).shape
    ('Tilted', 'top-hat')
    """
    _go_together({"warmed_by": warmed_by, "drift": drift})
    _go_together({"leak": leak, "leak_low": leak_low, "leak_high": leak_high})
    if obstruction is not None and f_number is None:
        raise InputError("obstruction belongs to f_number: state both")
    if (effective_index is None) != (tilt is None and f_number is None):
        raise InputError("effective_index belongs to tilt or f_number: state it with them, and only with them")
    if warmed_by is not None:
        band = Warmed(filter=band, by=warmed_by, drift=drift)
    if tilt is not None and effective_index is not None:
        band = Tilted(filter=band, angle=tilt, effective_index=effective_index)
    if f_number is not None and effective_index is not None:
        band = InCone(filter=band, f_number=f_number, effective_index=effective_index, obstruction=obstruction or 0.0)
    return band if leak is None else Leaky(filter=band, leak=leak, low=leak_low, high=leak_high)


def _go_together(named: dict[str, Any]) -> None:
    lacking = [name for name, value in named.items() if value is None]
    if lacking and len(lacking) < len(named):
        raise InputError(f"{', '.join(named)} go together; not stated: {', '.join(lacking)}")


def bare_of(band: Filter) -> Filter:
    """Return the filter without anything that happens to it in the beam."""
    while isinstance(band, BEAM_EFFECTS):
        band = band.filter
    return band


def with_bare(band: Filter, shape: Filter) -> Filter:
    """Return `shape` in the place of `bare_of(band)`, with all that happens to `band` in the beam."""
    return replace(band, filter=with_bare(band.filter, shape)) if isinstance(band, BEAM_EFFECTS) else shape


__all__ = ["BEAM_EFFECTS", "bare_of", "in_beam", "with_bare"]
