"""The command line: ``whitefringe measure``, ``predict``, ``light``, ``track`` and ``demo``.

Exit status: 0 within tolerance, 1 outside, 2 bad usage or input, 3 undecided or not measured.
"""

from __future__ import annotations

import argparse
import io
import json
import sys
import traceback
import warnings
from collections.abc import Sequence
from typing import Any

from rich.console import Console
from rich.table import Table
from rich.text import Text

from . import __version__
from .errors import InputError, NoFringeError, ScanError, ScanLayoutError, UndefinedWidthError, WhitefringeError, WhitefringeWarning
from .results import Measured

EXIT = {"inside": 0, "outside": 1, "undecided": 3, "not measured": 3}
BAD_INPUT = 2
NOT_MEASURED = 3
MOST_PACKETS = 20
STYLES = {"inside": "green", "outside": "bold red", "undecided": "yellow", "not measured": "yellow"}


def main(arguments: Sequence[str] | None = None) -> int:
    """Run a command and return its exit status."""
    options = _parser().parse_args(arguments)
    for stream in (sys.stdout, sys.stderr):
        # a terminal that cannot show a sign shows another instead of stopping
        if isinstance(stream, io.TextIOWrapper):
            stream.reconfigure(errors="replace")
    err = Console(stderr=True, markup=False, emoji=False, highlight=False)
    with warnings.catch_warnings(record=True) as caught:
        warnings.simplefilter("always", WhitefringeWarning)
        try:
            status = int(options.run(options))
        except WhitefringeError as error:
            unmeasured = isinstance(error, (ScanError, UndefinedWidthError)) and not isinstance(error, ScanLayoutError)
            status = _refuse(options, error, NOT_MEASURED if unmeasured else BAD_INPUT, err)
        except OSError as error:
            status = _refuse(options, error, BAD_INPUT, err)
        except Exception as error:  # status 1 means "outside", so a fault of ours must not end with it
            err.print(traceback.format_exc(), soft_wrap=True)
            status = _refuse(options, error, BAD_INPUT, err)
    for warning in caught:
        err.print(f"note: {warning.message}", style="yellow", soft_wrap=True)
    return status


def _refuse(options: argparse.Namespace, error: Exception, status: int, err: Console) -> int:
    if getattr(options, "json", False):
        verdict = "not measured" if status == NOT_MEASURED else "bad input"
        answer: dict[str, Any] = {"verdict": verdict, "error": type(error).__name__, "reason": str(error)}
        if isinstance(error, NoFringeError):
            answer |= {"upper_limit": error.upper_limit, "confidence": error.confidence}
        print(json.dumps(answer, indent=2))
    word = "not measured" if status == NOT_MEASURED else "error"
    err.print(f"{word}: {error}", style="red", soft_wrap=True)
    return status


def _parser() -> argparse.ArgumentParser:
    parser = argparse.ArgumentParser(
        prog="whitefringe",
        description="Predict fringe packets and read recorded delay scans.",
        epilog="Exit status: 0 within tolerance, 1 outside, 2 bad usage or input, 3 undecided or not measured.",
    )
    parser.add_argument("--version", action="version", version=f"whitefringe {__version__}")
    commands = parser.add_subparsers(required=True, metavar="COMMAND")
    measure = commands.add_parser("measure", help="reduce a recorded scan and compare it with the prediction")
    measure.add_argument("scan", metavar="SCAN", help="recorded scan: ECSV, CSV, FITS table or columns of numbers")
    measure.set_defaults(run=_measure)
    predict = commands.add_parser("predict", help="print the numbers of the packet that the setup predicts")
    predict.set_defaults(run=_predict)
    light = commands.add_parser("light", help="list what is known of the light: measures, coherence lengths, false packets")
    light.add_argument("--range", metavar="LENGTH", help='search false packets up to this path difference, such as "1 m"')
    light.add_argument("--above", metavar="CONTRAST", type=float, default=0.05, help="least height of a false packet (0.05)")
    light.add_argument("--plot", metavar="FILE", help="draw spectrum and packet to a .png, .svg or .pdf file")
    light.set_defaults(run=_light)
    track = commands.add_parser("track", help="write the night's table of path differences, and print when what can be observed")
    track.add_argument("--date", metavar="D", help="date on whose evening the night begins, such as 2026-12-01 (by default the setup's)")
    track.add_argument("--out", metavar="FILE", help="table to write: .ecsv or .fits (by default track_D.ecsv here)")
    track.add_argument("--overwrite", action="store_true", help="replace a table that exists")
    track.set_defaults(run=_track)
    for command in (measure, predict, light, track):
        command.add_argument("--setup", metavar="FILE", required=True, help="setup file (TOML)")
        command.add_argument("--json", action="store_true", help="print JSON for machines")
    demo = commands.add_parser("demo", help="write the invented Larkmoor bench: setup, filter curve and scans")
    demo.add_argument("folder", metavar="FOLDER", help="an existing folder")
    demo.add_argument("--overwrite", action="store_true", help="replace files that exist")
    demo.set_defaults(run=_demo)
    return parser


