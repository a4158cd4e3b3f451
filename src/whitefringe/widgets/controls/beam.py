"""What happens to a filter in the beam: tilt, and the cone of rays."""

from __future__ import annotations

from typing import Any

import astropy.units as u

from ...spectra import BEAM_EFFECTS, InCone, Leaky, Tilted, Warmed, bare_of, in_beam
from .._base import BenchView, NumberRow, guarded
from ..bench import Bench

USUAL_INDEX = 1.8
"""Effective index where the bench's filter has none yet (common practice: 1.4 to 2.2)."""


class BeamControl(BenchView):
    """Tilts one of the bench's filters, and puts it into a cone of rays; its temperature and leak stay as they are.

    Parameters
    ----------
    bench : Bench
    index : int
        Which of the bench's filters.
    """

    def __init__(self, bench: Bench, index: int = 0) -> None:
        self.index = index
        common = {"lock": bench.lock}
        self.tilt = NumberRow(label="tilt", unit="deg", low=0.0, high=30.0, step=0.5, value=0.0, **common)
        self.f_number = NumberRow(label="cone f/ (0: parallel)", unit="1", low=0.0, high=40.0, step=0.5, value=0.0, **common)
        self.effective_index = NumberRow(label="effective index", unit="1", low=1.1, high=3.0, step=0.05, value=USUAL_INDEX, **common)
        rows = [self.tilt, self.f_number, self.effective_index]
        for row in rows:
            row.observe(self._moved, names="value")
        super().__init__(bench, rows, "wf-beam-control")

    def _effects(self) -> dict[type[Any], Any]:
        """What happens to the filter now, by kind."""
        band, found = self.bench.setup.filters[self.index], {}
        while isinstance(band, BEAM_EFFECTS):
            found[type(band)] = band
            band = band.filter
        return found

    @guarded
    def _moved(self, change: Any) -> None:
        filters = list(self.bench.setup.filters)
        filters[self.index] = self._dressed()
        self.bench.update(filters=tuple(filters))

    def _dressed(self) -> Any:
        warmed, leaky = (self._effects().get(kind) for kind in (Warmed, Leaky))
        stated: dict[str, Any] = {}
        if self.tilt.value != 0:
            stated["tilt"] = self.tilt.value * u.deg
        if self.f_number.value != 0:
            stated["f_number"] = self.f_number.value
            cone = self._effects().get(InCone)
            stated["obstruction"] = 0.0 if cone is None else cone.obstruction
        if stated:
            stated["effective_index"] = self.effective_index.value
        if warmed is not None:
            stated |= {"warmed_by": warmed.by, "drift": warmed.drift}
        if leaky is not None:
            stated |= {"leak": leaky.leak, "leak_low": leaky.low, "leak_high": leaky.high}
        return in_beam(bare_of(self.bench.setup.filters[self.index]), **stated)

    def refresh(self) -> None:
        """Show what happens to the bench's filter; the index stays where nothing uses it."""
        effects = self._effects()
        tilted, cone = effects.get(Tilted), effects.get(InCone)
        self.tilt.value = 0.0 if tilted is None else float(f"{tilted.angle.to_value(u.deg):.10g}")
        self.f_number.value = 0.0 if cone is None else float(cone.f_number)
        for effect in (tilted, cone):
            if effect is not None:
                self.effective_index.value = float(effect.effective_index)
