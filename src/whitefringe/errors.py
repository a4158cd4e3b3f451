"""The error tree: every error raised on purpose is a `WhitefringeError`; warnings have their own tree."""

from __future__ import annotations


class WhitefringeError(Exception):
    """Base of every error that whitefringe raises on purpose."""


class InputError(WhitefringeError, ValueError):
    """An argument has a value that cannot be used."""


class UnitsError(InputError):
    """A dimensional argument came without a unit, or with the wrong one."""


class FileContentError(InputError):
    """A user's file cannot be read as what it should be; the message names file, row and column."""


class SetupError(InputError):
    """A setup file has a wrong or missing entry; the message carries its key path."""


class UndefinedWidthError(WhitefringeError, ValueError):
    """The width that was asked for does not exist for this light."""


class ScanError(WhitefringeError, ValueError):
    """A scan cannot be reduced to numbers that deserve an uncertainty."""


class ScanLayoutError(ScanError):
    """The layout and the recorded columns do not fit each other."""


class TooFewSamplesError(ScanError):
    """The scan is too coarse or too short for its fringes."""


class SaturatedError(ScanError):
    """Samples at the top of the detector's range carry no information."""


class ConstantSignalError(ScanError):
    """The signal does not change at all."""


class PacketCutOffError(ScanError):
    """The packet runs over an end of the scan."""


class ReferenceLostError(ScanError):
    """The reference channel's fringes fade, so the path cannot be followed."""


class NoFringeError(ScanError):
    """No fringe stands above the noise.

    Parameters
    ----------
    message : str
    upper_limit : float
        Contrast that a packet in this scan may have had at most, at `confidence`.
    confidence : float
    """

    def __init__(self, message: str, *, upper_limit: float, confidence: float = 0.95) -> None:
        super().__init__(message)
        self.upper_limit = upper_limit
        self.confidence = confidence


class WhitefringeWarning(UserWarning):
    """Base of every warning: the numbers hold, but under a condition that the reader must know."""


class CurveEndsWarning(WhitefringeWarning):
    """A filter curve does not fall to near zero at its ends, so light may be missing."""


class ResolutionWarning(WhitefringeWarning):
    """A spectral grid or a line is too coarse for what is asked of it."""
