"""`Bench`: the state that controls, plots and read-outs share.

    control --> Bench.update(**changes) --> Setup (frozen) --> core functions --> BenchResults (frozen) --> plots, read-outs

No widget talks to another; each listens to the bench. The bench itself knows no widget library, so it serves scripts and tests as well.
"""

from __future__ import annotations

import os
from collections.abc import Callable
from dataclasses import dataclass, replace
from threading import RLock
from typing import Any

import astropy.units as u
import numpy as np

from ..coherence import coherence_length, packet_width, self_coherence
from ..errors import InputError, UndefinedWidthError
from ..media import BandOffset, DispersedPacket, Glass, band_offset, packaged_glasses
from ..results import Measured
from ..scans import Scan, ScanResult, compared, reduce_scan
from ..setup import Setup
from ..spectra import Spectrum, mean_wavelength
from ._sky_code import observation_code


@dataclass(frozen=True, kw_only=True)
class BenchResults:
    """Everything that is shown, computed once per change.

    `gamma` is the complex degree of coherence at the delay cursor; `width` or `length` is None where this light has none. `packet` is
    there where the setup has arms, `offset` (of the science band from the tracking band) where it has a tracking band too.
    """

    light: Spectrum
    wavelength: Measured
    width: Measured | None
    length: Measured | None
    gamma: complex
    reduction: ScanResult | None
    packet: DispersedPacket | None = None
    offset: BandOffset | None = None


NO_ARMS = "This setup has no arms: give Setup(arms=media.ArmPair(...)), or [[first_arm]] and [[second_arm]] entries in the setup file."


def plotted_half_range(results: BenchResults) -> float:
    """Path difference [um], either way from zero, that plots and cursor cover: two and a half packet widths."""
    return 2.5 * results.width.to_value(u.um) if results.width is not None else 50 * results.wavelength.to_value(u.um)


class Bench:
    """Shared state of a dashboard.

    Parameters
    ----------
    setup : Setup
    scan : Scan, optional
        A recorded scan; reduced once, compared again at every change.
    strict : bool, optional
        Raise errors again that callbacks would only show: for tests and notebooks under test. By default what the environment
        variable WHITEFRINGE_STRICT says (``1``: yes).

    Examples
    --------
    >>> from whitefringe import demo, setup
    >>> bench = Bench(setup.Setup(source=demo.LAMP, filters=(demo.bench_filter(),)), demo.bench_scan())
    >>> print(bench.summary())
    wavelength 1.6393 um, packet width 12.274 um, delay 0.00 um, contrast there 1.0000, verdict inside
    """

    def __init__(self, setup: Setup, scan: Scan | None = None, *, strict: bool | None = None) -> None:
        self.lock = RLock()
        self.strict = os.environ.get("WHITEFRINGE_STRICT") == "1" if strict is None else strict
        self.problem = ""
        self._listeners: list[Callable[[], None]] = []
        self.scan = scan
        self._reduced = None if scan is None else reduce_scan(scan, definition=setup.definition)
        self.setup = setup
        self.results = self._evaluate(setup, None)

    def update(self, **changes: Any) -> None:
        """Change fields of the setup, recompute, and tell every listener.

        Raises
        ------
        InputError
            A field that a setup does not have, or a value that cannot be: setup and results then stay as they were.
        """
        with self.lock:
            unknown = [name for name in changes if name not in Setup.__dataclass_fields__]
            if unknown:
                raise InputError(f"a setup has no field {unknown[0]!r}; its fields are {', '.join(Setup.__dataclass_fields__)}")
            setup = replace(self.setup, **changes)
            if "definition" in changes and self.scan is not None:
                self._reduced = reduce_scan(self.scan, definition=setup.definition)
            results = self._evaluate(setup, self.results)
            self.setup, self.results, self.problem = setup, results, ""
            self._tell()

    def report(self, problem: str) -> None:
        """Show a problem; setup and results stay as they are."""
        with self.lock:
            self.problem = problem
            self._tell()

    def listen(self, listener: Callable[[], None]) -> None:
        """Call `listener` after every change, until `ignore`."""
        with self.lock:
            self._listeners.append(listener)

    def ignore(self, listener: Callable[[], None]) -> None:
        """Stop calling `listener`."""
        with self.lock:
            self._listeners = [other for other in self._listeners if other != listener]

    def _tell(self) -> None:
        for listener in tuple(self._listeners):
            listener()

    def _evaluate(self, setup: Setup, known: BenchResults | None) -> BenchResults:
        """Compute what is shown; what does not depend on what has changed is taken from `known`."""

        def same(*names: str) -> bool:
            return known is not None and all(getattr(setup, name) is getattr(self.setup, name) for name in names)

        if setup.observation is not None:
            _ = setup.observation.table
        light = known.light if known is not None and same("source", "filters") else setup.light
        gamma = complex(self_coherence(light, setup.delay))
        if known is not None and same(*(name for name in Setup.__dataclass_fields__ if name not in ("delay", "observation"))):
            return replace(known, gamma=gamma)
        reduction = self._reduced
        if reduction is not None:
            reduction = compared(reduction, light, setup.tolerances, setup.expected_contrast)
        packet, offset = self._through_arms(setup, light)
        return BenchResults(
            light=light,
            wavelength=mean_wavelength(light),
            width=_or_none(packet_width, light),
            length=_or_none(lambda spectrum: coherence_length(spectrum, setup.definition), light),
            gamma=gamma,
            reduction=reduction,
            packet=packet,
            offset=offset,
        )

    @staticmethod
    def _through_arms(setup: Setup, light: Spectrum) -> tuple[DispersedPacket | None, BandOffset | None]:
        if setup.arms is None:
            return None, None
        packet = DispersedPacket(pair=setup.arms, light=light, air=setup.air_uncertainty)
        tracking = setup.tracking_light
        return packet, None if tracking is None else band_offset(setup.arms, tracking, light, air=setup.air_uncertainty)

    def summary(self) -> str:
        """Return the state in one line, at fixed precision: stable text for notebooks under test."""
        results = self.results
        width = "none" if results.width is None else f"{results.width.to_value(u.um):.3f} um"
        there = "there" if results.packet is None else "of equal arms there"
        verdict = "no scan" if results.reduction is None else str(results.reduction.verdict)
        text = (
            f"wavelength {results.wavelength.to_value(u.um):.4f} um, packet width {width}, "
            f"delay {self.setup.delay.to_value(u.um):.2f} um, contrast {there} {abs(results.gamma):.4f}, verdict {verdict}"
        ) + _behind_arms(results)
        return f"{text}, problem: {self.problem}" if self.problem else text

    def as_code(self) -> str:
        """Return a script that computes what is shown without widgets."""
        filters = ", ".join(_code(item) for item in self.setup.filters)
        lines = [
            "import astropy.units as u",
            f"from whitefringe import coherence, {'media, ' if self.setup.arms is not None else ''}scans, spectra",
            f"light = spectra.detected({_code(self.setup.source)}{', ' if filters else ''}{filters})",
            f"gamma = coherence.self_coherence(light, {self.setup.delay.to_value(u.um):g} * u.um)",
            f"length = coherence.coherence_length(light, {self.setup.definition!r})",
        ]
        if self.setup.arms is not None:
            lines += _arms_code(self.setup)
        if self.scan is not None:
            lines += [
                f"scan = scans.read_scan({self.scan.provenance.get('path', 'scan.ecsv')!r}, {_code(self.setup.layout)})",
                f"result = scans.reduce_scan(scan, light, definition={self.setup.definition!r}, "
                f"expected_contrast={self.setup.expected_contrast:g}, "
                f"tolerances={_code(self.setup.tolerances)})",
            ]
        return "\n".join(lines + observation_code(self.setup.observation))