def _measure(options: argparse.Namespace) -> int:
    from .scans import read_scan, reduce_scan
    from .setup import Setup

    setup = Setup.read(options.setup)
    scan = read_scan(options.scan, setup.layout)
    result = reduce_scan(
        scan,
        setup.light,
        definition=setup.definition,
        tolerances=setup.tolerances,
        expected_contrast=setup.expected_contrast,
    )
    verdict = str(result.verdict)
    if options.json:
        print(json.dumps(_measure_json(scan, setup, result), indent=2))
    else:
        console = Console(markup=False, emoji=False, highlight=False)
        console.print(_results_table(f"{scan.name} with {setup.name}", result.rows))
        console.print(_comparison_table(result.comparisons))
        for note in result.notes:
            console.print(f"note: {note}", soft_wrap=True)
        _print_caution(console, setup)
        console.print("verdict:", Text(verdict, style=STYLES[verdict]))
    return EXIT[verdict]


def _predict(options: argparse.Namespace) -> int:
    from .fringes import predict_packet
    from .setup import Setup, caution_of

    setup = Setup.read(options.setup)
    prediction = predict_packet(setup.light, setup.definition)
    arms, flags = _through_arms(setup)
    if options.json:
        numbers = {name: _json_of(value) for name, value in prediction.rows}
        answer: dict[str, Any] = {"setup": setup.name, "prediction": numbers, "caution": caution_of(setup)}
        if arms:
            answer |= {"arms": {name: _json_of(value) for name, value in arms}, "flags": flags}
        print(json.dumps(answer, indent=2))
    else:
        console = Console(markup=False, emoji=False, highlight=False)
        what = "predicted packet of equal arms" if arms else "predicted packet"
        console.print(_results_table(f"{what}: {setup.name}", prediction.rows))
        if arms:
            console.print(_results_table("with what the arms do to it", arms))
        for flag in flags:
            console.print(f"note: {flag}", soft_wrap=True)
        _print_caution(console, setup)
    return 0


def _through_arms(setup: Any) -> tuple[list[tuple[str, Measured | str]], list[str]]:
    """Rows of the dispersed packet and of the offset from the tracking band, and flags; nothing where the setup has no arms."""
    if setup.arms is None:
        return [], []
    from .media import DispersedPacket, band_offset

    packet = DispersedPacket(pair=setup.arms, light=setup.light, air=setup.air_uncertainty)
    rows, flags = list(packet.rows), list(packet.flags)
    if setup.tracking_light is not None:
        found = band_offset(setup.arms, setup.tracking_light, setup.light, air=setup.air_uncertainty)
        rows += [("offset from tracking band", found.offset), *found.rows[1:]]
        flags = list(dict.fromkeys([*flags, *found.flags]))
    return rows, flags


def _light(options: argparse.Namespace) -> int:
    import astropy.units as u

    from .coherence import false_packets
    from .fringes import describe_light
    from .setup import Setup, caution_of

    setup = Setup.read(options.setup)
    rows = describe_light(setup.light, setup.definition)
    reach = _length(options.range) if options.range else _usual_reach(rows) * u.um
    packets = false_packets(setup.light, reach, options.above)
    if options.plot:
        from .pictures import draw_light

        draw_light(setup, options.plot, min(float(reach.to_value(u.um)), _usual_reach(rows)))
    if options.json:
        found = [{"opd": float(p.opd.to_value(u.um)), "unit": "um", "contrast": p.height} for p in packets]
        numbers = {name: _json_of(value) for name, value in rows}
        print(json.dumps({"setup": setup.name, "light": numbers, "false_packets": found, "caution": caution_of(setup)}, indent=2))
        return 0
    console = Console(markup=False, emoji=False, highlight=False)
    console.print(_results_table(f"light: {setup.name}", rows))
    console.print(f"false packets up to {reach:.6g} either way, contrast above {options.above:g}:")
    console.print(_packets_table(packets))
    _print_caution(console, setup)
    return 0


