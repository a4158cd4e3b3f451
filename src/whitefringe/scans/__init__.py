"""Recorded delay scans to numbers: reading, conditioning, reduction, spectrum and verdict."""

from .conditioning import EvenScan, even_scan
from .layout import ScanLayout
from .reduction import ScanCurves, ScanResult, compared, reduce_scan
from .scan import Scan, read_scan
from .spectrum import ScanLine, ScanSpectrum, spectrum_from_scan
from .thinning import thinned
from .verdict import Comparison, Outcome, Tolerances, comparisons_text, judged, overall

__all__ = [
    "Comparison",
    "EvenScan",
    "Outcome",
    "Scan",
    "ScanCurves",
    "ScanLayout",
    "ScanLine",
    "ScanResult",
    "ScanSpectrum",
    "Tolerances",
    "compared",
    "comparisons_text",
    "even_scan",
    "judged",
    "overall",
    "read_scan",
    "reduce_scan",
    "spectrum_from_scan",
    "thinned",
]