def _or_none(measure: Callable[[Spectrum], Measured], light: Spectrum) -> Measured | None:
    try:
        return measure(light)
    except UndefinedWidthError:
        return None


def _behind_arms(results: BenchResults) -> str:
    """Clause of the summary: contrast and place behind the arms, offset of the bands; nothing without arms."""
    if results.packet is None:
        return ""
    try:
        text = f", dispersed contrast {results.packet.peak_height:.4f} at {1e6 * results.packet.peak_si:.2f} um"
    except UndefinedWidthError:
        text = ", no dispersed packet"
    return text if results.offset is None else f"{text}, offset from tracking {results.offset.offset.to_value(u.um):.2f} um"


def _arms_code(setup: Setup) -> list[str]:
    lines = [f"arms = {_code(setup.arms)}", f"air = {None if setup.air_uncertainty is None else _code(setup.air_uncertainty)}"]
    lines += ["packet = media.DispersedPacket(pair=arms, light=light, air=air)"]
    if not setup.tracking:
        return lines
    filters = ", ".join(_code(item) for item in setup.tracking)
    lines += [f"tracking = spectra.detected({_code(setup.source)}, {filters})"]
    return [*lines, "offset = media.band_offset(arms, tracking, light, air=air)"]


def _code(shape: Any) -> str:
    """Write a frozen object as the call that makes it; fields that stand at their default are left out."""
    name = type(shape).__name__
    if name == "Lines":
        return f"spectra.Lines([{', '.join(_code(line) for line in shape.lines)}])"
    if isinstance(shape, Glass) and any(shape is glass for glass in packaged_glasses()):
        return f"media.Glass.named({shape.name!r})"
    area = type(shape).__module__.split(".")[1]
    parts = []
    for item in shape.__dataclass_fields__.values():
        value = getattr(shape, item.name)
        if item.init and not _same(value, item.default):
            parts.append(f"{item.name}={_value_code(value)}")
    return f"{area}.{name}({', '.join(parts)})"


def _same(value: Any, default: Any) -> bool:
    return type(value) is type(default) and bool(np.all(value == default))


def _value_code(value: Any) -> str:
    if isinstance(value, u.Quantity) and value.ndim:
        return f"u.Quantity({value.value.tolist()!r}, {str(value.unit)!r})"
    if isinstance(value, u.Quantity):
        return f'u.Quantity("{value.value:.12g} {value.unit}")'
    if isinstance(value, np.ndarray):
        return repr(value.tolist())
    if isinstance(value, tuple):
        return f"({''.join(f'{_value_code(item)}, ' for item in value).rstrip(' ')})"
    return _code(value) if hasattr(value, "__dataclass_fields__") else repr(value)