def _track(options: argparse.Namespace) -> int:
    from .cli_track import track_night

    return track_night(options)


def _print_caution(console: Console, setup: Any) -> None:
    from .setup import caution_of

    if caution_of(setup):
        console.print(Text(caution_of(setup), style="bold yellow"), soft_wrap=True)


def _length(text: str) -> Any:
    import astropy.units as u

    try:
        return u.Quantity(text).to(u.um)
    except (TypeError, ValueError):
        raise InputError(f'--range must be a length such as "1 m"; got {text!r}') from None


def _usual_reach(rows: Sequence[tuple[str, Measured | str]]) -> float:
    """Five packet widths [um]; for light that has none, 1 mm."""
    width = dict(rows)["packet width"]
    return 1000.0 if isinstance(width, str) else 5 * float(width.value.value)


def _packets_table(packets: Sequence[Any]) -> Table:
    table = Table()
    table.add_column("path difference", justify="right")
    table.add_column("contrast", justify="right")
    for packet in sorted(packets, key=lambda packet: (-round(packet.height, 6), packet.opd))[:MOST_PACKETS]:
        table.add_row(f"{packet.opd:.6g}", f"{packet.height:.4f}")
    if len(packets) > MOST_PACKETS:
        table.caption = f"the {MOST_PACKETS} highest of {len(packets)}; --json lists all"
    return table


def _demo(options: argparse.Namespace) -> int:
    from .demo import write_bench

    for path in write_bench(options.folder, overwrite=options.overwrite):
        print(path)
    return 0


def _results_table(title: str, rows: Sequence[tuple[str, Measured | str]]) -> Table:
    table = Table(title=Text(title), title_justify="left")
    table.add_column("quantity", no_wrap=True)
    table.add_column("value", justify="right", no_wrap=True)
    table.add_column("definition")
    for name, value in rows:
        if isinstance(value, Measured):
            table.add_row(*(Text(cell) for cell in (name, value.text, value.definition)))
        else:
            table.add_row(*(Text(cell) for cell in (name, "none", value)))
    return table


def _comparison_table(comparisons: Sequence[Any]) -> Table:
    table = Table(title="measured over predicted", title_justify="left")
    for column in ("quantity", "predicted", "ratio", "tolerance", "outcome"):
        table.add_column(column, no_wrap=column != "outcome")
    for item in comparisons:
        limits = "not set" if item.tolerance is None else f"{item.tolerance[0]:g} to {item.tolerance[1]:g}"
        ratio = item.ratio.text if item.ratio is not None else "none"
        outcome = "not judged" if item.outcome is None else str(item.outcome)
        shown = Text(outcome, style=STYLES.get(outcome, "dim")).append(f": {item.reason}" if item.reason else "")
        table.add_row(item.name, item.predicted.text, ratio, limits, shown)
    return table


def _measure_json(scan: Any, setup: Any, result: Any) -> dict[str, Any]:
    from .setup import caution_of

    comparisons = [
        {
            "name": item.name,
            "predicted": _json_of(item.predicted),
            "ratio": None if item.ratio is None else _json_of(item.ratio),
            "tolerance": item.tolerance,
            "outcome": None if item.outcome is None else str(item.outcome),
            "reason": item.reason,
        }
        for item in result.comparisons
    ]
    return {
        "scan": dict(scan.provenance),
        "setup": setup.origin,
        "whitefringe": __version__,
        "results": {name: _json_of(value) for name, value in result.rows},
        "signal_to_noise": result.signal_to_noise,
        "samples_per_fringe": result.samples_per_fringe,
        "comparisons": comparisons,
        "notes": list(result.notes),
        "caution": caution_of(setup),
        "verdict": str(result.verdict),
    }


def _json_of(value: Measured | str) -> dict[str, Any]:
    if isinstance(value, str):
        return {"value": None, "reason": value}
    return {
        "value": float(value.value.value),
        "uncertainty": None if value.uncertainty is None else float(value.uncertainty.value),
        "unit": value.unit.to_string(),
        "definition": value.definition,
        "method": value.method,
    }
