"""The glass in the arms: how much more of it the second arm has, and the button that chooses it."""

from __future__ import annotations

from dataclasses import replace
from html import escape
from typing import Any

import astropy.units as u
import ipywidgets as widgets

from ...errors import InputError
from ...media import ArmPair, Compensation, Glass, Segment, compensator, packaged_glasses, with_plate
from ...media.compensator import AIMS
from .._base import BenchView, NumberRow, guarded
from .._style import LABEL_WIDTH
from ..bench import NO_ARMS, Bench
from .delay import rounded_up

REACH, STEP = 20.0, 0.01
"""Half range and step of the row [mm]."""
USUAL = "fused silica"
BANDS = ("science", "tracking")


class GlassControl(BenchView):
    """Chooses a glass and moves how much of it the second arm has more than the first; everything else in the arms stays.

    Parameters
    ----------
    bench : Bench

    Notes
    -----
    The second arm's plate of that glass changes, or the first arm's where only that has one or the second's is used up; where there is
    none, one is added. The button looks for the thickness with `media.compensator`, lengths taken as exact since that is faster.
    """

    def __init__(self, bench: Bench) -> None:
        common = {"style": {"description_width": LABEL_WIDTH}}
        arms = bench.setup.arms or ArmPair(first=[], second=[])
        self._known = {glass.name: glass for glass in packaged_glasses()} | _inside(arms)
        chosen = next(iter(_inside(arms)), USUAL)
        self.choice = widgets.Dropdown(options=tuple(self._known), value=chosen, description="glass", layout={"width": "330px"}, **common)
        value = shown_mm(arms, chosen)
        reach = max(REACH, rounded_up(1.2 * abs(value) or REACH))
        label = "second less first"  # with its unit, as long as fits
        self.row = NumberRow(label=label, unit="mm", low=-reach, high=reach, step=STEP, value=value, lock=bench.lock)
        self.aim = widgets.Dropdown(options=_aims(bench), description="make least", layout={"width": "330px"}, **common)
        self.button = widgets.Button(description="compensate", tooltip="choose the thickness", layout={"width": "120px"})
        self.result, self.text, self.body = widgets.HTML(), widgets.HTML(), widgets.VBox()
        search = widgets.HBox([self.aim, self.button], layout={"flex_flow": "row wrap"})
        self._parts = (self.choice, self.row, self.text, search, self.result)
        self.choice.observe(self._chosen, names="value")
        self.row.observe(self._moved, names="value")
        self.button.on_click(self._compensate)
        self._answer: tuple[object, str] = (None, "")
        super().__init__(bench, [self.body], "wf-glass-control")

    def glass(self) -> Glass:
        """Return the chosen glass: as it is in the arms, or as it is packaged."""
        return self._known[self.choice.value]

    @guarded
    def _chosen(self, change: Any) -> None:
        self._bench_changed()

    @guarded
    def _moved(self, change: Any) -> None:
        self.bench.update(arms=balanced(self._arms(), self.glass(), change["new"] * 1e-3))

    @guarded
    def _compensate(self, button: Any) -> None:
        arms, glass, bench = self._arms(), self.glass(), self.bench
        tracking = bench.setup.tracking_light
        lights = [bench.results.light, *([] if tracking is None else [tracking])]
        before = balance_si(arms, glass.name)
        self.button.disabled = True
        self.result.value = _boxed("working: the best thickness is looked for; this takes some seconds")
        try:
            found = compensator(_exact(arms), glass, lights, minimise=self.aim.value)
            after = before + float(f"{found.thickness.to_value(u.mm):.4f}") * 1e-3
            bench.update(arms=balanced(arms, glass, after))
            self._answer = (bench.results.packet, _outcome(glass, before, after, found))
        finally:
            self.button.disabled = False
            self._show_answer()

    def _show_answer(self) -> None:
        """Show what the search found, until light or arms change."""
        packet, words = self._answer
        self.result.value = _boxed(words) if packet is self.bench.results.packet else ""

    def _arms(self) -> ArmPair:
        if self.bench.setup.arms is None:
            raise InputError(NO_ARMS)
        return self.bench.setup.arms

    def refresh(self) -> None:
        """Show how much of the chosen glass there is; without arms, say so."""
        arms = self.bench.setup.arms
        self.text.value = _boxed(NO_ARMS if arms is None else _inventory(arms))
        wanted = (self.text,) if arms is None else self._parts
        if self.body.children != wanted:
            self.body.children = wanted
        if self.aim.options != _aims(self.bench):
            self.aim.options = _aims(self.bench)
        if arms is not None:
            self._show(arms)
        self._show_answer()

    def _show(self, arms: ArmPair) -> None:
        self._known |= _inside(arms)
        if self.choice.options != tuple(self._known):
            chosen = self.choice.value
            self.choice.options = tuple(self._known)  # moves the choice to the first
            self.choice.value = chosen
        value, slider = shown_mm(arms, self.choice.value), self.row.slider
        if abs(value) > slider.max:
            slider.max = rounded_up(1.2 * abs(value))
            slider.min = -slider.max
        self.row.value = value

    def hidden_parts(self) -> list[Any]:
        """Everything but a line of text, where there are no arms."""
        return list(self._parts)


