"""What every control and plot shares: a slider that keeps its grid, a guarded callback, a listener on the bench that can be closed."""

from __future__ import annotations

import logging
import warnings
from collections.abc import Callable
from functools import wraps
from typing import Any

import ipywidgets as widgets
import numpy as np
import traitlets

from ..errors import WhitefringeError, WhitefringeWarning
from ._style import LABEL_WIDTH
from .bench import Bench

LOG = logging.getLogger("whitefringe")


class GridSlider(widgets.FloatSlider):
    """A slider that knows its grid, min + k step.

    The browser's own rounding leaves the grid by a few 1e-15. It is not corrected in the slider itself: the correction would travel
    back and undo the key that was pressed meanwhile. Whoever reads the slider takes `snapped` of its value instead.
    """

    def snapped(self, value: float) -> float:
        """Return the value of the grid that is nearest, within the slider's range."""
        value = min(max(value, self.min), self.max)
        return float(f"{self.min + round((value - self.min) / self.step) * self.step:.12g}")


class NumberRow(widgets.HBox):
    """A number with a slider and a labelled box that agree. The box may hold values between the slider's steps.

    Parameters
    ----------
    lock : RLock
        That of the bench: browser events may arrive on two threads at once, and the three values must change together.

    Traits
    ------
    value : float
        In the display unit; finite.
    """

    value = traitlets.Float()

    def __init__(self, *, label: str, unit: str, low: float, high: float, step: float, value: float, lock: Any) -> None:
        self._lock = lock
        text = label if unit == "1" else f"{label} [{unit}]"
        self.slider = GridSlider(
            min=low, max=high, step=step, value=value, readout=False, layout={"width": "190px"}, style={"description_width": "0px"}
        )
        self.box = widgets.FloatText(
            value=value, step=step, description=text, layout={"width": "270px"}, style={"description_width": LABEL_WIDTH}
        )
        super().__init__(children=[self.box, self.slider], layout={"flex_flow": "row wrap"})
        self.value = value
        self.slider.observe(self._slider_moved, names="value")
        self.box.observe(self._box_changed, names="value")
        self.observe(self._show, names="value")

    @traitlets.validate("value")  # type: ignore[untyped-decorator]
    def _finite(self, proposal: Any) -> float:
        if not np.isfinite(proposal["value"]):
            raise traitlets.TraitError(f"{self.box.description} must be a finite number; got {proposal['value']}")
        return float(proposal["value"])

    def _slider_moved(self, change: Any) -> None:
        with self._lock:
            moved = self.slider.snapped(change["new"])
            if moved != self.slider.snapped(self.value):
                self.value = moved

    def _box_changed(self, change: Any) -> None:
        with self._lock:
            if change["new"] != self.value:
                self.value = change["new"]

    def _show(self, change: Any) -> None:
        with self._lock:
            if self.box.value != change["new"]:
                self.box.value = change["new"]
            snapped = self.slider.snapped(change["new"])
            if self.slider.snapped(self.slider.value) != snapped:
                self.slider.value = snapped


def guarded(callback: Callable[..., None]) -> Callable[..., None]:
    """Run a callback of a `BenchView` under the bench's lock, and show what goes wrong in the bench instead of losing it.

    Errors of ours become the bench's problem line; others too, and go to the log with their trace. A strict bench raises them again.
    """

    @wraps(callback)
    def run(self: BenchView, *arguments: Any) -> None:
        with self.bench.lock:
            if self.silent:
                return
            try:
                with warnings.catch_warnings(record=True) as caught:
                    warnings.simplefilter("always", WhitefringeWarning)
                    callback(self, *arguments)
                if caught:
                    self.bench.report(f"note: {caught[-1].message}")
            except WhitefringeError as error:
                self.bench.report(str(error))
                if self.bench.strict:
                    raise
            except Exception as error:
                LOG.exception("callback %s failed", callback.__qualname__)
                self.bench.report(f"{type(error).__name__}: {error}")
                if self.bench.strict:
                    raise

    return run


class BenchView(widgets.VBox):
    """A widget that shows a bench: subclasses make their parts, and write `refresh`, the only place that changes them.

    Parameters
    ----------
    bench : Bench
    children : list of widgets
    css : str
        CSS class of the outermost box.
    """

    def __init__(self, bench: Bench, children: list[Any], css: str) -> None:
        super().__init__(children=children)
        self.bench = bench
        self.silent = False
        self.add_class(css)
        with bench.lock:
            bench.listen(self._bench_changed)
            self._bench_changed()

    def refresh(self) -> None:
        """Bring what is shown into step with the bench."""
        raise NotImplementedError

    def hidden_parts(self) -> list[Any]:
        """Return widgets made here that are not shown now, so that closing frees them too."""
        return []

    def summary(self) -> str:
        """Return one line of text for pages that cannot show widgets, with fixed precision."""
        return f"{type(self).__name__}: {self.bench.summary()}"

    def _bench_changed(self) -> None:
        # what refresh writes into the controls is not a user's move
        before, self.silent = self.silent, True
        try:
            self.refresh()
        finally:
            self.silent = before

    def _repr_mimebundle_(self, **options: Any) -> Any:
        bundle = super()._repr_mimebundle_(**options) if self.comm is not None else {}
        if isinstance(bundle, dict):
            bundle["text/plain"] = self.summary()
        return bundle

    def __repr__(self) -> str:
        return self.summary()

    def close(self) -> None:
        """Stop listening and free every widget that was made here; may be called again."""
        close_tree(self)

    def __enter__(self) -> BenchView:
        return self

    def __exit__(self, *error: Any) -> None:
        self.close()


def close_tree(root: Any) -> None:
    """Close a widget and all widgets that its traits hold: children, layouts, styles, marks, axes, scales."""
    seen: list[Any] = []
    pending = [root]
    while pending:
        item = pending.pop()
        if isinstance(item, dict):
            pending += item.values()
        elif isinstance(item, (list, tuple)):
            pending += item
        elif isinstance(item, widgets.Widget) and not any(item is other for other in seen):
            seen.append(item)
            pending += [getattr(item, name) for name in item.keys]
            # a view whose construction failed has no bench, and may lack parts
            pending += item.hidden_parts() if isinstance(item, BenchView) and "bench" in vars(item) else []
    for item in seen:
        if isinstance(item, BenchView) and "bench" in vars(item):
            item.bench.ignore(item._bench_changed)
        item.unobserve_all()
        widgets.Widget.close(item)
