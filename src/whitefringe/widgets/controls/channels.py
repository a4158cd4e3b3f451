"""How many spectral channels the band is split into."""

from __future__ import annotations

from html import escape
from typing import Any

import ipywidgets as widgets

from ...errors import WhitefringeError
from ...setup import MOST_CHANNELS
from ...spectra import ChannelSet, split
from .._base import BenchView, guarded
from .._style import LABEL_WIDTH
from ..bench import Bench


class ChannelControl(BenchView):
    """Chooses the number of channels, and says what they are worth: widths, coherence lengths, ambiguity and reach.

    Parameters
    ----------
    bench : Bench
    """

    def __init__(self, bench: Bench) -> None:
        self.count = widgets.BoundedIntText(
            value=bench.setup.channels,
            min=0,
            max=MOST_CHANNELS,
            description="spectral channels",
            layout={"width": "270px"},
            style={"description_width": LABEL_WIDTH},
        )
        self.count.observe(self._counted, names="value")
        self.text = widgets.HTML()
        super().__init__(bench, [self.count, self.text], "wf-channel-control")

    @guarded
    def _counted(self, change: Any) -> None:
        self.bench.update(channels=int(change["new"]))

    def refresh(self) -> None:
        """Show the bench's number of channels and what follows from it."""
        count = self.bench.setup.channels
        if self.count.value != count:
            self.count.value = count
        self.text.value = f"<div style='line-height:1.5;max-width:640px'>{self._words(count)}</div>"

    def _words(self, count: int) -> str:
        if count == 0:
            return "no channels: the whole band on one detector"
        try:
            return _described(split(self.bench.results.light, count))
        except WhitefringeError as reason:
            return escape(str(reason))


def _described(channels: ChannelSet) -> str:
    first, last = channels[0], channels[len(channels) - 1]
    lengths = [channel.coherence_length.value for channel in channels]
    words = [
        f"centres {first.centre.value:.4f} to {last.centre.value:.4f}",
        f"widths {first.width.value:.4g} to {last.width.value:.4g}",
        f"coherence length {min(lengths):.4g} to {max(lengths):.4g} (bandwidth)",
    ]
    if len(channels) > 1:
        words.append(f"group-delay ambiguity {channels.ambiguity.value:.4g}")
    words.append(f"half contrast up to ±{channels.reach.value:.4g}")
    return "; ".join(words).replace(" um", " µm")
