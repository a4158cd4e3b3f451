"""How far apart the zero points of two bands are, and how that drifts with the air."""

from __future__ import annotations

from dataclasses import dataclass, replace

import astropy.units as u

from ..errors import InputError
from ..results import Measured
from ..spectra import Spectrum
from .arms import ArmPair
from .packets import DispersedPacket, centre_si, coarser
from .uncertainty import AirUncertainty, Function, by_air, check_arms_and_lights, total, uncertainties

DEFINITIONS = {
    "group delay": "centre of |gamma|^2 (group delay weighted by the squared spectrum)",
    "greatest contrast": "path difference of the greatest contrast",
}


@dataclass(frozen=True, kw_only=True)
class BandOffset:
    """Where the zero point of one band lies from that of another.

    Parameters
    ----------
    offset : Measured [length]
        Added path difference of the second band's zero point less that of the first's.
    parts : dict
        Contributions to its uncertainty, by name [length].
    per_kelvin, per_hectopascal, per_percent : Measured or None
        Its drift with all air's temperature, pressure and relative humidity; None without air.
    per_metre : Measured or None
        Its change with a metre more of air in the second arm, vacuum in the first; None without air.
    flags : tuple of str
        What was extrapolated, and where two air models meet.
    """

    offset: Measured
    parts: dict[str, u.Quantity]
    per_kelvin: Measured | None
    per_hectopascal: Measured | None
    per_percent: Measured | None
    per_metre: Measured | None
    flags: tuple[str, ...]

    @property
    def rows(self) -> tuple[tuple[str, Measured | str], ...]:
        """All numbers with their names, for a table."""
        drifts = (
            ("drift per kelvin", self.per_kelvin),
            ("drift per hectopascal", self.per_hectopascal),
            ("drift per percent of humidity", self.per_percent),
            ("per metre of unbalanced air", self.per_metre),
        )
        return (("offset", self.offset), *((name, value or "there is no air in the arms") for name, value in drifts))


def band_offset(
    pair: ArmPair, light_a: Spectrum, light_b: Spectrum, *, by: str = "group delay", air: AirUncertainty | None = None
) -> BandOffset:
    """Return how far the zero point of band b lies from that of band a (the science band from the tracking band).

    Parameters
    ----------
    pair : ArmPair
    light_a, light_b : Spectrum
    by : str
        ``"group delay"``: centre of |gamma|^2, as `scans.reduce_scan` finds packets; ``"greatest contrast"``.
    air : AirUncertainty, optional
        Of the air that both arms share; lengths and single segments carry their own uncertainties.

    Returns
    -------
    BandOffset
        In added path difference (second arm, in vacuum): positive where band b needs more.

    Notes
    -----
    The drifts are those of the definition ``"group delay"``, which is smooth; the relative humidity stays when the temperature changes.

    Examples
    --------
    >>> import astropy.units as u
    >>> from whitefringe import media, spectra
    >>> lights = [spectra.detected(spectra.Flat(), spectra.TopHat(centre=w * u.um, width=0.1 * w * u.um)) for w in (0.7, 1.25)]
    >>> air = media.Ciddor1996(temperature=12 * u.deg_C, pressure=850 * u.hPa, humidity=30 * u.percent)
    >>> pair = media.ArmPair(first=[], second=[media.Segment(medium=air, length=40 * u.m)])
    >>> found = media.band_offset(pair, *lights)
    >>> print(f"{found.offset.value:.2f}, {found.per_kelvin.value:.4f}, {found.per_metre.value:.3f}")
    228.87 um, -0.7848 um / K, 5.722 um / m
    """
    check_arms_and_lights(pair, (light_a, light_b), air)
    if by not in DEFINITIONS:
        raise InputError(f"by must be one of {', '.join(DEFINITIONS)}; got {by!r}")
    flags = pair.flags(light_a, light_b)

    coarse_a, coarse_b = coarser(light_a), coarser(light_b)

    def offset(arms: ArmPair, shift: dict[str, float]) -> float:
        return centre_si(arms, coarse_b, **shift) - centre_si(arms, coarse_a, **shift)

    if by == "group delay":
        value = centre_si(pair, light_b) - centre_si(pair, light_a)
    else:
        value = DispersedPacket(pair=pair, light=light_b).peak_si - DispersedPacket(pair=pair, light=light_a).peak_si
    parts = uncertainties(offset, pair, air or AirUncertainty())
    sigma = float(total(parts))
    return BandOffset(
        offset=Measured(
            value=_micrometres(value),
            uncertainty=_micrometres(sigma) if sigma else None,
            definition=f"zero point of the second band less that of the first; {DEFINITIONS[by]}",
        ),
        parts={name: _micrometres(part) for name, part in parts.items()},
        flags=flags,
        **_drifts(pair, light_a, light_b, offset),
    )


def _drifts(pair: ArmPair, light_a: Spectrum, light_b: Spectrum, offset: Function) -> dict[str, Measured | None]:
    names = ("per_kelvin", "per_hectopascal", "per_percent", "per_metre")
    airs = [item for _, item in pair.signed if item.medium.is_air]
    if not airs:
        return dict.fromkeys(names)
    longest = max(airs, key=lambda item: item.length_si)
    metre = ArmPair(first=[], second=[replace(longest, length=1 * u.m)])
    group = centre_si(metre, light_b) - centre_si(metre, light_a)
    rates = [by_air(offset, pair, key) for key in ("temperature", "pressure", "humidity")]
    return {
        "per_kelvin": Measured(value=rates[0] * 1e6 * u.um / u.K, definition="all air warmer, at fixed relative humidity"),
        "per_hectopascal": Measured(value=rates[1] * 1e8 * u.um / u.hPa, definition="all air denser"),
        "per_percent": Measured(value=rates[2] * 1e4 * u.um / u.percent, definition="all air moister, per percent of relative humidity"),
        "per_metre": Measured(value=group * 1e6 * u.um / u.m, definition="a metre more of air in the second arm, vacuum in the first"),
    }


def _micrometres(metres: float) -> u.Quantity:
    return (metres * u.m).to(u.um)
