"""`ScanLayout`: which column of a recorded scan is what, and how a stage position becomes a path difference."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

import astropy.units as u
import numpy as np

from ..errors import ScanLayoutError
from ..units import as_si, positive_si

Column = str | int


@dataclass(frozen=True, kw_only=True)
class ScanLayout:
    """Columns and scale of a recorded scan.

    Parameters
    ----------
    signal : str or int
        Column of the detector, by name or by index from 0.
    reference : str or int, optional
        Column of a second channel whose fringes, of `reference_wavelength`, measure the path.
    position : str or int, optional
        Column of the stage position: steps, or a length when the file gives its unit. Without it the rows are taken as equal steps.
    time : str or int, optional
        Column of the time [s, or the file's unit].
    opd_per_step : Quantity [length], optional
        Path difference per step; may be negative.
    stage_per_step : Quantity [length], optional
        Travel of the mirror per step, instead of `opd_per_step`; path difference is `passes` times this.
    passes : int
        How often the light travels the stage's way: 2 for a mirror that sends the light back on itself, 1 when the position is
        the path difference. Applies to `stage_per_step` and to positions that are lengths.
    index : float
        Refractive index of what the stage's way leads through, which makes optical path of travel: 1 in vacuum, about 1.00027 in air.
        Applies where `passes` does.
    reference_wavelength : Quantity [vacuum wavelength], optional
        Needed with `reference`. One fringe of the reference is one such wavelength of path.
    saturation : float, optional
        Samples of the signal at or above this are saturated [counts].
    dark : float
        Signal level without light, subtracted first [counts].

    Raises
    ------
    ScanLayoutError
        Settings that contradict each other.
    UnitsError
        A length without its unit.
    """

    signal: Column = 0
    reference: Column | None = None
    position: Column | None = None
    time: Column | None = None
    opd_per_step: u.Quantity | None = None
    stage_per_step: u.Quantity | None = None
    passes: int = 1
    index: float = 1.0
    reference_wavelength: u.Quantity | None = None
    saturation: float | None = None
    dark: float = 0.0

    def __post_init__(self) -> None:
        if (self.reference is None) != (self.reference_wavelength is None):
            raise ScanLayoutError("reference (a column) and reference_wavelength (a length) go together; only one is given")
        if self.opd_per_step is not None and self.stage_per_step is not None:
            raise ScanLayoutError("give opd_per_step or stage_per_step, not both")
        if self.reference is not None and (self.opd_per_step is not None or self.stage_per_step is not None):
            raise ScanLayoutError("the path comes from the reference channel: leave out opd_per_step and stage_per_step")
        for name in ("signal", "reference", "position", "time"):
            column = getattr(self, name)
            if isinstance(column, bool) or not isinstance(column, (str, int, type(None))):
                raise ScanLayoutError(f"{name} must be a column's name or its number from 0; got {column!r}")
        if isinstance(self.passes, bool) or self.passes not in (1, 2, 4):
            raise ScanLayoutError(f"passes must be 1, 2 or 4; got {self.passes!r}")
        if not 1 <= self.index < 5:
            raise ScanLayoutError(f"index must be from 1 to below 5; got {self.index}")
        if (self.passes != 1 or self.index != 1) and self.opd_per_step is not None:
            raise ScanLayoutError("opd_per_step is path difference already: leave passes and index at 1, or give stage_per_step")
        if self.reference_wavelength is not None:
            positive_si(self.reference_wavelength, u.m, "reference_wavelength", "nm")
        _ = self.opd_per_step_si
        if not np.isfinite(self.dark) or not np.isfinite(self.dark if self.saturation is None else self.saturation):
            raise ScanLayoutError(f"dark and saturation must be finite numbers of counts; got {self.dark} and {self.saturation}")
        if self.saturation is not None and not self.saturation > self.dark:
            raise ScanLayoutError(f"saturation ({self.saturation:g}) must lie above dark ({self.dark:g})")

    @property
    def opd_per_step_si(self) -> float | None:
        """Path difference per step [m], with its sign, or None where steps have no stated length."""
        name = "opd_per_step" if self.opd_per_step is not None else "stage_per_step"
        per_step: Any = getattr(self, name)
        if per_step is None:
            return None
        sign = -1.0 if np.all(as_si(per_step, u.m, name, "pm") < 0) else 1.0
        return sign * positive_si(per_step * sign, u.m, name, "pm") * (self.passes * self.index if name == "stage_per_step" else 1)