def _inside(pair: ArmPair) -> dict[str, Glass]:
    """The glasses in the arms by name, each as it is met first."""
    found: dict[str, Glass] = {}
    for _, item in pair.signed:
        if isinstance(item.medium, Glass):
            found.setdefault(item.medium.name, item.medium)
    return found


def _outcome(glass: Glass, before: float, after: float, found: Compensation) -> str:
    at = ", after it at the one delay" if found.aim == "loss at one delay" else ""
    contrasts = ", ".join(
        f"{name} {old.value:.4f} → {new.value:.4f}" for name, old, new in zip(BANDS, found.before, found.contrasts, strict=False)
    )
    return f"{escape(glass.name)} {1e3 * before:.4f} → {1e3 * after:.4f} mm; contrast{at}: {contrasts}"


def balance_si(pair: ArmPair, name: str) -> float:
    """Length [m] of the glass of that name in the second arm less that in the first."""
    return float(sum(sign * item.length_si for sign, item in pair.signed if _is(item, name)))


def shown_mm(pair: ArmPair, name: str) -> float:
    """`balance_si` in millimetres, as shown."""
    return float(f"{1e3 * balance_si(pair, name):.8g}")


def balanced(pair: ArmPair, glass: Glass, balance: float) -> ArmPair:
    """Return the pair with `balance` [m] more of the glass in the second arm than in the first.

    Examples
    --------
    >>> import astropy.units as u
    >>> silica = Glass.named("fused silica")
    >>> pair = ArmPair(first=[Segment(medium=silica, length=8 * u.mm)], second=[Segment(medium=silica, length=6 * u.mm)])
    >>> [[item.length.to(u.mm).round(6) for item in arm] for pair in (balanced(pair, silica, -0.01),) for arm in (pair.first, pair.second)]
    [[<Quantity 10. mm>], [<Quantity 0. mm>]]
    """
    missing = balance - balance_si(pair, glass.name)
    for name, sign in (("second", 1.0), ("first", -1.0)):
        arm = list(getattr(pair, name))
        place = next((k for k, item in enumerate(arm) if _is(item, glass.name)), None)
        if place is not None and missing:
            length = max(0.0, arm[place].length_si + sign * missing)
            missing -= sign * (length - arm[place].length_si)
            arm[place] = replace(arm[place], length=float(f"{1e3 * length:.10g}") * u.mm)
            pair = replace(pair, **{name: arm})
    # less than a nanometre is what the subtraction leaves
    return with_plate(pair, glass, missing) if abs(missing) > 1e-9 else pair


def _is(item: Segment, name: str) -> bool:
    return isinstance(item.medium, Glass) and item.medium.name == name


def _exact(pair: ArmPair) -> ArmPair:
    """The pair without uncertainties, which would cost the search most of its time."""
    nothing = {"length_uncertainty": 0 * u.m, "temperature_uncertainty": 0 * u.K}
    return ArmPair(first=[replace(item, **nothing) for item in pair.first], second=[replace(item, **nothing) for item in pair.second])


def _aims(bench: Bench) -> tuple[str, ...]:
    return tuple(name for name in AIMS if bench.setup.tracking or name != "group delay spread")


def _inventory(pair: ArmPair) -> str:
    rows = [
        f"{escape(name)}: {' + '.join(_lengths(pair.first, name)) or '0'} mm in the first arm, "
        f"{' + '.join(_lengths(pair.second, name)) or '0'} mm in the second"
        for name in _inside(pair)
    ]
    return "<br>".join(rows) or "There is no glass in these arms yet: the row adds some."


def _lengths(arm: Any, name: str) -> list[str]:
    return [f"{item.length.to_value(u.mm):.4f}" for item in arm if _is(item, name) and item.length_si > 0]


def _boxed(words: str) -> str:
    return f"<div style='max-width:470px;line-height:1.4'>{words}</div>"
